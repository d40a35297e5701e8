import { describe, expect, it } from 'vitest';
import { expectPublished, publishedCase } from '../../published.js';
import { measured } from '../measured.js';
import { distance, outputs, ratioAt, responses } from './law.js';

const angles = [0.01, 0.2, 1, 2, 3.1];

/** Whether a law has the response of a ratio of polynomials in z. */
function expectRatio(signal: string, period: number, numerator: number[], denominator: number[]): void {
  responses({ signals: [signal], period }, angles).forEach((found, k) => {
    const wanted = ratioAt(numerator, denominator, angles[k]);
    expect(distance(found, wanted) / Math.hypot(...wanted)).toBeLessThan(1e-11);
  });
}

describe('sampled equivalents', () => {
  it('of a lag behind a hold are a low_pass by the exact rule (B03)', () => {
    const { given, expect: figures } = publishedCase('B03');
    expectRatio(
      `out: { low_pass: { time_constant: ${given.a_rad_per_s} rad/s, sum_by: exact }, of: x }`,
      given.sampling_period_s,
      figures.numerator_no_delay.value as number[],
      figures.denominator_no_delay.value as number[],
    );
  });

  const { given, expect: figures } = publishedCase('B08');
  const period = given.sampling_period_s;
  const lag = `time_constant: ${given.lag_time_constant_s} s, sum_by: trapezoid`;
  const ofFigure = (name: string): [number[], number[]] => [
    figures[`${name}_numerator`].value as number[],
    figures[`${name}_denominator`].value as number[],
  ];

  it('of a lag by the trapezoid rule are a low_pass (B08)', () => {
    expectRatio(`out: { low_pass: { ${lag} }, of: x }`, period, ...ofFigure('lag'));
  });

  it('of a lag that is matched at a frequency are a low_pass with exact_at (B08)', () => {
    const at = given.pre_warp_frequency_rad_per_s;
    const signal = `out: { low_pass: { ${lag}, exact_at: ${at} rad/s }, of: x }`;
    expectRatio(signal, period, ...ofFigure('pre_warped'));
    const [[re, im]] = responses({ signals: [signal], period }, [at * period]);
    const turn = at * given.lag_time_constant_s;
    expect(re).toBeCloseTo(1 / (1 + turn * turn), 12);
    expect(im).toBeCloseTo(-turn / (1 + turn * turn), 12);
  });

  it('of a proportional-integral controller by the trapezoid rule are a pid in standard form (B08)', () => {
    const settings = `form: standard, kp: ${given.gain}, integral_time: ${given.integral_time_s} s, sum_by: trapezoid`;
    expectRatio(`out: { pid: { ${settings} }, of: x }`, period, ...ofFigure('controller'));
  });
});

/** The largest sensitivity of a loop around a pid in interacting form, at a sampling period. */
function sensitivityPeak(plant: string, deadTime: number, settings: string, period: number): number {
  const { margin } = measured(`
inputs: { wanted: {} }
plant: { ${plant} }
sensors: { seen: { of: level } }
controllers:
  law:
    every: ${period} s
    delay: ${deadTime} s
    signals: { command: { pid: { form: interacting, ${settings} }, of: wanted - seen } }
actuators: { drive: { of: command } }
scenarios: { any: { lasts: 1 s, inputs: { wanted: { step: 1, at: 0 s } } } }
requirements: [{ name: margin, measure: modulus_margin, at: drive, at_least: 0.5 }]
`);
  return 1 / margin;
}

describe('controllers tuned by published rules', () => {
  const plants = {
    E04: {
      plant:
        'a: { lag: 1 s, of: drive }, b: { lag: 1 s, of: a }, c: { lag: 1 s, of: b }, level: { lag: 1 s, of: c }',
      deadTime: 0,
    },
    E08: { plant: 'a: { lag: 20 s, of: drive }, level: { lag: 2 s, of: a }', deadTime: 1 },
  };
  for (const [id, { plant, deadTime }] of Object.entries(plants)) {
    it(`have the published sensitivity, sampled ever faster (${id})`, () => {
      const figures = publishedCase(id).expect;
      const [kp, ti, td] = ['gain', 'integral_time', 'derivative_time'].map((name) => figures[name].value);
      const settings = `kp: ${kp}, integral_time: ${ti} s, derivative_time: ${td} s`;
      const [coarse, fine] = [0.02, 0.01].map((period) => sensitivityPeak(plant, deadTime, settings, period));
      expect(coarse).toBeGreaterThan(fine);
      // The hold costs half a period of delay, in proportion; what is left of it after extrapolation goes with its square.
      expectPublished(id, 'sensitivity_peak', 2 * fine - coarse, 3e-4);
    });
  }
});

describe('the steady gain of an observer', () => {
  it('of a random walk seen through equal noise is the golden ratio less one (closed form)', () => {
    // P = P + 1 - P²/(P + 1) has the solution P = (1 + √5)/2, and L = P/(P + 1) = P - 1.
    const observer = (uses: string): string[] => [
      'out: { estimate: walk }',
      `walk: { observer: { states: [out], measured: x, state_matrix: 1, output_matrix: 1, process_covariance: 1, measurement_covariance: 1, uses: ${uses} } }`,
    ];
    expect(outputs({ signals: observer('this_sample') }, [1])[0]).toBeCloseTo((Math.sqrt(5) - 1) / 2, 13);
    expect(outputs({ signals: observer('last_sample') }, [1, 0])).toEqual([
      0,
      expect.closeTo(0.6180339887498949, 13),
    ]);
  });
});
