import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { runCommand } from '../../src/cli/commands.js';
import { Fault, type Surroundings } from '../../src/cli/surroundings.js';
import type { Ended } from './workplace.js';

/** Runs a command line without a process of its own, with everything that it may touch handed in. */
export async function runHere(
  folder: string,
  words: readonly string[],
  changes: Partial<Surroundings> = {},
): Promise<Ended> {
  let output = '';
  let errors = '';
  const around: Surroundings = {
    cwd: folder,
    print: (text) => {
      output += text;
    },
    complain: (text) => {
      errors += text;
    },
    colour: false,
    width: 100,
    today: '2026-12-01',
    environment: {},
    ...changes,
  };
  try {
    const status = await runCommand(words, around);
    return { status, output, errors };
  } catch (error) {
    if (!(error instanceof Fault)) throw error;
    return { status: 2, output, errors: errors + error.lines.join('\n') };
  }
}

/** An empty folder that is gone after the test. */
export class Folder {
  readonly path = mkdtempSync(join(tmpdir(), 'pawl-'));

  write(name: string, text: string | Uint8Array): void {
    writeFileSync(join(this.path, name), text);
  }

  read(name: string): string {
    return readFileSync(join(this.path, name), 'utf8');
  }

  run(words: readonly string[], changes?: Partial<Surroundings>): Promise<Ended> {
    return runHere(this.path, words, changes);
  }

  remove(): void {
    rmSync(this.path, { recursive: true });
  }
}
