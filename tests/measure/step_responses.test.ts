import { describe, expect, it } from 'vitest';
import { measureSmall, type SmallLoop, smallValues } from '../small_loop.js';

/** y as wanted, over a scenario of one step of u; each requirement a measure. */
function response(
  plant: string,
  requirements: string[],
  scenario = 'lasts: 10 s, inputs: { u: { step: 1, at: 1 s } }',
  inputs = 'u: {}',
): SmallLoop {
  return {
    inputs,
    plant,
    scenarios: `step: { ${scenario} }`,
    requirements: requirements.map((text, i) => `{ name: R${i}, in: step, ${text} }`),
  };
}

const lag = 'y: { lag: 1 s, of: u }';
/** Natural frequency 1 rad/s, damping ratio 0.5. */
const oscillator = 'v: { integral: (1 1/s^2)*(u - y) - (1 1/s)*v, unit: 1/s }\ny: { integral: v }';

describe('a response that goes the wrong way first', () => {
  // y = u·(1 − 2s)/(s + 1)²: y = 1 − (1 + 3t)e^{−t}; its minimum at t = 2/3 (derivative (3t − 2)e^{−t}).
  const plant = 'a: { lag: 1 s, of: u }\nb: { lag: 1 s, of: a }\ny: { value: b - 2*(a - b) }';
  const deepest = 3 * Math.exp(-2 / 3) - 1;

  it('is measured as a share of the step', () => {
    const [share, time] = smallValues(
      response(plant, [
        'measure: inverse_response, of: y, to: u, at_most: 1',
        'measure: time_of_smallest_value, of: y, at_most: 1 s',
      ]),
    );
    expect(share).toBeCloseTo(deepest, 6);
    expect(time).toBeCloseTo(2 / 3, 6);
  });

  it('is none where the response never does', () => {
    expect(smallValues(response(lag, ['measure: inverse_response, of: y, to: u, at_most: 1']))).toEqual([0]);
  });
});

describe('a step downwards', () => {
  it('gives what the step upwards gives', () => {
    const measures = [
      'measure: overshoot, of: y, to: u, at_most: 1',
      'measure: rise_time, of: y, to: u, at_most: 1 s',
      'measure: delay_time, of: y, to: u, at_most: 1 s',
      'measure: settling_time, of: y, to: u, band: 5 %, at_most: 1 s',
      'measure: decay_ratio, of: y, to: u, at_most: 1',
    ];
    const up = smallValues(
      response(oscillator, measures, 'lasts: 30 s, inputs: { u: { step: 2, at: 1 s } }'),
    );
    const down = smallValues(
      response(oscillator, measures, 'lasts: 30 s, inputs: { u: { step: -2, at: 1 s } }'),
    );
    down.forEach((value, i) => {
      expect(value).toBeCloseTo(up[i], 12);
    });
  });

  it('to a target of zero is measured against the size of the step', () => {
    const [share, settling] = smallValues(
      response(
        oscillator,
        [
          'measure: overshoot, of: y, to: u, at_most: 1',
          'measure: settling_time, of: y, to: u, band: 5 %, at_most: 1 s',
        ],
        'lasts: 30 s, inputs: { u: { step: -3, at: 1 s } }',
        'u: { rest: 3 }',
      ),
    );
    const [, unit] = smallValues(
      response(
        oscillator,
        [
          'measure: overshoot, of: y, to: u, at_most: 1',
          'measure: settling_time, of: y, to: u, band: 5 %, at_most: 1 s',
        ],
        'lasts: 30 s, inputs: { u: { step: 1, at: 1 s } }',
      ),
    );
    expect(share).toBeCloseTo(Math.exp((-Math.PI * 0.5) / Math.sqrt(0.75)), 7);
    expect(settling).toBeCloseTo(unit, 9);
  });

  it('is measured from where the target rests', () => {
    const [share] = smallValues(
      response(
        oscillator,
        ['measure: overshoot, of: y, to: u, at_most: 1'],
        'lasts: 30 s, inputs: { u: { step: -5, at: 1 s } }',
        'u: { rest: 3 }',
      ),
    );
    // exp(−π·0.5/√(1 − 0.25)), second-order closed form.
    expect(share).toBeCloseTo(Math.exp((-Math.PI * 0.5) / Math.sqrt(0.75)), 7);
  });
});

describe('peaks of a lightly damped response', () => {
  it('shrink by exp(−2π·ζ/√(1 − ζ²)) from one to the next', () => {
    const [ratio] = smallValues(
      response(
        oscillator,
        ['measure: decay_ratio, of: y, to: u, at_most: 1'],
        'lasts: 40 s, inputs: { u: { step: 1, at: 1 s } }',
      ),
    );
    expect(ratio).toBeCloseTo(Math.exp((-2 * Math.PI * 0.5) / Math.sqrt(0.75)), 6);
  });

  it('have no ratio without a second peak', () => {
    expect(smallValues(response(lag, ['measure: decay_ratio, of: y, to: u, at_most: 1']))).toEqual([0]);
  });
});

describe('rise and delay time', () => {
  it('take any two levels', () => {
    // A lag reaches the share p at −ln(1 − p).
    const [wide, half, late] = smallValues(
      response(lag, [
        'measure: rise_time, of: y, to: u, low: 20 %, high: 80 %, at_most: 1 s',
        'measure: delay_time, of: y, to: u, at_most: 1 s',
        'measure: delay_time, of: y, to: u, share: 95 %, at_most: 1 s',
      ]),
    );
    expect(wide).toBeCloseTo(Math.log(4), 6);
    expect(half).toBeCloseTo(Math.log(2), 6);
    expect(late).toBeCloseTo(Math.log(20), 6);
  });

  it('never end where the response stays below the level', () => {
    const results = measureSmall(
      response('y: { lag: 1 s, of: u, gain: 0.5 }', [
        'measure: rise_time, of: y, to: u, at_most: 1 s',
        'measure: delay_time, of: y, to: u, share: 60 %, at_most: 1 s',
      ]),
    );
    expect(results.map(({ kind }) => kind)).toEqual(['never', 'never']);
    expect(results[0]).toMatchObject({ why: 'longer than 9 s: reaches 49.99 % of the step, not 90 %' });
  });
});

describe('settling', () => {
  const settling = (band: string) => `measure: settling_time, of: y, to: u, band: ${band}, at_most: 1 s`;

  it('never happens where the response ends outside the band', () => {
    const [result] = measureSmall(response('y: { lag: 1 s, of: u, gain: 0.9 }', [settling('5 %')]));
    expect(result).toMatchObject({ kind: 'never', why: 'longer than 9 s: never stays in the band' });
    expect(result.kind === 'never' && result.left).toBeCloseTo(0.1, 3);
  });

  it('that ends exactly on the band has settled', () => {
    // y follows u at once with gain 0.75, exactly on the edge of a band of 25 %.
    expect(smallValues(response('y: { value: 0.75*u }', [settling('25 %')]))).toEqual([0]);
  });

  it('is 0 where the response never leaves the band', () => {
    expect(smallValues(response('y: { value: u }', [settling('1 %')]))).toEqual([0]);
  });

  it('on the last instant is the length of the window', () => {
    // A lag enters the band of 5 % at ln 20 = 2.9957 s; the scenario ends just after that.
    const lasts = 1 + Math.log(20) * (1 + 1e-9);
    const [time] = smallValues(
      response(lag, [settling('5 %')], `lasts: ${lasts} s, inputs: { u: { step: 1, at: 1 s } }`),
    );
    expect(time).toBeCloseTo(Math.log(20), 7);
    const early = 1 + Math.log(20) * (1 - 1e-6);
    const [result] = measureSmall(
      response(lag, [settling('5 %')], `lasts: ${early} s, inputs: { u: { step: 1, at: 1 s } }`),
    );
    expect(result.kind).toBe('never');
  });

  it('counts the last entry, not the first', () => {
    // Steps away at 3 s by a second input: settled at first, and again after the second event.
    const [time] = smallValues(
      response(
        'y: { value: u + d }',
        [settling('5 %')],
        'lasts: 10 s, inputs: { u: { step: 1, at: 1 s }, d: { pulse: 1, at: 3 s, for: 2 s } }',
        'u: {}\nd: {}',
      ),
    );
    expect(time).toBe(4);
  });
});

describe('recovery after a disturbance', () => {
  it('is counted from the first event into an absolute band', () => {
    // y = −(1 − e^{−t}) during a pulse of 2 s, then back: |y| = 0.1 at 2 + ln((1 − e^{−2})/0.1).
    const [time] = smallValues(
      response(
        'y: { lag: 1 s, of: d }',
        ['measure: recovery_time, of: y, to: u, band: 0.1, at_most: 9 s'],
        'lasts: 12 s, inputs: { d: { pulse: -1, at: 1 s, for: 2 s } }',
        'u: {}\nd: {}',
      ),
    );
    expect(time).toBeCloseTo(2 + Math.log((1 - Math.exp(-2)) / 0.1), 6);
  });
});
