import { resolve } from 'node:path';
import { LoopError } from '../loop/loop.js';
import { counted } from '../report/format_value.js';
import type { Watch } from '../verdict/crew.js';
import { type PartialRound, type Share, tryShare } from '../verdict/parts.js';
import type { CheckOptions } from './check.js';
import { eachBuild, type Target } from './each_build.js';
import { latchedSetupOf, setupOf } from './latched_reference.js';
import { digestOf, type PartTarget, writePart } from './part_file.js';
import { shownPath } from './read_spec.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';
import { version } from './version.js';

const mostParts = 10_000;

/**
 * Tries one part's share of the plants and writes what it found into the folder for reports; nothing is judged yet.
 * @throws {Fault} where the part or the folder is not given as it must be.
 */
export async function checkPart(
  share: Share,
  options: CheckOptions,
  around: Surroundings,
): Promise<ExitStatus> {
  const { part, of } = share;
  if (
    !(Number.isInteger(of) && of >= 1 && of <= mostParts && Number.isInteger(part) && part >= 1 && part <= of)
  )
    throw new Fault([
      `'--part ${part} --of ${of}' is no part: expected whole numbers such as --part 3 --of 8`,
    ]);
  if (options.out === undefined) throw new Fault(["a part needs '--out DIR', into which it is written"]);
  const { results, faults } = await eachBuild(
    around.cwd,
    options,
    around,
    async (target, watch): Promise<PartTarget> => ({
      file: target.spec.file,
      build: target.name,
      specDigest: digestOf(target),
      read: target.build,
      rounds: await tryShare(setupOf(target), target.saved, share, watch),
      latchedRounds: await latchedShare(target, share, watch),
    }),
  );
  if (faults.length > 0) {
    for (const { messages } of faults) for (const line of messages) around.complain(`${line}\n`);
    return 2;
  }
  const path = await writePart(resolve(around.cwd, options.out), {
    pawl: version,
    ...share,
    targets: results,
  });
  const plants = results
    .flatMap(({ rounds, latchedRounds = [] }) => [...rounds, ...latchedRounds])
    .reduce((sum, { answers }) => sum + answers.length, 0);
  around.print(
    `part ${part} of ${of}: ${counted(plants, 'plant')} measured, nothing judged yet; 'pawl join' judges all parts together\n${shownPath(around.cwd, path)}\n`,
  );
  return 0;
}

/** Whoever joins the parts finds that the latched coefficients cannot be run, and says why. */
async function latchedShare(target: Target, share: Share, watch: Watch): Promise<PartialRound[] | undefined> {
  const setup = latchedSetupOf(target);
  try {
    return setup && (await tryShare(setup, target.saved, share, watch));
  } catch (error) {
    if (error instanceof LoopError) return undefined;
    throw error;
  }
}
