import { describe, expect, it } from 'vitest';
import { bandwidthOf } from '../../src/linear/bandwidth.js';
import { complementaryOf, sensitivityOf } from '../../src/linear/closed_loop.js';
import { discMarginOfLoop } from '../../src/linear/disc_margin.js';
import { largestGain } from '../../src/linear/largest_gain.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { closedLoopDecay, modesOf } from '../../src/linear/modes.js';
import { responseAt } from '../../src/linear/response.js';
import { expectPublished, publishedCase } from '../published.js';
import { loopOf } from './loops.js';

const DEGREES = 180 / Math.PI;

// Each published case names its own source: reference/published/README.md.
describe('frequency figures of the standard second-order system', () => {
  for (let k = 1; k <= 9; k++) {
    const id = `A0${k}`;
    const { given, title, expect: expected } = publishedCase(id);
    it(`${id}: ${title}`, () => {
      const w: number = given.natural_frequency_rad_per_s;
      const z: number = given.damping_ratio;
      const loop = loopOf([w * w], [1, 2 * z * w, 0]);
      const { gainCrossings, phaseMargin, complementaryPeak } = marginsOfLoop(loop);
      expectPublished(id, 'open_loop_crossover', gainCrossings[0].frequency);
      expectPublished(id, 'open_loop_phase_margin', phaseMargin * DEGREES);
      expectPublished(id, 'bandwidth_half_power', bandwidthOf(complementaryOf(loop)));
      expectPublished(id, 'bandwidth_half_power', bandwidthOf(loopOf([w * w], [1, 2 * z * w, w * w])));
      const { dampingRatio, decayRate } = closedLoopDecay(loop);
      expect(dampingRatio).toBeCloseTo(z, 13);
      expect(decayRate).toBeCloseTo(z * w, 13);
      if (!('resonance_peak' in expected)) return;
      expectPublished(id, 'resonance_peak', complementaryPeak.value);
      expectPublished(id, 'resonance_frequency', complementaryPeak.frequency!);
      expectPublished(id, 'resonance_peak', largestGain(complementaryOf(loop)).value);
    });
  }

  for (const [id, denominator] of [
    ['A10', [0.25, 1]],
    ['A11', [1, 2, 1]],
  ] as const) {
    it(`${id}: bandwidth, ${publishedCase(id).title}`, () => {
      expectPublished(id, 'bandwidth_half_power', bandwidthOf(loopOf([1], [...denominator])));
    });
  }
});

describe('disc margins', () => {
  for (const id of ['D01', 'D03', 'D04', 'D05', 'D06', 'D08']) {
    const { given, title, expect: expected } = publishedCase(id);
    it(`${id}: ${title}`, () => {
      const { margin, frequency, gainRange, phaseMargin } = discMarginOfLoop(
        loopOf(given.numerator, given.denominator),
      );
      expectPublished(id, 'disk_margin', margin);
      if ('disk_margin_frequency' in expected) expectPublished(id, 'disk_margin_frequency', frequency!);
      if (!('disk_gain_range' in expected)) return;
      expectPublished(id, 'disk_gain_range', [gainRange.down, gainRange.up]);
      expectPublished(id, 'disk_phase_margin', phaseMargin * DEGREES);
    });
  }

  // K04: 2·(g − 1)/(g + 1) and 2·tan(phase/2).
  it('guarantee the gain and phase that the published floors ask for', () => {
    const { given, expect: expected } = publishedCase('K04');
    const loop = loopOf([2], [1, 1, 0]);
    const { margin, gainRange, phaseMargin } = discMarginOfLoop(loop);
    expect(gainRange.up).toBeCloseTo((2 + margin) / (2 - margin), 12);
    const needed = expected.disk_margin_for_gain.value as number;
    const gain = 10 ** (given.gain_margin_floor_dB / 20);
    expect(margin >= needed).toBe(gainRange.up >= gain);
    expect(margin >= (expected.disk_margin_for_phase.value as number)).toBe(phaseMargin >= Math.PI / 4);
  });

  it('are zero for an unstable loop', () => {
    const { margin, gainRange, phaseMargin } = discMarginOfLoop(loopOf([10], [1, 3, 3, 1]));
    expect([margin, gainRange.up, gainRange.down, phaseMargin]).toEqual([0, 1, 1, 0]);
  });

  it('are 2 when nothing but the sign of the loop could destabilise it', () => {
    // L = 0: S − 1/2 is 1/2 everywhere.
    expect(discMarginOfLoop(loopOf([0], [1, 1]))).toMatchObject({
      margin: 2,
      gainRange: { down: 0, up: Infinity },
    });
  });
});

describe('bandwidth', () => {
  it('is taken at the first fall, also when the response comes back', () => {
    // A notch at 1 rad/s in an otherwise flat response falls below 1/√2 first on its near side: closed form below.
    const notch = loopOf([1, 0, 1], [1, 0.2, 1]);
    const expected = (Math.sqrt(0.04 + 4) - 0.2) / 2;
    expect(bandwidthOf(notch)).toBeCloseTo(expected, 12);
  });

  it('is infinite for a response that never falls so far', () => {
    expect(bandwidthOf(loopOf([1, 1], [1, 2]))).toBe(Number.POSITIVE_INFINITY);
    expect(bandwidthOf(loopOf([1], [1, 0.1], 0.5))).toBe(Number.POSITIVE_INFINITY);
  });

  it('of a sampled lag is the closed form', () => {
    // |1 − a|²/|e^{jθ} − a|² = 1/2 gives cos θ = 2 − (a + 1/a)/2.
    const a = 0.8;
    const period = 0.02;
    const expected = Math.acos(2 - (a + 1 / a) / 2) / period;
    expect(bandwidthOf(loopOf([1 - a], [1, -a], period)) / expected).toBeCloseTo(1, 12);
  });

  it('is refused where the value at zero frequency is zero or infinite', () => {
    expect(() => bandwidthOf(loopOf([1, 0], [1, 1]))).toThrow(/no bandwidth.* is 0/);
    expect(() => bandwidthOf(loopOf([1], [1, 0]))).toThrow(/no bandwidth.* is Infinity/);
  });
});

describe('closing a loop', () => {
  it('gives sensitivities that add up to one at every frequency', () => {
    const loop = loopOf([0.5, 0.3], [1, -1.2, 0.5], 0.1);
    for (const frequency of [0, 0.1, 3, 20, Math.PI / 0.1]) {
      const one = responseAt(sensitivityOf(loop), frequency);
      const other = responseAt(complementaryOf(loop), frequency);
      expect(one.real + other.real).toBeCloseTo(1, 12);
      expect(one.imaginary + other.imaginary).toBeCloseTo(0, 12);
    }
  });

  it('with a feedthrough of −1 is refused', () => {
    expect(() => sensitivityOf(loopOf([-1, 0], [1, 1]))).toThrow(/feedthrough is -1/);
  });
});

describe('modes of sampled systems', () => {
  it('come from ln(z)/T', () => {
    const period = 0.05;
    const [s, w] = [-0.7, 9];
    const radius = Math.exp(s * period);
    const { a } = loopOf([1], [1, -2 * radius * Math.cos(w * period), radius * radius], period);
    for (const { pole, dampingRatio, decayRate } of modesOf(a, period)) {
      expect(pole.real).toBeCloseTo(s, 11);
      expect(Math.abs(pole.imaginary)).toBeCloseTo(w, 11);
      expect(dampingRatio).toBeCloseTo(-s / Math.hypot(s, w), 12);
      expect(decayRate).toBeCloseTo(-s, 11);
    }
  });

  it('keep the digits of poles that are slow against the period', () => {
    const { a } = loopOf([1], [1, -(1 - 2 ** -40)], 1e-6);
    expect(modesOf(a, 1e-6)[0].decayRate / (2 ** -40 / 1e-6)).toBeCloseTo(1, 11);
  });

  it('tell delays, growth, rest and alternation apart', () => {
    const at = (pole: number) => modesOf(loopOf([1], [1, -pole], 1).a, 1)[0];
    expect(at(0)).toMatchObject({ decayRate: Number.POSITIVE_INFINITY, dampingRatio: 1 });
    expect(at(1)).toMatchObject({ decayRate: -0, dampingRatio: 0 });
    expect(at(1.5).dampingRatio).toBe(-1);
    expect(at(-0.5).dampingRatio).toBeCloseTo(Math.LN2 / Math.hypot(Math.LN2, Math.PI), 14);
  });

  it('are listed slowest first, and a loop without states has none', () => {
    const rates = modesOf(loopOf([1], [1, 111, 1110, 1000]).a, undefined).map(({ decayRate }) => decayRate);
    expect(rates.map((rate) => Math.round(rate))).toEqual([1, 10, 100]);
    expect(closedLoopDecay(loopOf([3], [1], 0.1))).toEqual({
      dampingRatio: 1,
      decayRate: Number.POSITIVE_INFINITY,
    });
  });
});
