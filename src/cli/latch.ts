import { mkdir, rename, rm, writeFile } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { referenceJson } from '../report/reference_json.js';
import { formatSpecError } from '../spec/index.js';
import { judgeSpec } from '../verdict/judge_spec.js';
import { asLatched } from '../verdict/latched/coefficient_changes.js';
import { latchObstacles, referenceOf } from '../verdict/latched/reference_of.js';
import { eachBuild, type SpecChoice, type Target } from './each_build.js';
import { specRun } from './judge_files.js';
import { referencePath } from './latched_reference.js';
import { shownPath } from './read_spec.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';
import { version } from './version.js';

/** What is latched, and why. */
export interface LatchOptions extends SpecChoice {
  reason: string | undefined;
  withUnjudged: boolean;
}

/** The text of a reference and where it goes, or why there is none. */
interface ToWrite {
  path: string;
  text: string;
  said: string;
  obstacles: string[];
}

/**
 * Judges every build of every spec and writes what it gave as its latched reference: all of them, or none where one may not
 * be latched.
 * @throws {Fault} where there is no reason.
 */
export async function latch(options: LatchOptions, around: Surroundings): Promise<ExitStatus> {
  const reason = options.reason?.trim();
  if (!reason)
    throw new Fault([
      'pawl latch needs a reason that reviewers will read: --reason "softer for the new motor"',
    ]);
  const { results, faults } = await eachBuild(around.cwd, options, around, (target, watch) =>
    toWrite(target, reason, options.withUnjudged, around, () =>
      judgeSpec(target.spec, target.coefficients, {
        ...{ watch, saved: target.saved },
        // What is latched is what changes are counted from: latching it accepts every change.
        latched: asLatched(target.coefficients),
      }),
    ),
  );
  const lines = [
    ...faults.flatMap(({ messages }) => messages),
    ...results.flatMap(({ obstacles }) => obstacles),
    ...twice(results),
  ];
  if (lines.length > 0) {
    around.complain(`nothing was latched:\n${lines.map((line) => `${line}\n`).join('')}`);
    return faults.length > 0 || twice(results).length > 0 ? 2 : 1;
  }
  for (const { path, text, said } of results) {
    await writeWhole(path, text);
    around.print(`${said}\n`);
  }
  return 0;
}

async function toWrite(
  target: Target,
  reason: string,
  withUnjudged: boolean,
  { cwd, today }: Surroundings,
  judge: () => ReturnType<typeof judgeSpec>,
): Promise<ToWrite> {
  const { spec, name, build, coefficients } = target;
  const { merge } = spec;
  if (!merge) {
    throw new Fault([
      `${spec.file}: has no merge section, which says where its latched reference is: merge: { reference: … }`,
    ]);
  }
  const judged = await judge();
  if (judged.partial) throw new Fault([`${spec.file}: interrupted before it was judged to the end`]);
  const run = specRun(target, judged, 0);
  const law = build?.law ?? [];
  const path = referencePath(cwd, spec, name);
  const counts = `${run.requirements.length} requirements and ${run.coefficients.length} coefficients`;
  return {
    path,
    text: referenceJson(referenceOf({ spec, run, coefficients, law, reason, pawl: version })),
    said: `latched ${counts} in ${shownPath(cwd, path)}`,
    obstacles: latchObstacles(spec, run, withUnjudged, today).map((message) =>
      formatSpecError({
        place: merge.place,
        message: name === undefined ? message : `build ${name}: ${message}`,
      }),
    ),
  };
}

/** Two specs must not write one file. */
function twice(results: readonly ToWrite[]): string[] {
  const paths = results.map(({ path }) => path);
  const double = results.filter(({ path }, at) => paths.indexOf(path) < at);
  return double.map(({ said }) => `another spec is already ${said}; every spec has a reference of its own`);
}

/** Writes a file so that there is the old text or the new one at any time, and never a part. */
async function writeWhole(path: string, text: string): Promise<void> {
  const beside = join(dirname(path), `.${basename(path)}.${process.pid}.part`);
  try {
    await mkdir(dirname(path), { recursive: true });
    await writeFile(beside, text);
    await rename(beside, path);
  } catch (error) {
    await rm(beside, { force: true });
    throw new Fault([`the latched reference cannot be written: ${(error as Error).message.split(',')[0]}`]);
  }
}
