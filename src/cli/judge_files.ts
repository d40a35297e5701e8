import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import { plotsOf } from '../plots/index.js';
import type { Fault as SpecFault, SpecPlots } from '../report/index.js';
import { formatSpecError } from '../spec/index.js';
import type { Spec } from '../spec/spec.js';
import { type JudgedSpec, judgeSpec } from '../verdict/judge_spec.js';
import type { FinishedRun, SpecRun } from '../verdict/run.js';
import { type BuildOptions, readBuild, valuesOf } from './read_build.js';
import { readSpec, shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';
import { version } from './version.js';

/** What is to be judged. */
export interface JudgeFilesOptions extends BuildOptions {
  /** Spec files, relative to the working folder; every one below it where there are none. */
  specs: readonly string[];
}

/** What judging gave: a run of all specs that could be judged, and why the others could not. */
export interface JudgedFiles {
  run: FinishedRun;
  faults: SpecFault[];
  /** What a report draws of each spec of the run, worked out when it is asked for. */
  plots: () => SpecPlots[];
}

/** One judged build of a spec. */
interface JudgedBuild {
  run: SpecRun;
  plots: () => SpecPlots;
}

/**
 * Judges specs against their builds, one after another.
 * @throws {Fault} where there is no spec at all.
 */
export async function judgeFiles(cwd: string, options: JudgeFilesOptions): Promise<JudgedFiles> {
  const files = options.specs.length > 0 ? options.specs : await specsBelow(cwd);
  const judged: JudgedBuild[] = [];
  const faults: SpecFault[] = [];
  for (const file of files) {
    try {
      const spec = await readSpec(cwd, file);
      judged.push(await judgeBuild(cwd, spec, options));
    } catch (error) {
      if (!(error instanceof Fault)) throw error;
      faults.push({ specFile: shownPath(cwd, file), messages: error.lines });
    }
  }
  return {
    run: { version, specs: judged.map(({ run }) => run) },
    faults,
    plots: () => judged.map(({ plots }) => plots()),
  };
}

async function judgeBuild(cwd: string, spec: Spec, options: BuildOptions): Promise<JudgedBuild> {
  const build = await readBuild(cwd, spec, options);
  const coefficients = valuesOf(build);
  const started = performance.now();
  const judged = await judgeWithFaults(spec, coefficients);
  const run: SpecRun = {
    file: spec.file,
    loop: spec.loop,
    seed: spec.perturbation.seed,
    confidence: spec.perturbation.confidence,
    provenance: build?.provenance,
    coefficients: build?.coefficients ?? [],
    scenarios: spec.scenarios.map(({ name, lasts }) => ({ name, lasts })),
    merge: spec.merge && `the latched reference ${spec.merge.reference} is not compared yet`,
    seconds: (performance.now() - started) / 1000,
    ...judged,
  };
  return { run, plots: () => plotsOf(spec, coefficients, judged) };
}

/** @throws {Fault} where the build's numbers do not fit the spec. */
async function judgeWithFaults(spec: Spec, coefficients: CoefficientValues): Promise<JudgedSpec> {
  try {
    return await judgeSpec(spec, coefficients);
  } catch (error) {
    if (error instanceof LoopError) throw new Fault([formatSpecError(error)]);
    throw error;
  }
}

/** @throws {Fault} when there is none: a gate that judges nothing must not pass. */
async function specsBelow(cwd: string): Promise<string[]> {
  const entries = await readdir(cwd, { recursive: true, withFileTypes: true });
  const found = entries
    .filter((entry) => entry.isFile() && entry.name.endsWith('.pawl.yaml'))
    .map((entry) => shownPath(cwd, join(entry.parentPath, entry.name)))
    .filter((path) => !path.split('/').includes('node_modules'))
    .sort();
  if (found.length === 0) throw new Fault(['no *.pawl.yaml was found below this folder; name a spec']);
  return found;
}
