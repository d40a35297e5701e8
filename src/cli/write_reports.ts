import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { htmlReport, junitOf, markdownSummary, runJson } from '../report/index.js';
import type { JudgedFiles } from './judge_files.js';

/**
 * Writes `junit.xml`, `run.json`, `report.html` and `summary.md` into a folder, which is made where there is none.
 * @param root the folder to which paths in the files are relative.
 */
export async function writeReports(folder: string, judged: JudgedFiles, root: string): Promise<void> {
  const { run, faults, plots } = judged;
  await mkdir(folder, { recursive: true });
  const texts = {
    'junit.xml': junitOf(run, faults),
    'run.json': runJson(run, root),
    'summary.md': markdownSummary(run, faults),
    'report.html': htmlReport(run, { plots: { specs: plots() }, faults }),
  };
  for (const [name, text] of Object.entries(texts)) await writeFile(join(folder, name), text);
}
