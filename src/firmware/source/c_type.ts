import type { NumberFormat } from '../coefficient.js';

/** An arithmetic type of C, as written and as it computes. */
export type ArithmeticType = { name: string } & (
  | { kind: 'float'; bits: 32 | 64 }
  | { kind: 'integer'; bits: 8 | 16 | 32 | 64; signed: boolean }
);

/** A type as far as initialised data needs it. */
export type SourceType =
  | ArithmeticType
  | { kind: 'array'; element: SourceType; length: number | undefined }
  | {
      kind: 'record';
      name: string;
      isUnion: boolean;
      members: { name: string | undefined; type: SourceType }[] | undefined;
    }
  | { kind: 'other'; name: string };

/** Widths which differ between targets, in bits. */
export interface DataModel {
  int: 16 | 32;
  long: 32 | 64;
  double: 32 | 64;
  /** Whether plain `char` has a sign. */
  signedCharacters: boolean;
}

/** The model of 32-bit targets (common practice); `char` as on Arm. */
export const usualModel: DataModel = { int: 32, long: 32, double: 64, signedCharacters: false };

/** The types of `<stdint.h>` and the plain `bool`, by name. */
const named: Record<string, ArithmeticType> = Object.fromEntries([
  ...([8, 16, 32, 64] as const).flatMap((bits) =>
    ['', 'u'].flatMap((sign) =>
      [`${sign}int${bits}_t`, `${sign}int_least${bits}_t`].map((name) => [
        name,
        integer(name, bits, sign === ''),
      ]),
    ),
  ),
  ['bool', integer('bool', 8, false)],
  ['_Bool', integer('_Bool', 8, false)],
]);

/** An integer type. */
export function integer(name: string, bits: 8 | 16 | 32 | 64, signed: boolean): ArithmeticType {
  return { kind: 'integer', name, bits, signed };
}

/** A type by its one name, if it is one that every compiler has. */
export function typeNamed(name: string): ArithmeticType | undefined {
  return Object.hasOwn(named, name) ? named[name] : undefined;
}

const keywords = ['unsigned', 'signed', 'char', 'short', 'int', 'long', 'float', 'double'];

/** Whether a word is a part of the plain arithmetic types. */
export function isTypeWord(word: string): boolean {
  return keywords.includes(word);
}

/** The type of several words in any order, as `unsigned long int`; undefined for what is no type of C. */
export function typeOfWords(words: readonly string[], model: DataModel): ArithmeticType | undefined {
  const count = (word: string) => words.filter((other) => other === word).length;
  const name = words.join(' ');
  if (count('float') === 1) return words.length === 1 ? { kind: 'float', name, bits: 32 } : undefined;
  if (count('double') === 1)
    return words.length === 1 ? { kind: 'float', name, bits: model.double } : undefined;
  const signed = count('unsigned') === 0;
  if (count('char') === 1)
    return integer(name, 8, count('signed') === 1 || (signed && model.signedCharacters));
  if (count('short') === 1) return integer(name, 16, signed);
  if (count('long') === 2) return integer(name, 64, signed);
  if (count('long') === 1) return integer(name, model.long, signed);
  return integer(name, model.int, signed);
}

/** How the type is stored. */
export function formatOf(type: ArithmeticType): NumberFormat {
  return type.kind === 'float'
    ? { kind: 'float', bits: type.bits }
    : { kind: 'integer', bits: type.bits, signed: type.signed };
}

/** What an arithmetic integer type of this width is called. */
export function nameOf(bits: number, signed: boolean, model: DataModel): string {
  const name = bits === model.int ? 'int' : bits === model.long ? 'long' : 'long long';
  return signed ? name : `unsigned ${name}`;
}
