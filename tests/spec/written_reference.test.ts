import { readFileSync, writeFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { contentsOf } from './contents.js';
import { written } from './vocabulary_tables.js';

const file = new URL('../../specs/README.md', import.meta.url);

/** The reference with the parts between its marks taken from the code, and its contents from its headings. */
function withWritten(text: string): string {
  const whole = Object.entries(written()).reduce(
    (so, [name, part]) => filled(so, `${name}: written from the code`, name, part),
    text,
  );
  return filled(whole, 'contents: written from the headings', 'contents', contentsOf(whole));
}

function filled(text: string, mark: string, name: string, part: string): string {
  const [start, end] = [`<!-- ${mark} -->`, `<!-- end of ${name} -->`];
  const [before, rest] = text.split(start);
  return `${before}${start}\n\n${part.trim()}\n\n${end}${rest.split(end)[1]}`;
}

// `WRITE_REFERENCE=1 npx vitest run tests/spec/written_reference.test.ts` writes them anew.
test('the contents, tables and examples of the reference are those of the code', () => {
  const text = readFileSync(file, 'utf8');
  const fresh = withWritten(text);
  if (process.env.WRITE_REFERENCE === '1') writeFileSync(file, fresh);
  else expect(text).toBe(fresh);
});
