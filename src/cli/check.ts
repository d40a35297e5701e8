import { mkdir, readdir, writeFile } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { LoopError } from '../loop/loop.js';
import { junitOf, runJson, terminalReport } from '../report/index.js';
import { formatSpecError } from '../spec/index.js';
import { judgeSpec } from '../verdict/judge_spec.js';
import { allMet, type FinishedRun, type SpecRun } from '../verdict/run.js';
import { type BuildOptions, readBuild, valuesOf } from './read_build.js';
import { readSpec, shownPath } from './read_spec.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';
import { version } from './version.js';

export interface CheckOptions extends BuildOptions {
  specs: string[];
  /** Folder for the reports, relative to the working folder. */
  out: string | undefined;
}

/** A spec that could not be judged, and all the reasons. */
interface SpecFault {
  specFile: string;
  messages: readonly string[];
}

/** Judges specs against their builds, and reports. */
export async function check(options: CheckOptions, around: Surroundings): Promise<ExitStatus> {
  const files = options.specs.length > 0 ? options.specs : await specsBelow(around.cwd);
  const specs: SpecRun[] = [];
  const faults: SpecFault[] = [];
  for (const file of files) {
    try {
      specs.push(await checkSpec(file, options, around));
    } catch (error) {
      if (!(error instanceof Fault)) throw error;
      faults.push({ specFile: shownPath(around.cwd, file), messages: error.lines });
    }
  }
  const run: FinishedRun = { version, specs };
  if (specs.length > 0) around.print(terminalReport(run, around));
  for (const { messages } of faults) for (const line of messages) around.complain(`${line}\n`);
  if (options.out !== undefined) await writeReports(resolve(around.cwd, options.out), run, faults);
  if (faults.length > 0) return 2;
  return allMet(run) ? 0 : 1;
}

async function checkSpec(file: string, options: CheckOptions, { cwd }: Surroundings): Promise<SpecRun> {
  const spec = await readSpec(cwd, file);
  const build = await readBuild(cwd, spec, options);
  const started = performance.now();
  try {
    const judged = await judgeSpec(spec, valuesOf(build));
    return {
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

async function writeReports(folder: string, run: FinishedRun, faults: SpecFault[]): Promise<void> {
  await mkdir(folder, { recursive: true });
  await writeFile(join(folder, 'junit.xml'), junitOf(run, faults));
  await writeFile(join(folder, 'run.json'), runJson(run));
}
