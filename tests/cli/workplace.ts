import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { execa } from 'execa';
import { runHere } from './in_process.js';

const built = resolve('dist/cli/main.js');
const demo = resolve('specs/heliostat');

/** What a command printed and how it ended. */
export interface Ended {
  status: number | undefined;
  output: string;
  errors: string;
}

/** The demo spec as it is, line by line, but with three uncertain parameters, few plants and a short second scenario. */
export function quickDemo(): string {
  return readFileSync(join(demo, 'heliostat.pawl.yaml'), 'utf8')
    .replace(/(nominal: 0\.6 N\*m,) .*\}/, '$1 spread: 0 % }')
    .replace(/(nominal: 180 N\*m,) .*\}/, '$1 spread: 0 % }')
    .replace(/(squall:\n +lasts:) 4 s/, '$1 1.5 s')
    .replace('plants: 1000', 'plants: 8\n  search: 8');
}

/** A folder of its own with the demo firmware and a spec, in which the built command runs as a user runs it. */
export class Workplace {
  readonly folder = mkdtempSync(join(tmpdir(), 'pawl-'));
  readonly spec = 'axis.pawl.yaml';

  /** @param change turns the demo spec's text into the one to be tried; fewer plants, so that tests are fast. */
  constructor(change: (text: string) => string = (text) => text) {
    cpSync(join(demo, 'firmware'), join(this.folder, 'firmware'), { recursive: true });
    // Without digests of the law, which only a latched reference can tell.
    const text = quickDemo().replace(/^ {2}law: .*\n/m, '');
    this.write(this.spec, change(text));
  }

  write(name: string, text: string | Uint8Array): void {
    writeFileSync(join(this.folder, name), text);
  }

  read(name: string): string {
    return readFileSync(join(this.folder, name), 'utf8');
  }

  /** Line and column, counted from 1, of the first place where `text` stands in the spec. */
  placeOf(text: string): string {
    const before = this.read(this.spec).split(text)[0].split('\n');
    return `${this.spec}:${before.length}:${before[before.length - 1].length + 1}`;
  }

  /** Runs a command line in this process: the same but for the start of another one, which takes most of a short command's time. */
  async here(...words: string[]): Promise<Ended> {
    const { status, output, errors } = await runHere(this.folder, words);
    return { status, output: output.replace(/\n$/, ''), errors: errors.replace(/\n$/, '') };
  }

  /** Runs the built command as a user does. */
  async pawl(...words: string[]): Promise<Ended> {
    const result = await execa('node', [built, ...words], { cwd: this.folder, reject: false });
    return { status: result.exitCode, output: result.stdout, errors: result.stderr };
  }

  remove(): void {
    rmSync(this.folder, { recursive: true });
  }
}
