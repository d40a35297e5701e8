import { describe, expect, it } from 'vitest';
import { distance, type Law, noise, outputs, type Pair, product, responses } from './law.js';

const period = 0.1;
const angles = [0.02, 0.3, 1.1, 2.5, 3.1];

function quotient(a: Pair, [c, d]: Pair): Pair {
  const [re, im] = product(a, [c, -d]);
  return [re / (c * c + d * d), im / (c * c + d * d)];
}

/** a·z + b on the unit circle. */
function line(a: number, b: number, angle: number): Pair {
  return [a * Math.cos(angle) + b, a * Math.sin(angle)];
}

function plus([a, b]: Pair, [c, d]: Pair): Pair {
  return [a + c, b + d];
}

type Rule = 'backward' | 'forward' | 'trapezoid';

/** The sum of a signal times the period: the rectangle and trapezoid rules of any textbook on numerical integration. */
const sums: Record<Rule, (angle: number) => Pair> = {
  backward: (angle) => quotient(line(period, 0, angle), line(1, -1, angle)),
  forward: (angle) => quotient(line(0, period, angle), line(1, -1, angle)),
  trapezoid: (angle) => quotient(line(period / 2, period / 2, angle), line(1, -1, angle)),
};

/** s/(1 + s/ω) with s by the same rule: of 1/s the sum stands for, this is 1/(sum + 1/ω). */
function derivative(rule: Rule, corner: number, angle: number): Pair {
  return quotient([1, 0], plus(sums[rule](angle), [1 / corner, 0]));
}

function times(factor: number, [re, im]: Pair): Pair {
  return [factor * re, factor * im];
}

describe('the response of pid', () => {
  const [kp, ki, kd, corner] = [1.4, 2.2, 0.08, 7];
  const [ti, td] = [0.6, 0.09];
  for (const rule of Object.keys(sums) as Rule[]) {
    const expectResponse = (settings: string, expected: (angle: number) => Pair): void => {
      const law = { signals: [`out: { pid: { ${settings}, kp: ${kp}, sum_by: ${rule} }, of: x }`] };
      responses(law, angles).forEach((found, k) => {
        const wanted = expected(angles[k]);
        expect(distance(found, wanted) / Math.hypot(...wanted)).toBeLessThan(1e-12);
      });
    };

    it(`is that of its actions, summed by the ${rule} rule`, () => {
      expectResponse(`ki: ${ki} 1/s, kd: ${kd} s, derivative_corner: ${corner} rad/s`, (angle) =>
        plus([kp, 0], plus(times(ki, sums[rule](angle)), times(kd, derivative(rule, corner, angle)))),
      );
    });

    it(`is that of the standard form, summed by the ${rule} rule`, () => {
      expectResponse(
        `form: standard, integral_time: ${ti} s, derivative_time: ${td} s, derivative_corner: ${corner} rad/s`,
        (angle) =>
          times(
            kp,
            plus([1, 0], plus(times(1 / ti, sums[rule](angle)), times(td, derivative(rule, corner, angle)))),
          ),
      );
    });

    it(`is that of the interacting form, a product, summed by the ${rule} rule`, () => {
      expectResponse(
        `form: interacting, integral_time: ${ti} s, derivative_time: ${td} s, derivative_corner: ${corner} rad/s`,
        (angle) =>
          times(
            kp,
            product(
              plus([1, 0], times(1 / ti, sums[rule](angle))),
              plus([1, 0], times(td, derivative(rule, corner, angle))),
            ),
          ),
      );
    });
  }
});

describe('pid', () => {
  const law = (settings: string, more = '', of = 'x'): Law => ({
    signals: [`out: { pid: { ${settings} }, of: ${of}${more} }`],
    inputs: of.includes('target') ? { target: '1' } : {},
  });
  const stimulus = noise(300);
  const near = (one: number[], other: number[]): void => {
    one.forEach((value, k) => {
      expect(Math.abs(value - other[k])).toBeLessThan(1e-12 * (1 + Math.abs(other[k])));
    });
  };

  it('with gains a sample is the law with the period folded into its gains', () => {
    const perSecond = 'kp: 2, ki: 3 1/s, kd: 0.4 s, derivative_corner: 5 rad/s';
    const perSample = 'gains: per_sample, kp: 2, ki: 0.3, kd: 4, derivative_corner: 5 rad/s';
    near(outputs(law(perSample), stimulus), outputs(law(perSecond), stimulus));
    const times = 'form: standard, kp: 2, integral_time: 0.5 s, derivative_time: 0.2 s';
    const samples = 'form: standard, kp: 2, integral_time: 5, derivative_time: 2, gains: per_sample';
    near(outputs(law(samples), stimulus), outputs(law(times), stimulus));
  });

  it('that believes in another period computes what it would at that period', () => {
    const settings = 'kp: 2, ki: 3 1/s, kd: 0.4 s, derivative_corner: 5 rad/s';
    const believed = outputs(law(`${settings}, assumed_period: 20 ms`), stimulus);
    expect(believed).toEqual(outputs({ ...law(settings), period: 0.02 }, stimulus));
    expect(believed).not.toEqual(outputs(law(settings), stimulus));
  });

  it('without weights is the law of the difference of target and measurement', () => {
    const settings = 'kp: 2, ki: 3 1/s, kd: 0.4 s';
    const rows = stimulus.map((x, k) => [x, stimulus[(k + 7) % 300]]);
    const pair = outputs(law(settings, '', '{ target: target, measurement: x }'), rows);
    expect(pair).toEqual(outputs(law(settings, '', 'target - x'), rows));
  });

  it('kicks at a step of the target by as much as its weights let through', () => {
    const [kp, ki, kd] = [2, 3, 0.4];
    const settings = `kp: ${kp}, ki: ${ki} 1/s, kd: ${kd} s`;
    for (const [b, c] of [
      [1, 1],
      [0.3, 1],
      [0, 0],
      [1, 0],
    ]) {
      const weights = `target_weight: ${b}, derivative_target_weight: ${c}`;
      const [first] = outputs(law(`${settings}, ${weights}`, '', '{ target: target, measurement: x }'), [
        [0, 1],
      ]);
      expect(first).toBeCloseTo(kp * b + ki * period + (kd * c) / period, 12);
    }
  });

  describe('at the end of its range', () => {
    const [ki, back] = [2.03, 0.7];
    /** So many instants at which the output stays at 1 after the error has turned from 1 to -1. */
    const stays = (windup: string): number => {
      const rows = [...Array(200).fill(1), ...Array(400).fill(-1)];
      const found = outputs(law(`ki: ${ki} 1/s${windup}`, ', range: [-1, 1]'), rows);
      expect(found[199]).toBe(1);
      return found.slice(200).findIndex((value) => value < 1);
    };

    it('winds up without a rule, and takes as long to come back', () => {
      // The sum reached 200·ki·T = 40.6 and falls by ki·T = 0.203 an instant: it is below 1 after 196 of them.
      expect(stays('')).toBe(195);
    });

    it('leaves it at once where the integral is bounded', () => {
      expect(stays(', anti_windup: bound_integral')).toBe(0);
    });

    it('holds the integral at the last instant that was inside, and leaves it at once', () => {
      const rows = [...Array(20).fill(1), -1];
      const found = outputs(law(`ki: ${ki} 1/s, anti_windup: hold_integral`, ', range: [-1, 1]'), rows);
      // Four steps of 0.203 fit below 1.
      for (const value of found.slice(3, 20)) expect(value).toBeCloseTo(4 * ki * period, 12);
      expect(found[20]).toBeCloseTo(3 * ki * period, 12);
    });

    it('leaves it, pulled back, after the time that the time constant says', () => {
      // The excess d follows d = (1 - T/Tt)·d₁ - ki·T from ki·Tt towards -ki·Tt, and is below 0 once (1 - T/Tt)ⁿ < 1/2.
      const instants = Math.ceil(Math.log(2) / -Math.log(1 - period / back));
      expect(stays(`, anti_windup: pull_back, pull_back_time: ${back} s`)).toBe(instants - 1);
    });
  });

  it('starts with the output that it is told, whatever the first error', () => {
    for (const form of ['parallel', 'interacting']) {
      const gains =
        form === 'parallel' ? 'ki: 3 1/s, kd: 0.4 s' : 'integral_time: 0.7 s, derivative_time: 0.2 s';
      const found = outputs(law(`form: ${form}, kp: 2, ${gains}, bumpless_start: 0.35`), [0.8, 0.8, 0.8]);
      expect(found[0]).toBeCloseTo(0.35, 14);
      const share = form === 'parallel' ? 3 : 2 / 0.7;
      expect(found[1]).toBeCloseTo(0.35 + share * period * 0.8, 14);
    }
  });

  it('follows another law while that is in charge, and takes over without a bump', () => {
    const signals = [
      'out: { pid: { kp: 2, ki: 3 1/s, track: manual, track_when: hand }, of: x, range: [-1, 1] }',
    ];
    const rows = stimulus.map((x, k) => [0.1 * x, 0.5 + 0.001 * k, k < 200 ? 1 : 0]);
    const found = outputs({ signals, inputs: { manual: '1', hand: '1' } }, rows);
    for (let k = 0; k < 200; k++) expect(found[k]).toBeCloseTo(rows[k][1], 14);
    const [last, first] = [rows[199][0], rows[200][0]];
    expect(found[200]).toBeCloseTo(0.699 + 2 * (first - last) + 3 * period * first, 12);
  });
});
