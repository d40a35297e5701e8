import { vocabulary } from '../../src/cli/vocabulary.js';
import { loadSpec } from '../../src/spec/index.js';
import type { Spec } from '../../src/spec/spec.js';

/**
 * A checked spec from the text of its sections.
 * @throws Error with all errors of the spec.
 */
export function specOf(sections: string): Spec {
  const text = `pawl: 1\nloop: A loop under test\n${sections}`;
  const loaded = loadSpec(text, 'test.pawl.yaml', vocabulary);
  if (loaded.kind === 'spec') return loaded.spec;
  throw new Error(
    loaded.errors.map(({ place, message }) => `${place.line}:${place.column} ${message}`).join('\n'),
  );
}
