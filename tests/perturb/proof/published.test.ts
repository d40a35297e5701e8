import { describe, expect, it } from 'vitest';
import { proveOn } from '../../../src/perturb/proof/branch_and_bound.js';
import { allRootsLeft } from '../../../src/perturb/proof/half_plane.js';
import { type Slope, SlopeField } from '../../../src/perturb/proof/slope.js';
import { expectPublished, publishedCase } from '../../published.js';
import { proveStable, rootsOf } from './families.js';

/** A case of reference/published with polynomials, relative errors of ±`half` on the uncertain coefficients. */
function relativeFamily(id: string, half: number) {
  const { nominal, uncertain } = publishedCase(id).given;
  const free: number[] = nominal.flatMap((_: number, i: number) =>
    (uncertain ?? [])[i] === false ? [] : [i],
  );
  const box = free.map((): [number, number] => [-half, half]);
  const coefficients = (field: SlopeField): Slope[] =>
    nominal.map((value: number, i: number) => {
      const k = free.indexOf(i);
      if (k < 0) return field.constant(value);
      return field.multiply(field.constant(value), field.add(field.constant(1), field.variable(k)));
    });
  return proveStable(box, coefficients, 'half plane', 20_000);
}

const fixed = (polynomial: number[]) => (field: SlopeField) =>
  polynomial.map((value) => field.constant(value));

// Kharitonov 1978 and others, as named in reference/published, group G.
describe('published robust-stability cases', () => {
  it('G01: the family with ±20 % is proved stable', () => {
    const { given } = publishedCase('G01');
    expect(relativeFamily('G01', given.relative_half_width).kind).toBe('proved');
    expectPublished('G01', 'family_stable', true);
  });

  it.each(['G01', 'G02'])('%s: proved below the published largest half width', (id) => {
    const largest = publishedCase(id).expect.largest_relative_half_width.value as number;
    expect(relativeFamily(id, 0.8 * largest).kind).toBe('proved');
  });

  it.each(['G01', 'G02'])('%s: never proved above it', (id) => {
    const largest = publishedCase(id).expect.largest_relative_half_width.value as number;
    expect(relativeFamily(id, 1.3 * largest).kind).not.toBe('proved');
  });

  it('G03: corners are not enough: both ends are stable, and the interval is refuted', () => {
    const { coefficients_without_q: fixedPart, q_values } = publishedCase('G03').given;
    const withQ = (field: SlopeField): Slope[] =>
      fixedPart.map((value: number, i: number) => (i === 1 ? field.variable(0) : field.constant(value)));
    const found = [q_values[0], q_values[1], q_values[2]].map(
      (q) => proveStable([[q, q]], withQ, 'circle').kind === 'proved',
    );
    expectPublished('G03', 'stable', found);
    const whole = proveStable([[q_values[0], q_values[2]]], withQ, 'circle');
    expect(whole).toMatchObject({ kind: 'refuted', at: [0] });
  });

  it('G04: both ends of a segment are proved stable; the segment, which touches the boundary, is not', () => {
    const { first, second } = publishedCase('G04').given;
    expect(proveStable([], fixed(first), 'half plane').kind).toBe('proved');
    expect(proveStable([], fixed(second), 'half plane').kind).toBe('proved');
    const mixed = (field: SlopeField): Slope[] =>
      first.map((value: number, i: number) => {
        const way = field.multiply(field.variable(0), field.constant(second[i] - value));
        return field.add(field.constant(value), way);
      });
    expect(proveStable([[0, 1]], mixed, 'half plane', 300).kind).not.toBe('proved');
    expect(Math.max(...rootsOf(first).map(({ real }) => real))).toBeCloseTo(
      publishedCase('G04').expect.first_abscissa.value as number,
      9,
    );
  });

  it('G05: the polynomial of the Jury criterion is proved stable', () => {
    expect(proveStable([], fixed(publishedCase('G05').given.polynomial), 'circle').kind).toBe('proved');
  });

  it('G06: points on both sides of the stability triangle', () => {
    const { polynomials } = publishedCase('G06').given;
    const found = polynomials.map((one: number[]) => proveStable([], fixed(one), 'circle').kind === 'proved');
    expectPublished('G06', 'stable', found);
  });

  // A damping ratio above ζ: no root in the sector, which is stability of the polynomial turned by asin ζ.
  it('G07: a damping ratio over a box is proved just below the published least one, and not above it', () => {
    const { mass_kg, damping_N_s_per_m, stiffness_N_per_m } = publishedCase('G07').given;
    const least = publishedCase('G07').expect.least_damping_ratio.value as number;
    const prove = (ratio: number): string => {
      const angle = Math.asin(ratio);
      return proveOn(
        [stiffness_N_per_m, damping_N_s_per_m, mass_kg],
        {
          holdsOn: (box) => {
            const field = new SlopeField(box);
            const turned = (of: (x: number) => number): Slope[] =>
              [0, 1, 2].map((k) => field.multiply(field.variable(k), field.constant(of(k * angle))));
            return allRootsLeft(field, { real: turned(Math.cos), imaginary: turned(Math.sin) });
          },
          failsAt: ([k, b, m]) => b / (2 * Math.sqrt(m * k)) < ratio,
          cut: (box) =>
            box.reduce((best, [low, high], i) => (high / low > box[best][1] / box[best][0] ? i : best), 0),
        },
        5000,
      ).kind;
    };
    expect(prove(0.98 * least)).toBe('proved');
    expect(prove(1.05 * least)).toBe('refuted');
  });
});
