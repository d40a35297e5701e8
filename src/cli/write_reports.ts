import { mkdir, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { drawingFiles, htmlReport, junitOf, markdownSummary, runJson } from '../report/index.js';
import type { JudgedFiles } from './judge_files.js';

/**
 * Writes `junit.xml`, `run.json`, `report.html`, `summary.md` and what draws its blocked requirements into a folder, which is
 * made where there is none.
 * @param root the folder to which paths in the files are relative.
 */
export async function writeReports(folder: string, judged: JudgedFiles, root: string): Promise<void> {
  const { run, faults, plots } = judged;
  const specs = plots();
  const drawn = drawingFiles(run, specs);
  const texts = {
    'junit.xml': junitOf(run, faults),
    'run.json': runJson(run, root),
    'summary.md': markdownSummary(run, faults, drawn),
    'report.html': htmlReport(run, { plots: { specs }, faults }),
    ...Object.fromEntries(drawn.flat().map(({ path, text }) => [path, text])),
  };
  for (const [name, text] of Object.entries(texts)) {
    const path = join(folder, name);
    await mkdir(dirname(path), { recursive: true });
    await writeFile(path, text);
  }
}
