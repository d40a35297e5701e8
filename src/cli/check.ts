import { resolve } from 'node:path';
import { terminalReport } from '../report/terminal.js';
import { allMet } from '../verdict/run.js';
import type { SpecChoice } from './each_build.js';
import { type JudgedFiles, judgeFiles } from './judge_files.js';
import type { ExitStatus, Surroundings } from './surroundings.js';
import { tellGitHub } from './tell_github.js';

export interface CheckOptions extends SpecChoice {
  /** Folder for the reports, relative to the working folder. */
  out: string | undefined;
}

/** Judges specs against their builds, and reports. */
export async function check(options: CheckOptions, around: Surroundings): Promise<ExitStatus> {
  const judged = await judgeFiles(around.cwd, options, around.today, around);
  await report(judged, options.out, around);
  return statusOf(judged);
}

/** Tells of a run on the terminal, in files where a folder is named, and to the CI server. */
export async function report(
  judged: JudgedFiles,
  out: string | undefined,
  around: Surroundings,
): Promise<void> {
  const { run, faults } = judged;
  if (run.specs.length > 0) around.print(terminalReport(run, around, faults));
  for (const { messages } of faults) for (const line of messages) around.complain(`${line}\n`);
  if (out !== undefined) {
    // What writes them takes long to load.
    const { writeReports } = await import('./write_reports.js');
    await writeReports(resolve(around.cwd, out), judged, around.cwd);
  }
  await tellGitHub(judged, around);
}

/** 2 where a spec could not be run, 1 where a requirement is not met, else 0. */
export function statusOf({ run, faults }: JudgedFiles): ExitStatus {
  if (faults.length > 0) return 2;
  return allMet(run) ? 0 : 1;
}
