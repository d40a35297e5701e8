import { describe, expect, it } from 'vitest';
import { askScipy, scipyAvailable } from '../scipy.js';
import { type SmallLoop, smallValues } from '../small_loop.js';

const script = new URL('./reference_several_signals.py', import.meta.url);
/** x' = a·x + b·u, u = −k·x of the sampling instant, from `delay` s after it on; each u counts as a share of its width. */
interface CoupledLoop {
  a: number[][];
  b: number[][];
  k: number[][];
  period: number;
  delay: number;
  widths: number[];
}

interface Reference {
  stable: boolean;
  gain: number | null;
  phase: number | null;
  delay: number | null;
  sensitivity: number;
  complementary: number;
  balanced: number;
}

/** A repeatable sequence of numbers from 0 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
let state = 20261207;
const random = (): number => {
  state = (state * 48271) % 0x7fffffff;
  return state / 0x7fffffff;
};
const between = (low: number, high: number): number => Number((low + (high - low) * random()).toFixed(6));
const matrix = (n: number, entry: (i: number, j: number) => number): number[][] =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, j) => entry(i, j)));

/** Axes that act upon one another, with gains from hardly felt to beyond stability. */
function randomLoop(axes: number): CoupledLoop {
  const strength = between(0.1, 1.6);
  return {
    a: matrix(axes, (i, j) => (i === j ? -between(0, 8) : between(-2, 2))),
    b: matrix(axes, (i, j) => (i === j ? between(5, 15) : between(-6, 6))),
    k: matrix(axes, (i, j) => strength * (i === j ? between(2, 6) : between(-1.5, 1.5))),
    period: 0.02,
    delay: random() < 0.3 ? 0 : between(0, 0.018),
    widths: Array.from({ length: axes }, () => between(0.5, 4)),
  };
}

const sum = (terms: string[]): string => terms.join(' + ');

/** The same loop as a spec: one controller, a sensor and an actuator for each axis. */
function specOf({ a, b, k, period, delay, widths }: CoupledLoop): SmallLoop {
  const axes = a.map((_, i) => i);
  const all = `[${axes.map((i) => `duty_${i}`).join(', ')}]`;
  const measures = ['gain_margin', 'phase_margin', 'modulus_margin', 'disc_margin'].map(
    (name) => `measure: ${name}, at_least: 0.1`,
  );
  return {
    inputs: 'target: {}',
    plant: axes
      .map((i) => {
        const rates = axes.map((j) => `(${a[i][j]} 1/s)*x_${j} + (${b[i][j]} 1/s)*duty_${j}`);
        return `x_${i}: { integral: ${sum(rates)} }`;
      })
      .join('\n'),
    sensors: axes.map((i) => `seen_${i}: { of: x_${i} }`).join('\n'),
    controllers: [
      `law:\n  every: ${period} s\n  delay: ${delay} s\n  signals:`,
      ...axes.map(
        (i) => `    push_${i}: { value: target - (${sum(k[i].map((one, j) => `(${one})*seen_${j}`))}) }`,
      ),
    ].join('\n'),
    actuators: axes
      .map((i) => `duty_${i}: { of: push_${i}, range: [${-widths[i] / 2}, ${widths[i] / 2}] }`)
      .join('\n'),
    requirements: [
      ...measures,
      'measure: sensitivity_peak, at_most: 9',
      'measure: complementary_peak, at_most: 9',
      'measure: delay_margin, at_least: 1 us',
    ].map((text, i) => `{ name: R${i}, at: ${all}, ${text} }`),
  };
}

describe.skipIf(!scipyAvailable)(
  'loops opened at all actuators at once, against scipy (Virtanen and others, 2020)',
  () => {
    it('agree to 1e-6 over 36 coupled loops of two and three axes', async () => {
      const loops = Array.from({ length: 36 }, (_, at) => randomLoop(2 + (at % 2)));
      const references = await askScipy<Reference[]>(script, loops);
      const stable = references.filter((one) => one.stable).length;
      expect(stable).toBeGreaterThan(15);
      expect(stable).toBeLessThan(34);
      references.forEach((reference, at) => {
        const values = smallValues(specOf(loops[at]));
        if (!reference.stable) {
          expect(values).toEqual([1, 0, 0, 0, Infinity, Infinity, 0]);
          return;
        }
        const [gain, phase, modulus, disc, sensitivity, complementary, delay] = values;
        expectNear(`gain margin of loop ${at}`, gain, reference.gain ?? Infinity);
        expectNear(`phase margin of loop ${at}`, phase, reference.phase ?? Infinity);
        expectNear(`delay margin of loop ${at}`, delay, reference.delay ?? Infinity);
        expectNear(`sensitivity peak of loop ${at}`, sensitivity, reference.sensitivity);
        expectNear(`modulus margin of loop ${at}`, modulus, 1 / reference.sensitivity);
        expectNear(`complementary peak of loop ${at}`, complementary, reference.complementary);
        expectNear(`disc margin of loop ${at}`, disc, 1 / reference.balanced);
      });
    });
  },
);

function expectNear(what: string, actual: number, expected: number): void {
  if (actual === expected) return;
  expect(Math.abs(actual / expected - 1), `${what}: ${actual} against ${expected}`).toBeLessThan(1e-6);
}
