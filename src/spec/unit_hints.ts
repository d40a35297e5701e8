import { isPlain, sameDimension } from './dimension.js';
import type { Dimension } from './spec.js';
import { parseUnit } from './units.js';

/** Units that people have in mind when a prefix, a capital or an operator goes wrong. */
const likely = ['s', 'm', 'rad', 'Hz', 'N', 'V', 'A', 'W', 'Pa', 'F', 'H', 'ohm', 'K', 'g', 'L'];

/**
 * What was probably meant by a unit of the wrong dimension: `m` for `ms`, `M` for `m`, `ms` for `m/s`. Empty where
 * nothing near has the expected dimension.
 */
export function prefixHint(written: string, expected: Dimension): string {
  const found = candidates(written, expected).find((text) => {
    const unit = parseUnit(text);
    return unit.kind === 'unit' && unit.law === undefined && sameDimension(unit.dimension, expected);
  });
  return found === undefined ? '' : `; was \`${found}\` meant?`;
}

function candidates(written: string, expected: Dimension): string[] {
  const asPrefix = likely.map((unit) => `${written}${unit}`);
  const cuts = isPlain(expected)
    ? []
    : Array.from({ length: Math.max(0, written.length - 1) }, (_, at) => at + 1);
  const operators = cuts.flatMap((at) =>
    ['/', '*'].map((operator) => `${written.slice(0, at)}${operator}${written.slice(at)}`),
  );
  const joined = /^\w+[*/]\w+$/.test(written) ? [written.replace(/[*/]/, '')] : [];
  return [...asPrefix, ...joined, ...operators, written.toLowerCase(), written.toUpperCase()];
}
