import { plotsOf } from '../plots/index.js';
import type { Fault as SpecFault, SpecPlots } from '../report/index.js';
import { notCompared } from '../verdict/interrupted.js';
import { type JudgedSpec, type JudgeOptions, judgeSpec } from '../verdict/judge_spec.js';
import type { FinishedRun, SpecRun } from '../verdict/run.js';
import { eachBuild, type SpecChoice, type Target, type Telling } from './each_build.js';
import { heldAgainstLatched, setupOf } from './latched_reference.js';
import { version } from './version.js';

/** What judging gave: a run of all specs that could be judged, and why the others could not. */
export interface JudgedFiles {
  run: FinishedRun;
  faults: SpecFault[];
  /** What a report draws of each spec of the run, worked out when it is asked for. */
  plots: () => SpecPlots[];
}

/** One judged build of a spec. */
export interface JudgedTarget {
  run: SpecRun;
  plots: () => SpecPlots;
}

/**
 * Judges specs against their builds and latched references, one after another.
 * @param today the day on which waivers must still count, YYYY-MM-DD.
 * @throws {Fault} where there is no spec at all.
 */
export async function judgeFiles(
  cwd: string,
  choice: SpecChoice,
  today: string,
  telling: Telling = {},
): Promise<JudgedFiles> {
  const { results, faults } = await eachBuild(cwd, choice, telling, (target, watch) =>
    judgeTarget(target, { watch }, today),
  );
  return judgedFiles(results, faults);
}

/** The whole of what was judged. */
export function judgedFiles(results: readonly JudgedTarget[], faults: SpecFault[]): JudgedFiles {
  const partial = results.filter(({ run }) => run.partial);
  return {
    run: { version, specs: results.map(({ run }) => run) },
    faults: [
      ...faults,
      ...partial.map(({ run: { file } }) => ({
        specFile: file,
        messages: [`${file}: interrupted before it was finished; no requirement of it is taken for met`],
      })),
    ],
    plots: () => results.map(({ plots }) => plots()),
  };
}

/**
 * Judges one build and holds it against its latched reference.
 * @param today the day on which waivers must still count, YYYY-MM-DD.
 * @throws {LoopError} where its numbers do not fit the spec.
 */
export async function judgeTarget(
  target: Target,
  options: JudgeOptions,
  today: string,
): Promise<JudgedTarget> {
  const { spec, coefficients, saved } = target;
  const started = performance.now();
  const { latched } = setupOf(target);
  const judged = await judgeSpec(spec, coefficients, { saved, latched, ...options });
  const held = judged.partial ? {} : await heldOrInterrupted(target, judged, today, options);
  const seconds = (performance.now() - started) / 1000;
  return {
    run: specRun(target, { ...judged, ...held }, seconds),
    plots: () =>
      plotsOf(
        spec,
        coefficients,
        { ...judged, ...held },
        {
          reference: target.latched?.reference,
          since: held.sinceLatched,
        },
      ),
  };
}

async function heldOrInterrupted(
  target: Target,
  judged: JudgedSpec,
  today: string,
  options: JudgeOptions,
): Promise<Partial<SpecRun>> {
  try {
    return await heldAgainstLatched(target, judged, today, options);
  } catch (error) {
    if (!options.watch?.signal?.aborted) throw error;
    return { requirements: judged.requirements.map(notCompared), partial: true };
  }
}

/** The run of a build, judged and perhaps held against its latched reference. */
export function specRun(
  { spec, name, label, build }: Target,
  judged: JudgedSpec & Pick<SpecRun, 'sinceLatched'>,
  seconds: number,
): SpecRun {
  return {
    file: spec.file,
    ...(name !== undefined && { build: name }),
    loop: label,
    seed: spec.perturbation.seed,
    confidence: spec.perturbation.confidence,
    provenance: build?.provenance,
    coefficients: build?.coefficients ?? [],
    scenarios: spec.scenarios.map(({ name, lasts }) => ({ name, lasts })),
    merge: undefined,
    seconds,
    ...judged,
  };
}
