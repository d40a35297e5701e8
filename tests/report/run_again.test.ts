import { execFileSync } from 'node:child_process';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { runAgain } from '../../src/report/run_again.js';
import { harmful, hostileNames } from './hostile.js';
import { hasTool } from './outside_tool.js';

/** The words that bash makes of a line, without running what it names. */
function wordsOf(line: string): string[] {
  const script = `pawl() { printf '%s\\0' "$@"; }; ${line}`;
  return execFileSync('bash', ['-c', script], { encoding: 'utf8' }).split('\0').slice(0, -1);
}

describe('runAgain', () => {
  it('leaves plain paths as they are and quotes the others', () => {
    expect(runAgain({ file: 'specs/heliostat/azimuth.pawl.yaml' })).toBe(
      'pawl check specs/heliostat/azimuth.pawl.yaml',
    );
    expect(runAgain({ file: 'my spec.yaml' })).toBe("pawl check 'my spec.yaml'");
    expect(runAgain({ file: "it's.yaml" })).toBe("pawl check 'it'\\''s.yaml'");
    expect(runAgain({ file: '-rf' })).toBe("pawl check '-rf'");
    expect(runAgain({ file: 'a\nb' })).toBe("pawl check $'a\\012b'");
  });

  it.each(Object.entries(hostileNames))('stays one harmless line for a hostile name: %s', (_, file) => {
    const line = runAgain({ file });
    expect(line).not.toMatch(harmful);
    expect(line).not.toContain('\n');
  });

  it.runIf(hasTool('bash', 'bash'))('names the very same file to bash', () => {
    for (const file of Object.values(hostileNames)) {
      if (file.includes('\0') || !file.isWellFormed()) continue;
      expect(wordsOf(runAgain({ file }))).toEqual(['check', file]);
    }
    fc.assert(
      fc.property(fc.string({ minLength: 1, unit: 'binary' }), (file) => {
        fc.pre(!file.includes('\0') && file.isWellFormed());
        expect(wordsOf(runAgain({ file }))).toEqual(['check', file]);
      }),
      { seed: 61, numRuns: 60 },
    );
  });
});
