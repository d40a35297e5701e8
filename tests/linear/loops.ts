import {
  add,
  fromRows,
  identity,
  type Matrix,
  multiply,
  place,
  scale,
  zeros,
} from '../../src/linear/matrix.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { type PolynomialRatio, stateEquationsOf } from './polynomial_ratio.js';

/** State equations of numerator/denominator in descending powers; sampled when a period is given. */
export function loopOf(numerator: number[], denominator: number[], period?: number): StateEquations {
  return stateEquationsOf({ numerator, denominator, period });
}

/** The product of polynomials in descending powers. */
export function product(...factors: number[][]): number[] {
  return factors.reduce(
    (total, factor) => {
      const result = new Array<number>(total.length + factor.length - 1).fill(0);
      total.forEach((x, i) => {
        factor.forEach((y, j) => {
          result[i + j] += x * y;
        });
      });
      return result;
    },
    [1],
  );
}

/** The characteristic polynomial in descending powers (Faddeev and Leverrier): exact enough for a few states. */
export function characteristicPolynomial(a: Matrix): number[] {
  const n = a.rows;
  const result = [1];
  let m = zeros(n, n);
  for (let k = 1; k <= n; k++) {
    m = add(multiply(a, m), identity(n), result[k - 1]);
    const am = multiply(a, m);
    let trace = 0;
    for (let i = 0; i < n; i++) trace += am.data[i * n + i];
    result.push(-trace / k);
  }
  return result;
}

/** The transfer function of a system with one input and one output, numerator padded to the denominator's length. */
export function ratioOf(system: StateEquations): PolynomialRatio {
  const denominator = characteristicPolynomial(system.a);
  const shifted = characteristicPolynomial(add(system.a, multiply(system.b, system.c), -1));
  const through = system.d.data[0];
  const numerator = denominator.map((x, i) => shifted[i] - x + through * x);
  return { numerator, denominator, period: system.period };
}

/** `first`, then `second`: what the first gives drives the second. */
export function inSeries(first: StateEquations, second: StateEquations): StateEquations {
  const n = first.a.rows;
  const m = second.a.rows;
  const a = zeros(n + m, n + m);
  place(a, first.a, 0, 0);
  place(a, multiply(second.b, first.c), n, 0);
  place(a, second.a, n, n);
  const b = zeros(n + m, first.b.columns);
  place(b, first.b, 0, 0);
  place(b, multiply(second.b, first.d), n, 0);
  const c = zeros(second.c.rows, n + m);
  place(c, multiply(second.d, first.c), 0, 0);
  place(c, second.c, 0, n);
  return { a, b, c, d: multiply(second.d, first.d), period: first.period };
}

/** The same system with its output multiplied by a factor. */
export function times(system: StateEquations, factor: number): StateEquations {
  return { ...system, c: scale(system.c, factor), d: scale(system.d, factor) };
}

/** The same loop seen over a cycle of so many samples: one input and one output for each. */
export function lifted(loop: StateEquations, samples: number): StateEquations {
  const n = loop.a.rows;
  let a = identity(n);
  const b = zeros(n, samples);
  const c = zeros(samples, n);
  const d = zeros(samples, samples);
  for (let i = 0; i < samples; i++) {
    place(c, multiply(loop.c, a), i, 0);
    // What earlier inputs have left in the states by sample i.
    place(d, multiply(loop.c, b), i, 0);
    d.data[i * samples + i] = loop.d.data[0];
    const moved = multiply(loop.a, b);
    place(b, moved, 0, 0);
    place(b, loop.b, 0, i);
    a = multiply(loop.a, a);
  }
  return { a, b, c, d, period: samples * loop.period! };
}

/** A random loop of the given order over a cycle of so many samples, its gain another one at each: from 0.3 to 1.7 times. */
export function alternating(order: number, samples: number, random: () => number): StateEquations {
  const loop = lifted(randomLoop(order, random), samples);
  const gains = Array.from({ length: samples }, () => 0.3 + 1.4 * random());
  const scaled = (matrix: Matrix): Matrix => ({
    ...matrix,
    data: matrix.data.map((entry, at) => entry * gains[at % samples]),
  });
  return { ...loop, b: scaled(loop.b), d: scaled(loop.d) };
}

/** State equations from plain rows. */
export function systemOf(
  a: number[][],
  b: number[][],
  c: number[][],
  d: number[][],
  period?: number,
): StateEquations {
  return { a: fromRows(a), b: fromRows(b), c: fromRows(c), d: fromRows(d), period };
}

/** Repeatable numbers, uniform between 0 and 1 (a 32-bit mix after Steele, Lea and Flood, 2014). */
export function repeatable(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x9e3779b9) >>> 0;
    let x = state;
    x = Math.imul(x ^ (x >>> 16), 0x21f0aaad);
    x = Math.imul(x ^ (x >>> 15), 0x735a2d97);
    return ((x ^ (x >>> 15)) >>> 0) / 2 ** 32;
  };
}

/** One factor of a transfer function: a numerator in descending powers of z, over one real pole or a pair radius·e^{±j·angle}. */
interface Section {
  numerator: number[];
  radius: number;
  angle: number | undefined;
}

/**
 * A sampled loop of the given order: sections of first and second order in series, with poles and zeros at many distances
 * from the unit circle, now and then a pure integrator, and a gain that leaves about half of such loops stable. Each pair of
 * poles has states that turn with it, as sampled plants have: so the loop is well conditioned, and two methods can agree on
 * it to many digits.
 */
export function randomLoop(order: number, random: () => number): StateEquations {
  const period = 10 ** (-4 + 3 * random());
  const sections: Section[] = [];
  for (let left = order; left > 0; ) {
    const degree = left >= 2 && random() < 0.6 ? 2 : 1;
    const numerator = randomNumerator(random() < 0.5 ? degree : Math.floor(random() * (degree + 1)), random);
    const radius = 1 - 10 ** (-3.5 * random());
    if (degree === 2) sections.push({ numerator, radius, angle: 0.01 + 3.12 * random() ** 2 });
    else if (random() < 0.15) sections.push({ numerator, radius: 1, angle: undefined });
    else sections.push({ numerator, radius: random() < 0.85 ? radius : -radius, angle: undefined });
    left -= degree;
  }
  let largest = 0;
  for (let k = 1; k < 200; k++) {
    const at = (Math.PI * k) / 200;
    const sizes = sections.map(
      (one) => sizeOnCircle(one.numerator, at) / sizeOnCircle(denominatorOf(one), at),
    );
    largest = Math.max(
      largest,
      sizes.reduce((total, size) => total * size, 1),
    );
  }
  const gain = ((random() < 0.8 ? 1 : -1) * 10 ** (2 * random() - 1)) / largest;
  return times(sections.map((one) => sectionOf(one, period)).reduce(inSeries), gain);
}

function randomNumerator(degree: number, random: () => number): number[] {
  if (degree === 0) return [1];
  const radius = 1 - 10 ** (-1.5 * random());
  if (degree === 1) return [1, (random() < 0.85 ? -1 : 1) * radius];
  return [1, -2 * radius * Math.cos(Math.PI * random() ** 2), radius * radius];
}

function denominatorOf({ radius, angle }: Section): number[] {
  return angle === undefined ? [1, -radius] : [1, -2 * radius * Math.cos(angle), radius * radius];
}

function sectionOf(section: Section, period: number): StateEquations {
  const { numerator, radius, angle } = section;
  if (angle === undefined) return loopOf(numerator, denominatorOf(section), period);
  const across = radius * Math.sin(angle);
  const along = radius * Math.cos(angle);
  const [through, first, last] = [...new Array(3 - numerator.length).fill(0), ...numerator];
  const [, a1, a0] = denominatorOf(section);
  const slope = first - through * a1;
  // From the input to the two states: across and z − along over the denominator.
  const c = [(last - through * a0 + slope * along) / across, slope];
  return systemOf(
    [
      [along, across],
      [-across, along],
    ],
    [[0], [1]],
    [c],
    [[through]],
    period,
  );
}

/** Size of a polynomial at e^{j·angle}. */
function sizeOnCircle(coefficients: number[], angle: number): number {
  let real = 0;
  let imaginary = 0;
  for (const coefficient of coefficients) {
    const next = real * Math.cos(angle) - imaginary * Math.sin(angle) + coefficient;
    imaginary = real * Math.sin(angle) + imaginary * Math.cos(angle);
    real = next;
  }
  return Math.hypot(real, imaginary);
}
