import type { Provenance } from '../verdict/run.js';

type Kind = NonNullable<Provenance['kind']>;

/** What holds the numbers of a build, in words: a file that was built, a text, or what a program printed. */
export function originWord({ kind = 'elf' }: Provenance): string {
  return words[kind];
}

const words: Record<Kind, string> = {
  elf: 'image',
  intel_hex: 'Intel HEX image',
  s_record: 'S-record image',
  raw: 'raw image',
  source: 'source',
  command: 'output of',
};
