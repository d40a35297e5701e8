import { mkdir, readFile, stat, writeFile } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { z } from 'zod';
import { expandLoop } from '../loop/expand.js';
import type { CoefficientValues } from '../loop/parts.js';
import { ScenarioTraces } from '../plots/scenario_traces.js';
import { replayText, tracesInCsv } from '../report/replay_text.js';
import { specOfBuild } from '../spec/for_builds.js';
import type { Requirement, Spec, Unit } from '../spec/spec.js';
import { judge } from '../verdict/judge.js';
import { parameterValues } from '../verdict/parameter_values.js';
import { PlantMeasurer } from '../verdict/plant_answers.js';
import { readLatched, setupOf } from './latched_reference.js';
import { nearestOf } from './nearest_word.js';
import { readBuild, valuesOf } from './read_build.js';
import { readSpec, shownPath } from './read_spec.js';
import { saveCounterexample } from './saved_counterexamples.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';

/** Which counterexample of which report, and what to do with it. */
export interface ReplayOptions {
  /** A run.json, or the folder that holds it. */
  report: string;
  requirement: string;
  spec: string | undefined;
  /** Of several builds in one spec the one to run. */
  build: string | undefined;
  image: string | undefined;
  out: string | undefined;
  keep: boolean;
}

const plant = z.record(z.string(), z.number());
const requirementShape = z.object({
  name: z.string(),
  plant,
  shrunk: z.object({ plant }).optional(),
});
const shape = z.object({
  specs: z.array(
    z.object({
      file: z.string(),
      build: z.string().optional(),
      halvings: z.number(),
      provenance: z.object({ image: z.string(), sha256: z.string() }).nullable(),
      requirements: z.array(requirementShape),
    }),
  ),
});
type Reported = z.infer<typeof shape>['specs'][number];

/** Points of a replayed trace. */
const instants = 4000;

/**
 * Runs the counterexample of one requirement again, alone: its result, its traces as CSV, and a plot.
 * @throws {Fault} where the report, the requirement, the spec or the image cannot be read.
 */
export async function replay(options: ReplayOptions, around: Surroundings): Promise<ExitStatus> {
  const { cwd } = around;
  const { reported, entry } = find(await readReport(cwd, options.report), options);
  const spec = buildOf(await readSpec(cwd, reported.file), reported.build);
  const index = spec.requirements.findIndex(({ name }) => name === options.requirement);
  if (index < 0) {
    throw new Fault([
      `${spec.file}: has no requirement '${options.requirement}' any more; run 'pawl check' again`,
    ]);
  }
  const { interrupted } = around;
  const choice = { image: imageOf(spec, reported, options), skipBuild: true, interrupted };
  const build = await readBuild(cwd, spec, choice);
  const isSame = build?.provenance.sha256 === reported.provenance?.sha256;
  const values = plantOf(spec, entry.shrunk?.plant ?? entry.plant);
  const coefficients = valuesOf(build);
  const setup = setupOf({ spec, coefficients, latched: await readLatched(cwd, spec, reported.build) });
  const task = { plants: [values], halvings: reported.halvings, settle: true, wanted: [index] };
  const [{ results, halvings }] = new PlantMeasurer(setup).answers(task);
  const requirement = spec.requirements[index];
  const judgement = judge(requirement, results[0]);
  const traced = traces(spec, coefficients, requirement, values, halvings);
  const csv = traced && (await writeCsv(options, around, traced));
  const kept =
    options.keep && judgement.kind === 'broken'
      ? await saveCounterexample(cwd, spec, { requirement: requirement.name, plant: namesTo(spec, values) })
      : undefined;
  around.print(
    replayText(
      {
        requirement,
        kind: judgement.kind,
        result: results[0],
        parameters: parameterValues(spec.parameters, values),
        isShrunk: entry.shrunk !== undefined,
        isSameImage: isSame,
        traces: traced,
        files: { csv, kept },
      },
      around,
    ),
  );
  return judgement.kind === 'met' ? 0 : 1;
}

/** @throws {Fault} where the spec has no build of this name any more. */
function buildOf(spec: Spec, name: string | undefined): Spec {
  const found = specOfBuild(spec, name);
  if (found) return found;
  throw new Fault([`${spec.file}: has no build '${name}' any more; run 'pawl check' again`]);
}

/** The image to run: none where the spec has its numbers from a command, which is run again. */
function imageOf({ firmware }: Spec, { provenance }: Reported, { image }: ReplayOptions): string | undefined {
  if (image !== undefined || !firmware || firmware.numbers.kind === 'command') return image;
  return provenance?.image;
}

async function readReport(cwd: string, report: string): Promise<Reported[]> {
  const given = resolve(cwd, report);
  const isFolder = await stat(given).then(
    (found) => found.isDirectory(),
    () => false,
  );
  const path = isFolder ? join(given, 'run.json') : given;
  let json: unknown;
  try {
    json = JSON.parse(await readFile(path, 'utf8'));
  } catch (error) {
    const missing = (error as NodeJS.ErrnoException).code === 'ENOENT';
    const why = missing ? 'there is no such file' : `cannot be read: ${(error as Error).message}`;
    throw new Fault([
      `${shownPath(cwd, path)}: ${why}; expected the run.json that 'pawl check --out DIR' writes`,
    ]);
  }
  const parsed = shape.safeParse(json);
  if (parsed.success) return parsed.data.specs;
  const [{ path: at, message }] = parsed.error.issues;
  throw new Fault([
    `${shownPath(cwd, path)}: is no report of this version of pawl: ${at.join('.')}: ${message}; run 'pawl check --out DIR' again`,
  ]);
}

function find(specs: Reported[], { requirement, spec, build }: ReplayOptions) {
  const files = specs.map(({ file }) => file);
  if (spec !== undefined && !files.includes(spec))
    throw new Fault([`the report holds no spec '${spec}'${nearestOf(spec, files)}`]);
  const ofSpec = specs.filter(({ file }) => spec === undefined || file === spec);
  const builds = ofSpec.flatMap((one) => one.build ?? []);
  if (build !== undefined && !builds.includes(build))
    throw new Fault([`the report holds no build '${build}'${nearestOf(build, builds)}`]);
  const among = ofSpec.filter((one) => build === undefined || one.build === build);
  const found = among.flatMap((reported) =>
    reported.requirements.filter(({ name }) => name === requirement).map((entry) => ({ reported, entry })),
  );
  if (found.length === 1) return found[0];
  if (found.length > 1) throw new Fault([severalHave(requirement, found)]);
  const names = among.flatMap(({ requirements }) => requirements.map(({ name }) => name));
  throw new Fault([`the report holds no requirement '${requirement}'${nearestOf(requirement, names)}`]);
}

function severalHave(requirement: string, found: readonly { reported: Reported }[]): string {
  const files = new Set(found.map(({ reported }) => reported.file));
  if (files.size > 1)
    return `several specs have a requirement '${requirement}': ${[...files].join(', ')}; name one with --spec`;
  const builds = found.map(({ reported }) => reported.build).join(', ');
  return `several builds have the requirement '${requirement}': ${builds}; name one with --build`;
}

/** @throws {Fault} where a parameter of the spec is not in the report. */
function plantOf(spec: Spec, reported: Record<string, number>): Float64Array {
  const missing = spec.parameters.filter(({ name }) => !Object.hasOwn(reported, name));
  if (missing.length > 0) {
    throw new Fault([
      `the report gives no value for ${missing.map(({ name }) => `'${name}'`).join(', ')}: the spec has changed; run 'pawl check' again`,
    ]);
  }
  return Float64Array.from(spec.parameters, ({ name }) => reported[name]);
}

function namesTo(spec: Spec, values: Float64Array): Record<string, number> {
  return Object.fromEntries(
    spec.parameters.flatMap(({ name, derived }, i) => (derived ? [] : [[name, values[i]]])),
  );
}

/** Signals over time, SI, of the counterexample and of the nominal plant. */
interface ReplayTraces {
  times: readonly number[];
  signals: readonly { name: string; unit: Unit; values: readonly number[]; nominal: readonly number[] }[];
}

function traces(
  spec: Spec,
  coefficients: CoefficientValues,
  requirement: Requirement,
  values: Float64Array,
  halvings: number,
): ReplayTraces | undefined {
  const scenario = spec.scenarios.find(({ name }) => name === requirement.in);
  if (!scenario) return undefined;
  const units = unitsOf(spec);
  const names = [...expandLoop(spec, coefficients, { scenario }).signals.keys()].filter((name) =>
    units.has(name),
  );
  const followed = new ScenarioTraces(spec, coefficients, scenario, names, halvings, instants);
  const own = followed.of(values);
  const nominal = followed.of(Float64Array.from(spec.parameters, (parameter) => parameter.nominal));
  if (!own || !nominal) return undefined;
  return {
    times: followed.times,
    signals: names.map((name) => ({
      ...{ name, unit: units.get(name)! },
      ...{ values: own.get(name)!, nominal: nominal.get(name)! },
    })),
  };
}

function unitsOf({ inputs, plant: signals, sensors, controllers, actuators }: Spec): Map<string, Unit> {
  const all = [...inputs, ...signals, ...sensors, ...controllers.flatMap((one) => one.signals), ...actuators];
  return new Map(all.map(({ name, unit }) => [name, unit]));
}

async function writeCsv(
  { out, requirement }: ReplayOptions,
  { cwd }: Surroundings,
  traced: ReplayTraces,
): Promise<string> {
  const folder = resolve(cwd, out ?? '.');
  await mkdir(folder, { recursive: true });
  const path = join(folder, `replay-${requirement.replaceAll(/[^\w.-]+/g, '_')}.csv`);
  await writeFile(path, tracesInCsv(traced.times, traced.signals));
  return shownPath(cwd, path);
}
