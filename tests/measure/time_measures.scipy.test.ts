import { describe, expect, it } from 'vitest';
import { fromRows } from '../../src/linear/matrix.js';
import { solve } from '../../src/linear/solve.js';
import { askScipy, scipyAvailable } from '../scipy.js';
import { smallValues } from '../small_loop.js';

const script = new URL('./reference_time_measures.py', import.meta.url);
/** Long against the slowest pole of all, at −0.4 1/s: what is left of it then is e^−16. */
const lasts = 40;

type Plant =
  | { numerator: number[]; denominator: number[]; lasts: number }
  | { a: number[][]; b: number[]; c: number[]; gain: number; lasts: number };

const names = ['overshoot', 'rise', 'settled2', 'settled5', 'peak', 'absolute', 'squared'] as const;
type TimeMeasures = Record<(typeof names)[number], number>;

const requirements = [
  'measure: overshoot, of: y, to: u, at_most: 1',
  'measure: rise_time, of: y, to: u, at_most: 1 s',
  'measure: settling_time, of: y, to: u, band: 2 %, at_most: 1 s',
  'measure: settling_time, of: y, to: u, band: 5 %, at_most: 1 s',
  'measure: time_of_largest_value, of: y, at_most: 1 s',
  'measure: absolute_deviation_integral, of: y, to: u, at_most: 1 s',
  'measure: squared_deviation_integral, of: y, to: u, at_most: 1 s',
].map((text, i) => `{ name: R${i}, in: run, ${text} }`);

/** A repeatable sequence of numbers from 0 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
function repeatable(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 0x7fffffff;
    return state / 0x7fffffff;
  };
}

const random = repeatable(20261205);
const between = (low: number, high: number): number => low + (high - low) * random();

/** Factors of a stable denominator of this order, as s² + 2σs + σ² + ω² and s + σ: [σ, ω], ω undefined for a single pole. */
function factors(order: number): [number, number | undefined][] {
  const pairs = Math.floor((order * (0.5 + random())) / 2);
  const oscillating = Array.from({ length: Math.min(pairs, Math.floor(order / 2)) }, (): [number, number] => [
    between(0.4, 2),
    between(0.5, 6),
  ]);
  const single = Array.from({ length: order - 2 * oscillating.length }, (): [number, undefined] => [
    between(0.4, 4),
    undefined,
  ]);
  return [...oscillating, ...single];
}

const product = (p: number[], q: number[]): number[] =>
  Array.from({ length: p.length + q.length - 1 }, (_, k) =>
    p.reduce((sum, value, i) => sum + value * (q[k - i] ?? 0), 0),
  );

/** Of gain one, half of them with a zero on either side. */
function transferFunction(order: number): Plant {
  const denominator = factors(order)
    .map(([sigma, omega]) => (omega === undefined ? [1, sigma] : [1, 2 * sigma, sigma ** 2 + omega ** 2]))
    .reduce(product);
  const constant = denominator[order];
  const zero = between(0.8, 6) * (random() < 0.5 ? 1 : -1);
  const numerator = random() < 0.5 ? [constant] : [constant / zero, constant];
  return { numerator, denominator, lasts };
}

/** Of gain one, its modes coupled one way at random. */
function stateEquations(order: number): Plant {
  const a = Array.from({ length: order }, (_, i) =>
    Array.from({ length: order }, (_, j) => (j > i ? between(-2, 2) : 0)),
  );
  let at = 0;
  for (const [sigma, omega] of factors(order)) {
    a[at][at] = -sigma;
    if (omega !== undefined) {
      a[at + 1][at + 1] = -sigma;
      a[at][at + 1] = omega;
      a[at + 1][at] = -omega;
    }
    at += omega === undefined ? 1 : 2;
  }
  const b = a.map(() => between(-1, 1));
  const c = a.map(() => between(-1, 1));
  const rest = solve(fromRows(a), fromRows(b.map((entry) => [entry])));
  const gain = -1 / c.reduce((sum, entry, i) => sum + entry * rest.data[i], 0);
  return { a, b, c, gain, lasts };
}

function blockOf(plant: Plant): string {
  if ('numerator' in plant) {
    const [above, below] = [plant.numerator, plant.denominator].map((list) => `[${list.join(', ')}]`);
    return `transfer_function: { numerator: ${above}, denominator: ${below} }`;
  }
  const rows = plant.a.map((row) => `[${row.join(', ')}]`).join(', ');
  const [input, output] = [plant.b, plant.c].map((list) => `[${list.join(', ')}]`);
  return `state_equations: { state_matrix: [${rows}], input_matrix: ${input}, output_matrix: ${output} }, gain: ${plant.gain}`;
}

function measuresOf(plant: Plant): TimeMeasures {
  const values = smallValues({
    inputs: 'u: {}',
    plant: `y: { ${blockOf(plant)}, of: u }`,
    scenarios: `run: { lasts: ${1 + lasts} s, inputs: { u: { step: 1, at: 1 s } } }`,
    requirements,
  });
  return Object.fromEntries(names.map((name, i) => [name, values[i]])) as TimeMeasures;
}

describe.skipIf(!scipyAvailable)('time measures against scipy (Virtanen and others, 2020)', () => {
  it('agree to 1e-6 for 40 random step responses of order 2 to 4', async () => {
    const plants = Array.from({ length: 40 }, (_, k) => {
      const order = 2 + (k % 3);
      return k % 2 === 0 ? transferFunction(order) : stateEquations(order);
    });
    const expected = await askScipy<TimeMeasures[]>(script, plants);
    let overshooting = 0;
    plants.forEach((plant, k) => {
      const actual = measuresOf(plant);
      // Only what goes past its end has a largest value at a time of its own.
      const peaks = expected[k].overshoot > 1e-3;
      if (peaks) overshooting++;
      for (const name of names) {
        if (name === 'peak' && !peaks) continue;
        // An overshoot is a share of the step, and judged as one.
        const size = name === 'overshoot' ? Math.max(1e-2, expected[k][name]) : expected[k][name];
        const change = Math.abs(actual[name] - expected[k][name]) / size;
        expect(change, `${name} of response ${k}: ${actual[name]} and ${expected[k][name]}`).toBeLessThan(
          1e-6,
        );
      }
    });
    expect(overshooting).toBeGreaterThan(10);
    expect(overshooting).toBeLessThan(40);
  });
});
