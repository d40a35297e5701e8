import { appendFile } from 'node:fs/promises';
import { resolve } from 'node:path';
import { annotationLines } from '../report/annotations.js';
import { markdownSummary } from '../report/markdown.js';
import type { JudgedFiles } from './judge_files.js';
import { shownPath } from './read_spec.js';
import type { Surroundings } from './surroundings.js';

/**
 * Where a job of GitHub Actions runs: annotations on the lines of the specs, and the summary on the job's page. Paths in
 * annotations are relative to the repository, whatever folder the command runs in.
 */
export async function tellGitHub(judged: JudgedFiles, around: Surroundings): Promise<void> {
  const { GITHUB_ACTIONS, GITHUB_STEP_SUMMARY, GITHUB_WORKSPACE } = around.environment;
  if (GITHUB_ACTIONS === 'true') {
    const { run, faults } = inRepository(judged, around.cwd, GITHUB_WORKSPACE ?? around.cwd);
    around.print(annotationLines(run, faults));
  }
  if (GITHUB_STEP_SUMMARY) {
    await appendFile(
      resolve(around.cwd, GITHUB_STEP_SUMMARY),
      `${markdownSummary(judged.run, judged.faults)}\n`,
    );
  }
}

/** The run with the specs' paths as the repository has them. */
function inRepository(
  { run, faults }: JudgedFiles,
  cwd: string,
  root: string,
): Pick<JudgedFiles, 'run' | 'faults'> {
  const moved = (path: string): string => shownPath(root, resolve(cwd, path));
  const specs = run.specs.map((spec) => ({
    ...spec,
    file: moved(spec.file),
    requirements: spec.requirements.map((one) => ({
      ...one,
      place: { ...one.place, file: moved(one.place.file) },
    })),
    coefficients: spec.coefficients.map((one) =>
      one.source ? { ...one, source: { ...one.source, file: moved(one.source.file) } } : one,
    ),
  }));
  return {
    run: { ...run, specs },
    faults: faults.map(({ specFile, messages }) => ({
      specFile: moved(specFile),
      messages: messages.map((message) =>
        message.startsWith(`${specFile}:`) ? moved(specFile) + message.slice(specFile.length) : message,
      ),
    })),
  };
}
