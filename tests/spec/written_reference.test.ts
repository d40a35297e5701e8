import { readFileSync, writeFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { written } from './vocabulary_tables.js';

const file = new URL('../../specs/README.md', import.meta.url);

/** The reference with the parts between its marks taken from the code. */
function withWritten(text: string): string {
  return Object.entries(written()).reduce((whole, [name, part]) => {
    const [start, end] = [`<!-- ${name}: written from the code -->`, `<!-- end of ${name} -->`];
    const [before, rest] = whole.split(start);
    return `${before}${start}\n\n${part.trim()}\n\n${end}${rest.split(end)[1]}`;
  }, text);
}

// `WRITE_REFERENCE=1 npx vitest run tests/spec/written_reference.test.ts` writes them anew.
test('the blocks, measures and shapes of the reference are those of the code', () => {
  const text = readFileSync(file, 'utf8');
  const fresh = withWritten(text);
  if (process.env.WRITE_REFERENCE === '1') writeFileSync(file, fresh);
  else expect(text).toBe(fresh);
});
