import { execFile } from 'node:child_process';
import { accessSync, constants, mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { delimiter, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';

/** Folder of the C and C++ sources which the tests build. */
export const fixtures = fileURLToPath(new URL('./fixtures/', import.meta.url));

/** A folder of this test run's own. */
export function freshFolder(): string {
  return mkdtempSync(join(tmpdir(), 'pawl-firmware-'));
}

/** Whether a program is installed. */
export function isInstalled(program: string): boolean {
  return (process.env.PATH ?? '').split(delimiter).some((folder) => {
    try {
      accessSync(join(folder, program), constants.X_OK);
      return true;
    } catch {
      return false;
    }
  });
}

/**
 * Whether tests that need these programs are left out: on a developer's machine without them. In CI a missing program is a
 * failure, so that the comparison with outside tools cannot vanish unseen.
 */
export function leaveOut(...programs: string[]): boolean {
  const missing = programs.filter((program) => !isInstalled(program));
  if (missing.length > 0 && process.env.CI === 'true')
    throw new Error(`CI must have installed ${missing.join(', ')}`);
  return missing.length > 0;
}

const execute = promisify(execFile);

/** Runs a program and gives what it prints. */
export async function run(program: string, args: string[], cwd = fixtures): Promise<string> {
  const { stdout } = await execute(program, args, { cwd, maxBuffer: 1 << 26 });
  return stdout;
}

/** Runs jobs, two at a time. */
export async function inPairs<T>(jobs: readonly T[], work: (job: T) => Promise<void>): Promise<void> {
  const waiting = [...jobs];
  const worker = async () => {
    for (let job = waiting.shift(); job !== undefined; job = waiting.shift()) await work(job);
  };
  await Promise.all([worker(), worker()]);
}
