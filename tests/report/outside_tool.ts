import { accessSync, constants } from 'node:fs';
import { delimiter, isAbsolute, join } from 'node:path';

/** Whether a program, by name or by its whole path, can be run. In CI it must be: there a missing one is an error, not a skipped test. */
export function hasTool(name: string, debianPackage: string): boolean {
  const folders = isAbsolute(name) ? [''] : (process.env.PATH ?? '').split(delimiter);
  const found = folders.some((folder) => {
    try {
      accessSync(join(folder, name), constants.X_OK);
      return true;
    } catch {
      return false;
    }
  });
  if (!found && process.env.CI === 'true') {
    throw new Error(`${name} is needed in CI and is not on the path; install Debian's ${debianPackage}`);
  }
  return found;
}
