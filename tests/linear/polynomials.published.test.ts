import { describe, expect, it } from 'vitest';
import { modesOf } from '../../src/linear/modes.js';
import { areStable, polesOf } from '../../src/linear/poles.js';
import { responseAt } from '../../src/linear/response.js';
import { expectPublished, publishedCase } from '../published.js';
import { loopOf } from './loops.js';
import { stateEquationsOf } from './polynomial_ratio.js';

function rootsOf(polynomial: number[]) {
  return polesOf(loopOf([1], polynomial).a, undefined);
}

function isStable(polynomial: number[], period?: number): boolean {
  const { a } = loopOf([1], polynomial, period);
  return areStable(polesOf(a, period), period);
}

const abscissa = (polynomial: number[]) => Math.max(...rootsOf(polynomial).map(({ real }) => real));

/** The largest x in [0, 1] up to which a property holds, by halving. */
function largest(holds: (x: number) => boolean): number {
  let [low, high] = [0, 1];
  for (let k = 0; k < 60; k++) {
    const middle = (low + high) / 2;
    if (holds(middle)) low = middle;
    else high = middle;
  }
  return low;
}

// Each published case names its own source: reference/published/README.md.
describe('stability of polynomials by their roots', () => {
  it(`G01: ${publishedCase('G01').title}`, () => {
    const { nominal, relative_half_width: width } = publishedCase('G01').given;
    // Kharitonov, 1978. Low and high by ascending powers: low low high high and its three shifts.
    const patterns = [
      [0, 0, 1, 1],
      [1, 1, 0, 0],
      [0, 1, 1, 0],
      [1, 0, 0, 1],
    ];
    const corners = (relative: number): number[][] =>
      patterns.map((pattern) =>
        nominal.map(
          (x: number, i: number) => x * (pattern[(nominal.length - 1 - i) % 4] ? 1 + relative : 1 - relative),
        ),
      );
    expectPublished('G01', 'corner_polynomials', corners(width));
    expectPublished(
      'G01',
      'family_stable',
      corners(width).every((corner) => isStable(corner)),
    );
    const radius = largest((relative) => corners(relative).every((corner) => isStable(corner)));
    expectPublished('G01', 'largest_relative_half_width', radius);
  });

  it(`G02: ${publishedCase('G02').title}`, () => {
    const { nominal } = publishedCase('G02').given;
    const radius = largest((relative) => {
      for (let corner = 0; corner < 8; corner++) {
        const signs = [0, 1, 2].map((bit) => (corner & (1 << bit) ? 1 : -1));
        if (!isStable([1, ...signs.map((sign, i) => nominal[i + 1] * (1 + sign * relative))])) return false;
      }
      return true;
    });
    expectPublished('G02', 'largest_relative_half_width', radius);
  });

  it(`G03: ${publishedCase('G03').title}`, () => {
    const { coefficients_without_q: base, q_values: values } = publishedCase('G03').given;
    const members = values.map((q: number) => [base[0], q, ...base.slice(2)]) as number[][];
    expectPublished(
      'G03',
      'stable',
      members.map((member) => isStable(member, 1)),
    );
    const moduli = members.map((member) =>
      Math.max(...rootsOf(member).map((z) => Math.hypot(z.real, z.imaginary))),
    );
    expectPublished('G03', 'largest_root_modulus', moduli);
  });

  it(`G04: ${publishedCase('G04').title}`, () => {
    const { first, second, weight } = publishedCase('G04').given;
    const mean = first.map((x: number, i: number) => weight * x + (1 - weight) * second[i]);
    expectPublished('G04', 'first_abscissa', abscissa(first));
    expectPublished('G04', 'second_abscissa', abscissa(second));
    expectPublished('G04', 'mean_abscissa', abscissa(mean));
    const rightmost = rootsOf(mean).sort((a, b) => b.real - a.real)[0];
    expectPublished('G04', 'mean_oscillation_frequency', Math.abs(rightmost.imaginary));
  });

  it(`G05: ${publishedCase('G05').title}`, () => {
    const { polynomial } = publishedCase('G05').given;
    expectPublished('G05', 'stable', isStable(polynomial, 1));
    const roots = rootsOf(polynomial).map(({ real }) => real);
    expectPublished(
      'G05',
      'roots',
      roots.sort((a, b) => a - b),
    );
    // The response 1/p at z = 1 and z = −1 is one over the polynomial there.
    const inverse = loopOf([1], polynomial, 1);
    expectPublished('G05', 'value_at_one', 1 / responseAt(inverse, 0).real);
    expectPublished('G05', 'value_at_minus_one', 1 / responseAt(inverse, Math.PI).real);
  });

  it(`G06: ${publishedCase('G06').title}`, () => {
    const { polynomials } = publishedCase('G06').given;
    expectPublished(
      'G06',
      'stable',
      polynomials.map((polynomial: number[]) => isStable(polynomial, 1)),
    );
  });

  it(`G07: ${publishedCase('G07').title}`, () => {
    const {
      mass_kg: masses,
      damping_N_s_per_m: dampings,
      stiffness_N_per_m: stiffnesses,
    } = publishedCase('G07').given;
    const corners: { ratio: number; corner: number[] }[] = [];
    for (const i of [0, 1]) {
      for (const j of [0, 1]) {
        for (const k of [0, 1]) {
          const { a } = loopOf([1], [masses[i], dampings[j], stiffnesses[k]]);
          corners.push({ ratio: modesOf(a, undefined)[0].dampingRatio, corner: [i, j, k] });
        }
      }
    }
    corners.sort((a, b) => a.ratio - b.ratio);
    expectPublished('G07', 'least_damping_ratio', corners[0].ratio);
    expectPublished('G07', 'greatest_damping_ratio', corners[7].ratio);
    expectPublished('G07', 'worst_corner', corners[0].corner);
    const ratio = corners[0].ratio;
    const overshoot = 100 * Math.exp((-Math.PI * ratio) / Math.sqrt(1 - ratio * ratio));
    expectPublished('G07', 'greatest_overshoot', overshoot);
  });
});

describe('state equations of a transfer function', () => {
  it('have its response, whatever the leading coefficient and leading zeros', () => {
    const system = stateEquationsOf({
      numerator: [0, 0, 2, 6],
      denominator: [0, 4, 8, 12],
      period: undefined,
    });
    expect(system.a.rows).toBe(2);
    // (2s + 6)/(4s² + 8s + 12) at s = j: (6 + 2j)/(8 + 8j) = 0.5 − 0.25j.
    const { real, imaginary } = responseAt(system, 1);
    expect(real).toBeCloseTo(0.5, 15);
    expect(imaginary).toBeCloseTo(-0.25, 15);
  });

  it('are refused without a denominator, or when the numerator has the higher degree', () => {
    expect(() => loopOf([1], [0, 0])).toThrow(/denominator 0/);
    expect(() => loopOf([1, 0, 0], [1, 1])).toThrow(/degree 2 over a denominator of degree 1/);
  });

  it('of a zero numerator give nothing out', () => {
    expect(responseAt(loopOf([0, 0], [1, 1]), 2)).toEqual({ real: 0, imaginary: 0 });
  });
});
