import { resolve } from 'node:path';
import { statusOf } from './cli/check.js';
import { judgeFiles } from './cli/judge_files.js';
import { isoDay } from './cli/surroundings.js';
import type { Fault, SpecPlots } from './report/index.js';
import type { FinishedRun } from './verdict/run.js';

/** What `check` judges, and how. */
export interface CheckOptions {
  /** Spec files, relative to `folder`; every `*.pawl.yaml` below it where none is given. */
  specs?: readonly string[];
  /** Where paths begin; the working folder where it is not given. */
  folder?: string;
  /** Another image than the one that the specs name, relative to `folder`. */
  image?: string;
  /** Takes images as they are, without running the specs' build commands. */
  skipBuild?: boolean;
  /** The day on which waivers must still count, YYYY-MM-DD; today where it is not given. */
  today?: string;
  /** Ends the work: what is not finished is then a fault. */
  signal?: AbortSignal;
}

/** What `check` found. */
export interface CheckResult {
  /** As the command's exit status: 0 all met, 1 a requirement is not met, 2 a spec could not be run. */
  status: 0 | 1 | 2;
  run: FinishedRun;
  /** Specs that could not be run, and why: each message one line. */
  faults: readonly Fault[];
  /** What a report draws of each spec, worked out when it is asked for. */
  plots: () => SpecPlots[];
}

/**
 * Judges specs against their builds, as `pawl check` does, and prints nothing.
 * @throws Error where there is no spec at all.
 */
export async function check(options: CheckOptions = {}): Promise<CheckResult> {
  const { specs = [], folder = '.', image, skipBuild = false, today = isoDay(new Date()), signal } = options;
  const choice = { specs, image, skipBuild };
  const judged = await judgeFiles(resolve(folder), choice, today, { interrupted: signal });
  return { status: statusOf(judged), ...judged };
}
