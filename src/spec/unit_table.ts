import { frequencyDimension, plainNumber, rateDimension, timeDimension } from './dimension.js';
import type { Dimension } from './spec.js';

/**
 * A unit symbol. One unit is `times / over · 10^tens` in SI: kept apart so that decimal units convert without a
 * rounding of their own (`400 us` is exactly the number `0.0004`).
 */
export interface UnitSymbol {
  symbol: string;
  dimension: Dimension;
  times: number;
  over: number;
  tens: number;
  /** Whether an SI prefix may stand before it. */
  prefixed: boolean;
  /** Name for people. */
  meaning: string;
}

/** SI prefixes with their power of ten (SI Brochure, 9th edition, 2019, table 7); `u` stands for µ. */
export const prefixes: Readonly<Record<string, number>> = {
  f: -15,
  p: -12,
  n: -9,
  u: -6,
  µ: -6,
  μ: -6,
  m: -3,
  c: -2,
  d: -1,
  da: 1,
  h: 2,
  k: 3,
  M: 6,
  G: 9,
  T: 12,
  P: 15,
};

type Exponents = [m: number, kg: number, s: number, A: number, K?: number, mol?: number, cd?: number];

function dimensionOf(exponents: Exponents): Dimension {
  const [m, kg, s, A, K = 0, mol = 0, cd = 0] = exponents;
  return [m, kg, s, A, K, mol, cd, 0];
}

/** A coherent unit of the SI: one of it is 1 in base units. */
function coherent(symbol: string, meaning: string, exponents: Exponents): UnitSymbol {
  return { symbol, dimension: dimensionOf(exponents), times: 1, over: 1, tens: 0, prefixed: true, meaning };
}

function other(
  symbol: string,
  meaning: string,
  dimension: Dimension,
  size: { times?: number; over?: number; tens?: number; prefixed?: boolean },
): UnitSymbol {
  return { symbol, dimension, times: 1, over: 1, tens: 0, prefixed: false, meaning, ...size };
}

/** Every unit symbol that a spec may use, without prefixes. */
export const unitSymbols: readonly UnitSymbol[] = [
  coherent('m', 'metre', [1, 0, 0, 0]),
  coherent('s', 'second', [0, 0, 1, 0]),
  coherent('A', 'ampere', [0, 0, 0, 1]),
  coherent('K', 'kelvin', [0, 0, 0, 0, 1]),
  coherent('mol', 'mole', [0, 0, 0, 0, 0, 1]),
  coherent('cd', 'candela', [0, 0, 0, 0, 0, 0, 1]),
  other('g', 'gram', dimensionOf([0, 1, 0, 0]), { tens: -3, prefixed: true }),
  coherent('N', 'newton', [1, 1, -2, 0]),
  coherent('Pa', 'pascal', [-1, 1, -2, 0]),
  coherent('J', 'joule', [2, 1, -2, 0]),
  coherent('W', 'watt', [2, 1, -3, 0]),
  coherent('C', 'coulomb', [0, 0, 1, 1]),
  coherent('V', 'volt', [2, 1, -3, -1]),
  coherent('F', 'farad', [-2, -1, 4, 2]),
  coherent('ohm', 'ohm', [2, 1, -3, -2]),
  coherent('Ω', 'ohm', [2, 1, -3, -2]),
  coherent('S', 'siemens', [-2, -1, 3, 2]),
  coherent('Wb', 'weber', [2, 1, -2, -1]),
  coherent('T', 'tesla', [0, 1, -2, -1]),
  coherent('H', 'henry', [2, 1, -2, -2]),
  coherent('lm', 'lumen', [0, 0, 0, 0, 0, 0, 1]),
  coherent('lx', 'lux', [-2, 0, 0, 0, 0, 0, 1]),
  other('Hz', 'hertz, a cycle a second', frequencyDimension, { prefixed: true }),
  other('cycle', 'cycle; 2π rad only where an angular frequency is meant', [0, 0, 0, 0, 0, 0, 0, 1], {}),
  other('rad', 'radian, a plain number', plainNumber, { prefixed: true }),
  other('deg', 'degree of angle, π/180', plainNumber, { times: Math.PI, over: 180 }),
  other('°', 'degree of angle, π/180', plainNumber, { times: Math.PI, over: 180 }),
  other('arcmin', 'minute of angle, 1/60 degree', plainNumber, { times: Math.PI, over: 10_800 }),
  other('arcsec', 'second of angle, 1/3600 degree', plainNumber, { times: Math.PI, over: 648_000 }),
  other('rpm', 'revolution a minute, 2π/60 rad/s', rateDimension, { times: 2 * Math.PI, over: 60 }),
  other('%', 'per cent, 0.01', plainNumber, { tens: -2 }),
  other('ppm', 'part in a million', plainNumber, { tens: -6 }),
  other('bit', 'bit or count, a plain number', plainNumber, { prefixed: true }),
  other('min', 'minute', timeDimension, { times: 60 }),
  other('h', 'hour', timeDimension, { times: 3600 }),
  other('L', 'litre', dimensionOf([3, 0, 0, 0]), { tens: -3, prefixed: true }),
  other('t', 'tonne', dimensionOf([0, 1, 0, 0]), { tens: 3 }),
  other('bar', 'bar', dimensionOf([-1, 1, -2, 0]), { tens: 5, prefixed: true }),
];
