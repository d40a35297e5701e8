import type { Fault as SpecFault } from '../report/index.js';
import { specOfBuild } from '../spec/for_builds.js';
import { JoiningCrew, PartsDisagree } from '../verdict/parts.js';
import type { PlantSetup } from '../verdict/plant_answers.js';
import { report, statusOf } from './check.js';
import type { Target } from './each_build.js';
import { type JudgedTarget, judgedFiles, judgeTarget } from './judge_files.js';
import { readLatched, setupOf } from './latched_reference.js';
import { digestOf, type PartFile, type PartTarget, readPart } from './part_file.js';
import { valuesOf } from './read_build.js';
import { readSpec } from './read_spec.js';
import { savedPlants } from './saved_counterexamples.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';
import { version } from './version.js';

/**
 * Joins what all parts of a run have measured, judges it as one machine would have, and reports.
 * @throws {Fault} where a part is missing or there twice, or parts are of other versions, specs or images.
 */
export async function join(
  paths: readonly string[],
  out: string | undefined,
  around: Surroundings,
): Promise<ExitStatus> {
  const parts = await readParts(paths, around.cwd);
  const results: JudgedTarget[] = [];
  const faults: SpecFault[] = [];
  for (const [at, target] of parts[0].targets.entries()) {
    try {
      results.push(
        await joinTarget(
          target,
          parts.map(({ targets }) => targets[at]),
          around,
        ),
      );
    } catch (error) {
      if (!(error instanceof PartsDisagree)) throw error;
      faults.push({ specFile: target.file, messages: [`${target.file}: ${error.message}`] });
    }
  }
  const judged = judgedFiles(results, faults);
  await report(judged, out, around);
  return statusOf(judged);
}

async function joinTarget(
  { file, build: name, read, specDigest }: PartTarget,
  parts: readonly PartTarget[],
  around: Surroundings,
): Promise<JudgedTarget> {
  const whole = await readSpec(around.cwd, file);
  const spec = specOfBuild(whole, name) ?? whole;
  const latched = await readLatched(around.cwd, spec, name);
  const saved = [...(await savedPlants(around.cwd, spec)), ...(latched?.plants ?? [])];
  if (digestOf({ spec, saved, latched }) !== specDigest)
    throw new Fault([
      `${file}: is not the spec that the parts were tried with, or its latched reference is not; check out the same commit`,
    ]);
  const label = name === undefined ? spec.loop : `${spec.loop}, build ${name}`;
  const coefficients = valuesOf(read);
  const target: Target = { spec, name, label, build: read, coefficients, saved, latched };
  const rounds = parts.map((part) => part.rounds);
  const watch = { signal: around.interrupted };
  const crew = new JoiningCrew(setupOf(target), rounds, watch);
  const latchedCrew = (setup: PlantSetup) =>
    new JoiningCrew(
      setup,
      parts.map(({ latchedRounds = [] }) => latchedRounds),
      watch,
    );
  return judgeTarget(target, { crew, latchedCrew, watch }, around.today);
}

async function readParts(paths: readonly string[], cwd: string): Promise<PartFile[]> {
  if (paths.length === 0) throw new Fault(["'pawl join' takes the files of all parts, but got none"]);
  const parts = await Promise.all(paths.map((path) => readPart(cwd, path)));
  const lines = [...faultsOfCount(parts), ...faultsOfKind(parts)];
  if (lines.length > 0) throw new Fault(lines);
  return parts.sort((a, b) => a.part - b.part);
}

/** Every part from 1 on must be there, and once. */
function faultsOfCount(parts: readonly PartFile[]): string[] {
  const { of } = parts[0];
  const strange = parts.find((one) => one.of !== of);
  if (strange)
    return [`part ${strange.part} is one of ${strange.of}, but part ${parts[0].part} one of ${of}`];
  return Array.from({ length: of }, (_, at) => at + 1).flatMap((number) => {
    const count = parts.filter(({ part }) => part === number).length;
    if (count === 1) return [];
    return [
      count === 0 ? `part ${number} of ${of} is missing` : `part ${number} of ${of} is there ${count} times`,
    ];
  });
}

/** All must come from this version, the same specs and the same images. */
function faultsOfKind(parts: readonly PartFile[]): string[] {
  const [first] = parts;
  return parts.flatMap((part) => {
    if (part.pawl !== version)
      return [`part ${part.part} was made by pawl ${part.pawl}, but this is ${version}`];
    if (part.targets.length !== first.targets.length)
      return [
        `part ${part.part} has ${part.targets.length} specs, part ${first.part} has ${first.targets.length}`,
      ];
    return part.targets.flatMap((target, at) =>
      differences(part.part, target, first.part, first.targets[at]),
    );
  });
}

function differences(part: number, one: PartTarget, first: number, other: PartTarget): string[] {
  if (one.file !== other.file || one.build !== other.build || one.specDigest !== other.specDigest)
    return [`part ${part} was tried with another spec than part ${first}: ${one.file}`];
  const [own, expected] = [one, other].map(({ read }) => read?.provenance.sha256);
  if (own === expected) return [];
  return [`part ${part} was tried with another image of ${one.file} than part ${first}: its SHA-256 differs`];
}
