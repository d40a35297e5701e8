import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { extremeOverBand } from '../../src/linear/band_extremes.js';
import { bandwidthOf } from '../../src/linear/bandwidth.js';
import { complementaryOf } from '../../src/linear/closed_loop.js';
import type { Complex } from '../../src/linear/complex.js';
import { complexEigenvalues } from '../../src/linear/complex_eigenvalues.js';
import { largestGain } from '../../src/linear/largest_gain.js';
import { liftedMargins } from '../../src/linear/lifted_margins.js';
import { liftedResponse, liftedSensitivity } from '../../src/linear/lifted_response.js';
import { COMPLEMENTARY, LOOP_GAIN, SENSITIVITY } from '../../src/linear/loop_response.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { fromRows, multiply, toRows } from '../../src/linear/matrix.js';
import { prepareResponseMatrix, responseAt } from '../../src/linear/response.js';
import {
  loopSeenAtOneFrequency,
  sameFrequencyResponse,
  sineResponse,
} from '../../src/linear/sine_response.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { alternating, lifted, randomLoop, repeatable } from './loops.js';

const seeds = fc.integer({ min: 0, max: 1e6 });
const counts = fc.integer({ min: 2, max: 6 });

/** A random loop whose gain differs from sample to sample, stable when closed; undefined where it is not. */
function stableAlternating(seed: number, changes: number): StateEquations | undefined {
  const loop = alternating(1 + (seed % 4), changes, repeatable(seed));
  return liftedMargins(loop).stable ? loop : undefined;
}

describe('a loop of one rate seen over a longer cycle', () => {
  it('has one response, which is its own', () => {
    fc.assert(
      fc.property(seeds, counts, fc.double({ min: 0.01, max: 1, noNaN: true }), (seed, changes, share) => {
        const loop = randomLoop(1 + (seed % 5), repeatable(seed));
        fc.pre(marginsOfLoop(loop).stable);
        const seen = loopSeenAtOneFrequency(liftedSensitivity(lifted(loop, changes)));
        expect(seen.period! / loop.period!).toBeCloseTo(1, 14);
        const frequency = (share * Math.PI) / loop.period!;
        const [own, found] = [loop, seen].map((each) => responseAt(each, frequency));
        const apart = Math.hypot(own.real - found.real, own.imaginary - found.imaginary);
        // It comes from 1/S, so that the rounding of one limits how small a gain has its digits.
        expect(apart).toBeLessThan(1e-9 * Math.hypot(own.real, own.imaginary) + 1e-14);
      }),
      { numRuns: 100 },
    );
  });

  it('has the crossovers, the bandwidth and the masks of the loop itself', () => {
    const random = repeatable(5);
    let judged = 0;
    for (let k = 0; k < 60; k++) {
      const loop = randomLoop(1 + (k % 5), random);
      const own = marginsOfLoop(loop);
      if (!own.stable) continue;
      judged++;
      const cycle = lifted(loop, 2 + (k % 4));
      const seen = loopSeenAtOneFrequency(liftedSensitivity(cycle));
      const found = marginsOfLoop(seen).gainCrossings;
      expect(found.length).toBe(own.gainCrossings.length);
      found.forEach(({ frequency }, i) => {
        expectSame(frequency, own.gainCrossings[i].frequency);
      });
      expectSame(bandwidthOf(complementaryOf(seen)), bandwidthOf(complementaryOf(loop)));
      const top = Math.PI / loop.period!;
      const band = { low: 0.1 * random() * top, high: (0.2 + 0.8 * random()) * top };
      for (const which of ['largest', 'smallest'] as const) {
        const sizes = [seen, loop].map((each) => extremeOverBand(each, LOOP_GAIN, which, band).value);
        expectSame(sizes[0], sizes[1]);
      }
      for (const response of [SENSITIVITY, COMPLEMENTARY]) {
        const size = largestGain(sineResponse(liftedResponse(cycle, response)), band).value;
        expectSame(size, extremeOverBand(loop, response, 'largest', band).value);
      }
    }
    expect(judged).toBeGreaterThan(25);
  });
});

function expectSame(actual: number, expected: number): void {
  if (actual === expected || (Number.isNaN(actual) && Number.isNaN(expected))) return;
  expect(Math.abs(actual / expected - 1), `${actual} for ${expected}`).toBeLessThan(1e-8);
}

/** What a lifted system makes of e^{jωt}, sample after sample from rest, once that has died out: the values of one cycle. */
function simulated(system: StateEquations, frequency: number, cycles: number): Complex[] {
  const { a, b, c, d, period } = system;
  const changes = b.columns;
  const wave = (part: (x: number) => number, cycle: number) =>
    fromRows(Array.from({ length: changes }, (_, k) => [part(frequency * (cycle + k / changes) * period!)]));
  const outputs = [Math.cos, Math.sin].map((part) => {
    let x = fromRows(
      Array.from({ length: a.rows }, () => [0]),
      1,
    );
    let y = x;
    for (let cycle = 0; cycle <= cycles; cycle++) {
      const u = wave(part, cycle);
      y = sum(multiply(c, x), multiply(d, u));
      x = sum(multiply(a, x), multiply(b, u));
    }
    return toRows(y).flat();
  });
  // Turned back to the cycle at zero.
  const turn = -frequency * cycles * period!;
  return outputs[0].map((real, i) => ({
    real: real * Math.cos(turn) - outputs[1][i] * Math.sin(turn),
    imaginary: real * Math.sin(turn) + outputs[1][i] * Math.cos(turn),
  }));
}

function sum(one: ReturnType<typeof fromRows>, other: ReturnType<typeof fromRows>): typeof one {
  return { ...one, data: one.data.map((x, i) => x + other.data[i]) };
}

describe('a loop that differs from sample to sample', () => {
  it('answers a sine as its simulation does: in all, and at the frequency of the sine', () => {
    let judged = 0;
    for (let seed = 0; seed < 60; seed++) {
      const loop = stableAlternating(seed, 2 + (seed % 4));
      if (!loop) continue;
      const sensitivity = liftedSensitivity(loop);
      const { decayRate } = liftedMargins(loop);
      const cycles = Math.ceil(35 / (decayRate * loop.period!));
      if (cycles > 20_000) continue;
      judged++;
      const changes = loop.b.columns;
      const spacing = loop.period! / changes;
      const frequency = ((0.05 + 0.9 * repeatable(seed)()) * Math.PI) / spacing;
      const values = simulated(sensitivity, frequency, cycles);
      const meanSquare = values.reduce((total, z) => total + z.real ** 2 + z.imaginary ** 2, 0) / changes;
      const all = prepareResponseMatrix(sineResponse(sensitivity))(frequency).flat();
      const length = Math.hypot(...all.flatMap(({ real, imaginary }) => [real, imaginary]));
      expect(length / Math.sqrt(meanSquare)).toBeCloseTo(1, 8);
      const same = responseAt(sameFrequencyResponse(sensitivity), frequency);
      const [real, imaginary] = projected(values, frequency * spacing);
      expect(same.real).toBeCloseTo(real, 8);
      expect(same.imaginary).toBeCloseTo(imaginary, 8);
      // What is seen at one frequency is what returns over what goes out there.
      const seen = responseAt(loopSeenAtOneFrequency(sensitivity), frequency);
      const out = { real: real * (1 + seen.real) - imaginary * seen.imaginary };
      expect(out.real).toBeCloseTo(1, 7);
    }
    expect(judged).toBeGreaterThan(15);
  });

  it('never makes more of a sine than of the worst of all signals', () => {
    fc.assert(
      fc.property(seeds, counts, (seed, changes) => {
        const loop = stableAlternating(seed, changes);
        fc.pre(loop !== undefined);
        const margins = liftedMargins(loop!);
        const [s, t] = [SENSITIVITY, COMPLEMENTARY].map(
          (response) => largestGain(sineResponse(liftedResponse(loop!, response))).value,
        );
        expect(s).toBeLessThanOrEqual(margins.sensitivityPeak * (1 + 1e-8));
        expect(t).toBeLessThanOrEqual(margins.complementaryPeak * (1 + 1e-8));
      }),
      { numRuns: 40 },
    );
  });

  it('is at the edge with a factor on one frequency alone where what is seen there crosses −1', () => {
    let judged = 0;
    for (let seed = 100; seed < 220; seed++) {
      const loop = stableAlternating(seed, 2 + (seed % 3));
      if (!loop) continue;
      const sensitivity = liftedSensitivity(loop);
      const changes = loop.b.columns;
      const crossings = marginsOfLoop(loopSeenAtOneFrequency(sensitivity)).phaseCrossings;
      for (const { frequency, factor } of crossings) {
        // At these frequencies the sine has the frequency of its own mirror image.
        if (Math.abs(Math.sin((frequency * loop.period!) / 2)) < 1e-6) continue;
        if (Math.abs(Math.cos((frequency * loop.period!) / 2)) < 1e-6) continue;
        judged++;
        // S + (I − S)·(I + (c − 1)·v·vᴴ) is singular at the edge.
        const matrix = withFactor(
          prepareResponseMatrix(sensitivity)(frequency),
          factor,
          (frequency * loop.period!) / changes,
        );
        const sizes = complexEigenvalues(matrix).map(({ real, imaginary }) => Math.hypot(real, imaginary));
        expect(Math.min(...sizes)).toBeLessThan(1e-7);
      }
    }
    expect(judged).toBeGreaterThan(20);
  });
});

/** The part e^{j·angle·i} of some values. */
function projected(values: readonly Complex[], angle: number): [number, number] {
  let [real, imaginary] = [0, 0];
  values.forEach((z, i) => {
    const [cosine, sine] = [Math.cos(angle * i), -Math.sin(angle * i)];
    real += (z.real * cosine - z.imaginary * sine) / values.length;
    imaginary += (z.real * sine + z.imaginary * cosine) / values.length;
  });
  return [real, imaginary];
}

/** I + (c − 1)·(I − S)·v·vᴴ */
function withFactor(sensitivity: Complex[][], factor: number, angle: number): Complex[][] {
  const n = sensitivity.length;
  return sensitivity.map((row, i) => {
    // Entry i of (I − S)·v
    const [seen, turn] = [projected(row, -angle), angle * i];
    const real = Math.cos(turn) / n - seen[0];
    const imaginary = Math.sin(turn) / n - seen[1];
    return row.map((_, k) => {
      const [cosine, sine] = [Math.cos(angle * k), -Math.sin(angle * k)];
      return {
        real: (i === k ? 1 : 0) + (factor - 1) * (real * cosine - imaginary * sine),
        imaginary: (factor - 1) * (real * sine + imaginary * cosine),
      };
    });
  });
}
