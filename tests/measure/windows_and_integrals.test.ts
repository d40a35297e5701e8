import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { measureSmall, type SmallLoop, smallValues } from '../small_loop.js';

function follow(plant: string, requirements: string[], more: Partial<SmallLoop> = {}, lasts = 12): SmallLoop {
  return {
    inputs: 'u: {}',
    plant,
    scenarios: `run: { lasts: ${lasts} s, inputs: { u: { step: 1, at: 1 s } } }`,
    requirements: requirements.map((text, i) => `{ name: R${i}, in: run, ${text} }`),
    ...more,
  };
}

const lag = 'y: { lag: 1 s, of: u }';

describe('integrals of the tracking error', () => {
  // e = e^{−t} after the step: over T seconds 1 − e^{−T}, (1 − e^{−2T})/2, 1 − (1 + T)e^{−T}.
  it('are those of the closed form for a lag', () => {
    const T = 11;
    const [absolute, squared, late, rms, peak] = smallValues(
      follow(lag, [
        'measure: absolute_deviation_integral, of: y, to: u, at_most: 1 s',
        'measure: squared_deviation_integral, of: y, to: u, at_most: 1 s',
        'measure: late_deviation_integral, of: y, to: u, at_most: 1 s^2',
        'measure: rms_deviation, of: y, to: u, at_most: 1',
        'measure: peak_deviation, of: y, to: u, at_most: 1',
      ]),
    );
    expect(absolute).toBeCloseTo(1 - Math.exp(-T), 6);
    expect(squared).toBeCloseTo((1 - Math.exp(-2 * T)) / 2, 6);
    expect(late).toBeCloseTo(1 - (1 + T) * Math.exp(-T), 6);
    expect(rms).toBeCloseTo(Math.sqrt((1 - Math.exp(-2 * T)) / 2 / T), 6);
    expect(peak).toBe(1);
  });

  it('turn the error up where it is negative', () => {
    // ∫|sin| over whole periods: the oscillator without damping swings as 1 − cos t about 1, its error as cos t.
    const plant = 'v: { integral: (1 1/s^2)*(u - y), unit: 1/s }\ny: { integral: v }';
    const until = 1 + 4 * Math.PI;
    const [absolute] = smallValues(
      follow(
        plant,
        [`measure: absolute_deviation_integral, of: y, to: u, until: ${until} s, at_most: 1 s`],
        {},
        20,
      ),
    );
    expect(absolute).toBeCloseTo(8, 6);
  });
});

describe('a window', () => {
  it('begins at the first event and ends with the scenario unless given', () => {
    const [whole, given, later] = smallValues(
      follow(lag, [
        'measure: absolute_deviation_integral, of: y, to: u, at_most: 1 s',
        'measure: absolute_deviation_integral, of: y, to: u, from: 1 s, until: 12 s, at_most: 1 s',
        'measure: absolute_deviation_integral, of: y, to: u, from: 2 s, until: 3 s, at_most: 1 s',
      ]),
    );
    expect(given).toBe(whole);
    expect(later).toBeCloseTo(Math.exp(-1) - Math.exp(-2), 6);
  });

  it('that is empty or reaches beyond the scenario leaves the measure unformed', () => {
    const results = measureSmall(
      follow(lag, [
        'measure: largest_value, of: y, from: 5 s, until: 4 s, at_most: 1',
        'measure: largest_value, of: y, until: 13 s, at_most: 1',
      ]),
    );
    expect(results).toEqual([
      { kind: 'unformed', why: 'the window from 5 s to 4 s is empty' },
      { kind: 'unformed', why: 'the window ends at 13 s, after the scenario, which lasts 12 s' },
    ]);
  });

  it('cuts additive measures without a rest', () => {
    fc.assert(
      fc.property(fc.double({ min: 1.001, max: 11.9, noNaN: true }), (cut) => {
        const between = (from: number, until: number): string =>
          `measure: squared_deviation_integral, of: y, to: u, from: ${from} s, until: ${until} s, at_most: 1 s`;
        const [whole, first, second] = smallValues(
          follow(lag, [between(1, 12), between(1, cut), between(cut, 12)]),
        );
        expect(Math.abs(first + second - whole)).toBeLessThan(1e-12);
      }),
      { numRuns: 20 },
    );
  });
});

describe('steady state', () => {
  it('is the size of the mean error at the end', () => {
    // A lag of gain 0.8 stays 0.2 below.
    const [tenth, given] = smallValues(
      follow('y: { lag: 0.1 s, of: u, gain: 0.8 }', [
        'measure: steady_state_error, of: y, to: u, at_most: 1',
        'measure: steady_state_error, of: y, to: u, over: 5 s, at_most: 1',
      ]),
    );
    expect(tenth).toBeCloseTo(0.2, 12);
    expect(given).toBeCloseTo(0.2, 12);
  });

  it('cannot be formed over more than the window', () => {
    const [result] = measureSmall(
      follow(lag, ['measure: steady_state_error, of: y, to: u, over: 12 s, at_most: 1']),
    );
    expect(result).toMatchObject({ kind: 'unformed', why: '`over` (12 s) is longer than the window' });
  });
});

describe('an oscillation', () => {
  it('has its amplitude and frequency', () => {
    // 1 − cos(3t): amplitude 1, 3/(2π) Hz.
    const plant = 'v: { integral: (9 1/s^2)*(u - y), unit: 1/s }\ny: { integral: v }';
    const [amplitude, frequency, largest, smallest] = smallValues(
      follow(plant, [
        'measure: oscillation_amplitude, of: y, at_most: 1',
        'measure: oscillation_frequency, of: y, at_most: 1 Hz',
        'measure: largest_value, of: y, at_most: 1',
        'measure: smallest_value, of: y, from: 2 s, at_least: 0',
      ]),
    );
    expect(amplitude).toBeCloseTo(1, 6);
    expect(frequency).toBeCloseTo(3 / (2 * Math.PI), 6);
    expect(largest).toBeCloseTo(2, 6);
    expect(smallest).toBeCloseTo(0, 6);
  });

  it('of two equal peaks has its largest value at the first', () => {
    // Pulses of the same height: the plateau is reached first at 1 s.
    const loop = follow('y: { value: u }', ['measure: time_of_largest_value, of: y, at_most: 1 s']);
    loop.scenarios =
      'run: { lasts: 9 s, inputs: { u: [{ pulse: 1, at: 1 s, for: 1 s }, { pulse: 1, at: 5 s, for: 1 s }] } }';
    expect(smallValues(loop)).toEqual([0]);
  });

  it('of a signal that stays has no frequency', () => {
    const loop = follow('y: { value: 0*u }', ['measure: oscillation_frequency, of: y, at_most: 1 Hz']);
    expect(smallValues(loop)).toEqual([0]);
  });
});

describe('a corridor', () => {
  const step = 'measure: corridor_clearance, of: y, at_least: 0';

  it('is left where the clearance is negative', () => {
    // y = 1 − e^{−(t−1)} against a lower bound rising from 0 at 1 s to 1 at 3 s: y − (t−1)/2 is smallest at an end, 0 at 1 s
    // and 1 − e^{−2} − 1 at 3 s.
    const [both, lower] = smallValues(
      follow(lag, [
        `${step}, lower: [[1 s, 0], [3 s, 1]], upper: [[0 s, 1.5], [12 s, 1.5]]`,
        `${step}, lower: [[1 s, -0.5], [2 s, -0.5], [2 s, 0.2], [12 s, 0.2]]`,
      ]),
    );
    expect(both).toBeCloseTo(-Math.exp(-2), 6);
    // The bound jumps to 0.2 at 2 s, where y = 1 − e^{−1}.
    expect(lower).toBeCloseTo(1 - Math.exp(-1) - 0.2, 6);
  });

  it('is touched between its corners where the curve bends', () => {
    // 1 − e^{−t} under the straight line 0.2 + t/2 from t = 0: closest where the slopes are equal, e^{−t} = 1/2.
    const [clearance] = smallValues(follow(lag, [`${step}, upper: [[1 s, 0.2], [5 s, 2.2]]`]));
    expect(clearance).toBeCloseTo(0.2 + Math.log(2) / 2 - 0.5, 6);
  });

  it.each([
    ['upper: [[0 s, 1], [1 s, 2 V]]', 'a value of `upper`'],
    ['upper: [[2 s, 1], [1 s, 2]]', 'the corners of `upper` come in order of time'],
    ['lower: [[0 s, 1]]', '`lower` needs at least two corners'],
    ['lower: [[0 s, 1], 2]', 'a time and a value, such as [0 s, 1 V]'],
  ])('with %s is an error of the spec', (bound, message) => {
    expect(() => measureSmall(follow(lag, [`${step}, ${bound}`]))).toThrow(message);
  });

  it('without a bound cannot be formed', () => {
    expect(measureSmall(follow(lag, [step]))[0]).toMatchObject({ kind: 'unformed' });
  });
});
