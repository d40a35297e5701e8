import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { measureSmall, type SmallLoop, smallSpecOf, smallValues } from '../small_loop.js';

/**
 * Margins of statements against what the definition gives (robustness degree; Fainekos and Pappas 2009, Donzé and Maler
 * 2010). y is a lag of 1 s after a unit step at 1 s: y = 1 − e^{−(t − 1)}; u the step itself, d a pulse.
 */
function saying(statements: string[]): SmallLoop {
  return {
    parameters: 'goal: { nominal: 1, spread: 10 % }',
    inputs: 'u: {}\nd: {}',
    plant: 'y: { lag: 1 s, of: u }\nz: { lag: 1 s, of: d, gain: goal }',
    scenarios:
      'run: { lasts: 10 s, inputs: { u: { step: 1, at: 1 s }, d: { pulse: 1, at: 2 s, for: 3 s } } }',
    requirements: statements.map(
      (text, i) => `{ name: R${i}, in: run, measure: over_time, at_least: 0, holds: ${text} }`,
    ),
  };
}

const margins = (...statements: string[]): number[] => smallValues(saying(statements));

describe('throughout and at_some_time', () => {
  it('take the least and the greatest distance in their window', () => {
    const [least, greatest, toEnd] = margins(
      '{ throughout: y > 0.5, from: 2 s, to: 4 s, scale: 1 }',
      '{ at_some_time: y > 0.5, from: 2 s, to: 4 s, scale: 1 }',
      '{ throughout: y < 1, scale: 0.1 }',
    );
    expect(least).toBeCloseTo(1 - Math.exp(-1) - 0.5, 7);
    expect(greatest).toBeCloseTo(1 - Math.exp(-3) - 0.5, 7);
    expect(toEnd).toBeCloseTo(10 * Math.exp(-9), 7);
  });

  it('count in units of the innermost scale of the same dimension', () => {
    const [outer, inner] = margins(
      '{ throughout: y < 2, from: 2 s, to: 3 s, scale: 0.5 }',
      '{ throughout: { that: y < 2, scale: 0.25 }, from: 2 s, to: 3 s, scale: 0.5 }',
    );
    expect(outer).toBeCloseTo((1 + Math.exp(-2)) / 0.5, 7);
    expect(inner).toBeCloseTo((1 + Math.exp(-2)) / 0.25, 7);
  });

  it('look at the value at the start where nothing else is said', () => {
    expect(margins('{ that: y < 0.3, scale: 1 }')).toEqual([0.3]);
  });

  it('end with the scenario, and say nothing after it', () => {
    const [result] = measureSmall(saying(['{ throughout: y > 0.5, from: 11 s, scale: 1 }']));
    expect(result).toEqual({ kind: 'unformed', why: 'the result is not a number' });
  });
});

describe('what comparisons may combine', () => {
  it('adds, scales, and takes sizes and larger ones of signals and parameters', () => {
    // |y − u| is largest at the step: 1. min and max over both.
    const [size, lower, mixed] = margins(
      '{ throughout: abs(y - u) <= 1.5, scale: 1 }',
      '{ throughout: "min(y, 0.25*u, 3) > -1", from: 5 s, scale: 1 }',
      '{ at_some_time: "max(z/goal, y) - 2*goal >= -(1 - 3)", scale: 1 }',
    );
    expect(size).toBeCloseTo(0.5, 7);
    expect(lower).toBeCloseTo(1.25, 7);
    // max y = 1 − e^{−9} at the end; −2 − 2 below.
    expect(mixed).toBeCloseTo(1 - Math.exp(-9) - 4, 7);
  });
});

describe('quantities in comparisons', () => {
  it('stand on a side of their own as a limit does, or in parentheses within an expression', () => {
    const loop: SmallLoop = {
      inputs: 'goal: { unit: m }',
      plant: 'place: { lag: 1 s, of: goal, unit: m }',
      scenarios: 'run: { lasts: 5 s, inputs: { goal: { step: 1 m, at: 1 s } } }',
      requirements: [
        '{ name: A, in: run, measure: over_time, at_least: 0, holds: { throughout: place < 1500 mm, scale: 1 cm } }',
        '{ name: B, in: run, measure: over_time, at_least: 0, holds: { throughout: 1.5 m > place, scale: 10 mm } }',
        '{ name: C, in: run, measure: over_time, at_least: 0, holds: { throughout: place - (0.5 m) < 1 m, scale: 10 mm } }',
      ],
    };
    const [right, left, inside] = smallValues(loop);
    expect(right).toBeCloseTo(100 * (0.5 + Math.exp(-4)), 5);
    expect(left).toBeCloseTo(right, 9);
    expect(inside).toBeCloseTo(right, 9);
  });
});

describe('combinations', () => {
  it('take the smallest of all and the largest of one', () => {
    const all = '{ all_of: [{ throughout: y < 2 }, { at_some_time: y > 0.5 }], scale: 1 }';
    const one = '{ one_of: [{ throughout: y > 0.5 }, { at_some_time: y > 0.5 }], scale: 1 }';
    const [both, either] = margins(all, one);
    expect(both).toBeCloseTo(0.5 - Math.exp(-9), 7);
    expect(either).toBeCloseTo(0.5 - Math.exp(-9), 7);
  });

  it('ask for nothing where the condition does not hold', () => {
    // Before the step y is 2 below; after it 2 − y, at the end 1 + e^{−9}.
    const [whenever] = margins('{ throughout: { when: u > 0.5, holds: y < 2 }, scale: 1 }');
    expect(whenever).toBeCloseTo(1 + Math.exp(-9), 7);
  });
});

describe('nested windows', () => {
  it('find the answer within a time of every question', () => {
    // Whenever d > 0.5 (from 2 s to 5 s), z exceeds 0.5 within 1 s. At 2 s: the largest of z to 3 s is 1 − e^{−1}.
    const [answered] = margins(
      '{ throughout: { when: d > 0.5, holds: { at_some_time: z > 0.5, from: 0 s, to: 1 s } }, scale: 1 }',
    );
    expect(answered).toBeCloseTo(0.5 - Math.exp(-1), 6);
  });

  it('find a stretch of calm', () => {
    // At some time from 0 to 6 s z stays below 0.2 for 1 s from then on: already true at 0 s by 0.2.
    const [calm, lateCalm] = margins(
      '{ at_some_time: { throughout: z < 0.2, from: 0 s, to: 1 s }, from: 0 s, to: 6 s, scale: 1 }',
      '{ at_some_time: { throughout: z < 0.2, from: 0 s, to: 1 s }, from: 3 s, to: 8 s, scale: 1 }',
    );
    expect(calm).toBeCloseTo(0.2, 7);
    // z falls from 1 − e^{−3} at 5 s; the calm from 8 s on is best.
    expect(lateCalm).toBeCloseTo(0.2 - (1 - Math.exp(-3)) * Math.exp(-3), 6);
  });

  it('agree with a dense search of the definition', () => {
    const z = (t: number): number =>
      t < 2 ? 0 : t < 5 ? 1 - Math.exp(2 - t) : (1 - Math.exp(-3)) * Math.exp(5 - t);
    const times = fc.double({ min: 0.05, max: 4, noNaN: true });
    fc.assert(
      fc.property(times, times, times, times, (a, b, c, d) => {
        const text = `{ throughout: { at_some_time: z > 0.4, from: ${a} s, to: ${a + b} s }, from: ${c} s, to: ${c + d} s, scale: 1 }`;
        fc.pre(c + d + a < 9.5);
        const [value] = margins(text);
        let least = Number.POSITIVE_INFINITY;
        for (let i = 0; i <= 200; i++) {
          const t = c + (d * i) / 200;
          let most = Number.NEGATIVE_INFINITY;
          for (let j = 0; j <= 200; j++) {
            const at = t + a + (b * j) / 200;
            if (at <= 10) most = Math.max(most, z(at));
          }
          least = Math.min(least, most - 0.4);
        }
        // The search looks every b/200 and d/200 s, where z moves by no more than 1/s.
        expect(Math.abs(value - least)).toBeLessThan((b + d) / 200 + 1e-6);
      }),
      { numRuns: 25 },
    );
  });
});

describe('holds_up_to', () => {
  it('takes the best time of the second, as good as the first has been up to it', () => {
    // y < 0.7 up to u − … : z > 0.6 first holds at 2 + ln 2.5 = 2.916 s, where y = 1 − e^{−1.916} = 0.853 has passed 0.7.
    // The best time t balances z(t) − 0.6 and 0.7 − y(t): both rise and fall with e^{−t}.
    const [margin] = margins('{ holds: y < 0.7, holds_up_to: z > 0.6, from: 0 s, to: 5 s, scale: 1 }');
    // z − 0.6 = 0.4 − e^{2−t}; 0.7 − y = e^{1−t} − 0.3; equal at e^{−t} = 0.7/(e + e²).
    const x = 0.7 / (Math.E + Math.E ** 2);
    expect(margin).toBeCloseTo(Math.E * x - 0.3, 6);
  });
});

describe('mistakes in statements', () => {
  const errorOf = (text: string): string => {
    try {
      smallSpecOf(saying([text]));
      return '';
    } catch (error) {
      return (error as Error).message;
    }
  };

  it.each([
    ['y', 'a statement compares signals: expected one of <, <=, >, >= at its outside'],
    ['0 < y < 1', 'expected one of <, <=, >, >= at its outside, once'],
    ['{ throughout: y < 2 V, scale: 1 }', 'cannot compare a plain number and V'],
    ['{ throughout: y < , scale: 1 }', 'small.pawl.yaml:14:'],
    [
      '{ throughout: y < 1 }',
      'this comparison needs `scale:`, a plain number that counts as a headroom of 100 %',
    ],
    ['{ throughout: y*u < 1, scale: 1 }', 'a statement adds, subtracts and scales signals'],
    ['{ throughout: 1 < 2, scale: 1 }', 'this comparison has no signal in it'],
    [
      '{ throughout: y < 1, at_some_time: y < 1, scale: 1 }',
      'this statement says `throughout` and `at_some_time`',
    ],
    ['{ scale: 1 }', 'this statement says nothing; expected one of that, throughout'],
    ['{ holds_up_to: y < 1, scale: 1 }', 'this statement needs `holds:`, what holds up to then'],
    ['{ when: y < 1, from: 1 s, holds: y < 2, scale: 1 }', '`from` has no meaning beside `when`'],
    ['{ throughout: y < 1, from: 2 s, to: 1 s, scale: 1 }', '`to` must be later than `from`'],
    ['{ throughout: y < 1, from: -2 s, scale: 1 }', '`from` must be 0 or more'],
    ['{ throughout: y < 1, scale: -1 }', '`scale` must be above 0'],
    ['{ all_of: [], scale: 1 }', '`all_of` is a list of statements in brackets'],
    [
      '{ throughout: { holds: y < 1, holds_up_to: u > 1 }, scale: 1 }',
      '`holds_up_to` stands outermost, or in all_of, one_of and when',
    ],
  ])('%s', (text, message) => {
    expect(errorOf(text)).toContain(message);
  });
});
