import type { SpecRun } from '../verdict/run.js';
import { shellPath } from './shell_word.js';

/** The line that runs a spec again in a shell of the POSIX kind, the file quoted where it must be. */
export function runAgain(spec: Pick<SpecRun, 'file' | 'provenance'>): string {
  return `pawl check ${specAndImage(spec)}`;
}

/** What a command takes to work on the same spec and image. */
export function specAndImage({ file, provenance }: Pick<SpecRun, 'file' | 'provenance'>): string {
  const path = shellPath(file);
  if (provenance?.insteadOfSpecs) return `${path} --image ${shellPath(provenance.image)}`;
  return provenance?.buildSkipped ? `${path} --skip-build` : path;
}
