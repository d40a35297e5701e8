import type { Arithmetic, FixedArithmetic, FloatArithmetic } from './arithmetic.js';
import { overflows, parseFixedFormat, roundings } from './fixed_formats.js';
import { suggestion } from './nearest.js';
import type { Reading } from './reading.js';
import { childOf, type Tree, textOf } from './tree.js';

const floats: readonly FloatArithmetic[] = ['float64', 'float32', 'float32_fused'];

/** `arithmetic:` how a controller computes; `float64` unless said otherwise. */
export function readArithmetic(tree: Tree | undefined, reading: Reading): Arithmetic {
  if (tree?.kind === 'map') return readFixed(tree, reading) ?? 'float64';
  const text = textOf(tree);
  const found = floats.find((known) => known === text?.text);
  if (text !== undefined && found === undefined) {
    const fault = parseFixedFormat(text.text)
      ? `fixed point also says how it rounds and overflows: { format: ${text.text}, rounding: nearest, overflow: saturate }`
      : `unknown arithmetic \`${text.text}\`${suggestion(text.text, floats)}`;
    reading.problems.add(text.place, fault);
  }
  return found ?? 'float64';
}

function readFixed(tree: Tree, reading: Reading): FixedArithmetic | undefined {
  const format = readFormat(childOf(tree, 'format'), reading);
  const rounding = readWord(childOf(tree, 'rounding'), roundings, reading);
  const overflow = readWord(childOf(tree, 'overflow'), overflows, reading);
  if (format === undefined || rounding === undefined || overflow === undefined) return undefined;
  const accumulator = readAccumulator(childOf(tree, 'accumulator'), format, reading);
  return { ...format, rounding, overflow, ...(accumulator !== undefined && { accumulator }) };
}

type NamedFormat = Pick<FixedArithmetic, 'format' | 'bits' | 'signed' | 'fractionalBits'>;

function readFormat(tree: Tree | undefined, reading: Reading): NamedFormat | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  const format = parseFixedFormat(text.text);
  if (format !== undefined && !('fault' in format)) return { format: text.text, ...format };
  const alone = floats.find((known) => known === text.text);
  const fault = alone
    ? `${alone} has no rounding and overflow to choose; write \`arithmetic: ${alone}\``
    : format
      ? `the format \`${text.text}\` ${format.fault}`
      : `\`${text.text}\` is no fixed-point format; expected one such as Q1.15, UQ8.8 or int32`;
  reading.problems.add(text.place, fault);
  return undefined;
}

function readWord<T extends string>(
  tree: Tree | undefined,
  words: readonly T[],
  reading: Reading,
): T | undefined {
  const text = textOf(tree);
  const word = words.find((one) => one === text?.text);
  if (text !== undefined && word === undefined) {
    reading.problems.add(text.place, `\`${text.text}\` is not known here${suggestion(text.text, words)}`);
  }
  return word;
}

function readAccumulator(
  tree: Tree | undefined,
  { bits: least, format }: NamedFormat,
  reading: Reading,
): number | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  const bits = Number(/^(\d+) *bit$/.exec(text.text)?.[1]);
  if (bits >= least && bits <= 64) return bits;
  reading.problems.add(
    text.place,
    `\`${text.text}\` is no accumulator for ${format}; expected a width from ${least} bit to 64 bit, such as 64 bit`,
  );
  return undefined;
}
