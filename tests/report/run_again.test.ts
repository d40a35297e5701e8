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

const again = ({ file }: { file: string }): string => runAgain({ file, provenance: undefined });

/** A file as it is named to a shell: what begins with a dash would be an option. */
const named = (file: string): string => (file.startsWith('-') ? `./${file}` : file);

describe('runAgain', () => {
  it('takes the same image', () => {
    const provenance = {
      image: 'out/new axis.elf',
      bytes: 1,
      sha256: '00',
      buildId: undefined,
      compilers: [],
      build: undefined,
      buildSkipped: true,
    };
    expect(runAgain({ file: 'a.yaml', provenance })).toBe('pawl check a.yaml --skip-build');
    expect(runAgain({ file: 'a.yaml', provenance: { ...provenance, insteadOfSpecs: true } })).toBe(
      "pawl check a.yaml --image 'out/new axis.elf'",
    );
  });

  it('leaves plain paths as they are and quotes the others', () => {
    expect(again({ file: 'specs/heliostat/azimuth.pawl.yaml' })).toBe(
      'pawl check specs/heliostat/azimuth.pawl.yaml',
    );
    expect(again({ file: 'my spec.yaml' })).toBe("pawl check 'my spec.yaml'");
    expect(again({ file: "it's.yaml" })).toBe("pawl check 'it'\\''s.yaml'");
    expect(again({ file: '-rf' })).toBe('pawl check ./-rf');
    expect(again({ file: 'a\nb' })).toBe("pawl check $'a\\012b'");
  });

  it.each(Object.entries(hostileNames))('stays one harmless line for a hostile name: %s', (_, file) => {
    const line = again({ file });
    expect(line).not.toMatch(harmful);
    expect(line).not.toContain('\n');
  });

  it.runIf(hasTool('bash', 'bash'))('names the very same file to bash', () => {
    for (const file of Object.values(hostileNames)) {
      if (file.includes('\0') || !file.isWellFormed()) continue;
      expect(wordsOf(again({ file }))).toEqual(['check', named(file)]);
    }
    fc.assert(
      fc.property(fc.string({ minLength: 1, unit: 'binary' }), (file) => {
        fc.pre(!file.includes('\0') && file.isWellFormed());
        expect(wordsOf(again({ file }))).toEqual(['check', named(file)]);
      }),
      { seed: 61, numRuns: 60 },
    );
  });
});
