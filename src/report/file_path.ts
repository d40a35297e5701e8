import { posix } from 'node:path';

/**
 * A path that says nothing of the machine: relative ones as they are, absolute ones relative to `root` where they lie
 * below it, else the file's name alone. Always with forward slashes.
 */
export function portablePath(path: string, root?: string): string {
  const slashed = path.replaceAll('\\', '/');
  if (!slashed.startsWith('/') && !/^[A-Za-z]:\//.test(slashed)) return slashed;
  if (root !== undefined) {
    const within = posix.relative(root.replaceAll('\\', '/'), slashed);
    if (within !== '' && within !== '..' && !within.startsWith('../') && !within.startsWith('/'))
      return within;
  }
  return posix.basename(slashed);
}
