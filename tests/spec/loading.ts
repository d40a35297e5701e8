import { formatSpecError, loadSpec, type Spec } from '../../src/spec/index.js';
import { heliostat } from './heliostat_example.js';
import { vocabulary } from './vocabulary.js';

/** The lines of all errors of a spec; empty where it loads. */
export function errorsOf(text: string): string[] {
  const loaded = loadSpec(text, 'a.pawl.yaml', vocabulary);
  return loaded.kind === 'spec' ? [] : loaded.errors.map(formatSpecError);
}

/** The spec of a text that must load. */
export function specOf(text: string): Spec {
  const loaded = loadSpec(text, 'a.pawl.yaml', vocabulary);
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
  return loaded.spec;
}

/** The example with some of its text replaced; each piece must occur. */
export function heliostatWith(...changes: [from: string, to: string][]): string {
  return changes.reduce((text, [from, to]) => {
    if (!text.includes(from)) throw new Error(`the example does not contain: ${from}`);
    return text.replace(from, to);
  }, heliostat);
}
