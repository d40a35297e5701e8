import { compileLoop } from '../../../src/kernel/compile.js';
import { Linearisation } from '../../../src/linear/linearise.js';
import { openedLoop } from '../../../src/linear/opened_loop.js';
import { responseAt } from '../../../src/linear/response.js';
import { expandLoop } from '../../../src/loop/expand.js';
import { scheduleOf } from '../../../src/loop/schedule.js';
import { specOf } from '../spec_of.js';

/** A control law on its own: signals of a controller, of which the last is named `out`; it takes the sensor `x`. */
export interface Law {
  /** Lines of YAML, one for each signal. */
  signals: string[];
  /** Sampling period in s; 0.1 s unless given. */
  period?: number;
  arithmetic?: string;
  /** Unit of `x` and of `out`; plain numbers unless given. */
  unit?: string;
  outUnit?: string;
  /** Further inputs of the law by name, with their unit. */
  inputs?: Record<string, string>;
  coefficients?: Record<string, readonly number[]>;
}

/** The spec of a loop around a law: what it puts out is what it senses one instant later. */
function specText({ signals, period = 0.1, arithmetic = 'float64', unit = '1', ...law }: Law): string {
  const { outUnit = unit, inputs = {}, coefficients = {} } = law;
  const of = (name: string): string => (name === '1' ? '' : `, unit: ${name}`);
  const others = Object.entries(inputs).map(([name, own]) => `  ${name}: { ${of(own).replace(', ', '')} }`);
  const numbers = Object.keys(coefficients).map((name) => `    ${name}: ${name}`);
  const firmware = numbers.length > 0 ? ['firmware:', '  image: any.elf', '  coefficients:', ...numbers] : [];
  return [
    ...firmware,
    'inputs:',
    '  push: { unit: s }',
    ...others,
    `plant:\n  back: { value: held*(push/(1 s))${outUnit === unit ? '' : `*(1 ${unit})/(1 ${outUnit})`}${of(unit)} }`.replace(
      '(1 1)',
      '1',
    ),
    `sensors:\n  x: { of: back${of(unit)} }`,
    `controllers:\n  law:\n    every: ${period} s\n    arithmetic: ${arithmetic}\n    signals:`,
    ...signals.map((line) => `      ${line}`),
    `actuators:\n  held: { of: out${of(outUnit)} }`,
    'scenarios: { any: { lasts: 1 s, inputs: { push: { step: 1 s, at: 0 s } } } }',
    'requirements: [{ name: R, measure: gain_margin, at: held, at_least: 2 }]',
  ]
    .join('\n')
    .replaceAll('(1 1)', '1');
}

function expanded(law: Law, openAt?: string) {
  return expandLoop(specOf(specText(law)), new Map(Object.entries(law.coefficients ?? {})), {
    openAt: openAt === undefined ? [] : [openAt],
  });
}

/** One sample: the value of `x` and of the further inputs; the first in its declared unit, the others in SI. */
export type Row = number | readonly number[];

/** A law from power-up: each call is one sampling instant and gives the named signals, in SI. */
export function stepper(law: Law, signals = ['out']): (row: Row) => number[] {
  const loop = expanded(law);
  const { layout, compute } = compileLoop(loop, signals);
  const m = new Float64Array(layout.length);
  loop.memories.forEach(({ start }, at) => {
    m[layout.memory + at] = start;
  });
  // A slew acts from the start of a scenario on.
  loop.inputs.forEach((name, at) => {
    if (name.endsWith(' slew')) m[layout.input + at] = 1;
  });
  return (row) => {
    const [x, ...others] = typeof row === 'number' ? [row] : row;
    m[layout.reading] = x;
    others.forEach((value, at) => {
      m[layout.input + 1 + at] = value;
    });
    compute[0](m);
    return signals.map((_, at) => m[layout.latest + at]);
  };
}

/** The output of a law from power-up. */
export function outputs(law: Law, rows: readonly Row[]): number[] {
  const step = stepper(law);
  return rows.map((row) => step(row)[0]);
}

/** A complex number as real and imaginary part. */
export type Pair = [number, number];

/** The response of the linearised law at angles (rad a sample), from the loop opened at its output. */
export function responses(law: Law, angles: readonly number[]): Pair[] {
  const loop = expanded(law, 'held');
  const push = [1, ...Object.keys(law.inputs ?? {}).map(() => 0)];
  const opened = openedLoop(new Linearisation(loop), scheduleOf(loop, []), {
    input: push,
    memory: settled(loop),
  });
  return angles.map((angle): Pair => {
    const { real, imaginary } = responseAt(opened, angle / (law.period ?? 0.1));
    // L = −H(z)/z: the output is held for an instant before it is sensed.
    const [c, s] = [Math.cos(angle), Math.sin(angle)];
    return [-(real * c - imaginary * s), -(real * s + imaginary * c)];
  });
}

/** What a law remembers long after power-up, all else zero. */
function settled(loop: ReturnType<typeof expanded>): number[] {
  return loop.memories.map(({ name }) => (name.endsWith(' started') ? 1 : 0));
}

/** A polynomial (descending powers of z) at e^{jθ}. */
function polynomialAt(coefficients: readonly number[], angle: number): Pair {
  const [c, s] = [Math.cos(angle), Math.sin(angle)];
  return coefficients.reduce<Pair>(([re, im], a) => [re * c - im * s + a, re * s + im * c], [0, 0]);
}

/** A ratio of polynomials in descending powers of z at e^{jθ}. */
export function ratioAt(numerator: readonly number[], denominator: readonly number[], angle: number): Pair {
  const [a, b] = polynomialAt(numerator, angle);
  const [c, d] = polynomialAt(denominator, angle);
  const size = c * c + d * d;
  return [(a * c + b * d) / size, (b * c - a * d) / size];
}

/** The product of two complex numbers. */
export function product([a, b]: Pair, [c, d]: Pair): Pair {
  return [a * c - b * d, a * d + b * c];
}

/** The distance of two complex numbers. */
export function distance([a, b]: Pair, [c, d]: Pair): number {
  return Math.hypot(a - c, b - d);
}

/** A repeatable sequence of numbers from -1 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
export function noise(count: number, seed = 20261201): number[] {
  let state = seed;
  return Array.from({ length: count }, () => {
    state = (state * 48271) % 0x7fffffff;
    return (2 * state) / 0x7fffffff - 1;
  });
}
