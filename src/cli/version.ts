import { readFileSync } from 'node:fs';

/** The version in package.json, which lies two folders above the built file. */
export const version: string = JSON.parse(
  readFileSync(new URL('../../package.json', import.meta.url), 'utf8'),
).version;
