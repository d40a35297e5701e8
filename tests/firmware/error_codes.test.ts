import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { expect, test } from 'vitest';

/** The codes of errors are a closed list: each is thrown somewhere, and some test brings it about or names it. */
const sources = fileURLToPath(new URL('../../src/firmware/', import.meta.url));
const tests = fileURLToPath(new URL('./', import.meta.url));
const textOf = (folder: string, leaveOut: string) =>
  readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.ts') && !name.endsWith(leaveOut))
    .map((name) => readFileSync(join(folder, name), 'utf8'))
    .join('\n');

const declaration = readFileSync(join(sources, 'failure.ts'), 'utf8');
const codes = [...(/FirmwareErrorCode =([^;]*);/.exec(declaration)?.[1] ?? '').matchAll(/'(\w+)'/g)].map(
  ([, code]) => code,
);
const thrown = textOf(sources, 'failure.ts');
const tried = textOf(tests, 'error_codes.test.ts');

test('there are codes', () => {
  expect(codes.length).toBeGreaterThan(15);
});

test.each(codes)('%s is thrown, and tested', (code) => {
  expect(thrown).toContain(`'${code}'`);
  expect(tried).toContain(`'${code}'`);
});
