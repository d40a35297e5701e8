import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { distance, type Law, noise, type Pair, product, responses, stepper } from './law.js';

/** Numbers as an engineer writes them, in thousandths. */
const number = (min: number, max: number) =>
  fc
    .integer({ min: Math.round(1000 * min), max: Math.round(1000 * max) })
    .map((thousandths) => thousandths / 1000);
const rule = fc.constantFrom('backward', 'forward', 'trapezoid', 'exact');
const structure = fc.constantFrom('direct_1', 'direct_2', 'transposed_2');

/** Any filter, as the text of its key; stable, at a period of 0.1 s. */
const filter = fc.oneof(
  fc.tuple(number(0.1, 3), rule).map(([tau, by]) => `low_pass: { time_constant: ${tau} s, sum_by: ${by} }`),
  fc
    .tuple(number(0.1, 3), number(0.1, 3), rule)
    .map(([lead, lag, by]) => `lead_lag: { lead: ${lead} s, lag: ${lag} s, sum_by: ${by} }`),
  fc.integer({ min: 1, max: 6 }).map((length) => `moving_average: ${length}`),
  fc
    .tuple(number(0.5, 4), number(0.1, 2), number(0, 1), structure)
    .map(
      ([centre, width, depth, kept]) =>
        `notch: { frequency: ${centre} Hz, width: ${width} Hz, depth: ${depth}, structure: ${kept} }`,
    ),
  fc
    .tuple(number(0.1, 2), number(0.1, 2))
    .map(([lead, lag]) => `feed_forward: { lead: ${lead} s, lag: ${lag} s }`),
  fc
    .tuple(number(-0.9, 0.9), number(-2, 2), structure)
    .map(
      ([pole, zero, kept]) =>
        `transfer_function: { numerator: [1, ${zero}], denominator: [2, ${pole}], structure: ${kept} }`,
    ),
  fc
    .tuple(number(0.1, 3), number(0.5, 3))
    .map(([kp, ti]) => `pid: { form: standard, kp: ${kp}, integral_time: ${ti} s }`),
);

describe('laws of the blocks of controllers', () => {
  it('a chain of blocks has the product of their responses', () => {
    const chain = fc.tuple(fc.array(filter, { minLength: 2, maxLength: 4 }), number(0.05, 3.1));
    fc.assert(
      fc.property(chain, ([filters, angle]) => {
        const signals = filters.map((text, at) => {
          const name = at === filters.length - 1 ? 'out' : `s${at}`;
          return `${name}: { ${text}, of: ${at === 0 ? 'x' : `s${at - 1}`} }`;
        });
        const [found] = responses({ signals }, [angle]);
        const parts = filters.map((text) => responses({ signals: [`out: { ${text}, of: x }`] }, [angle])[0]);
        const wanted = parts.reduce<Pair>(product, [1, 0]);
        const size = parts.reduce((all, part) => all * (1 + Math.hypot(...part)), 1);
        expect(distance(found, wanted) / size).toBeLessThan(1e-10);
      }),
      { seed: 4, numRuns: 60 },
    );
  });

  it('the centre, depth and width of a notch are what the sampled filter has', () => {
    const numbers = fc.tuple(number(0.05, 0.95), number(0.01, 0.9), number(0, 2));
    fc.assert(
      fc.property(numbers, ([centreShare, widthShare, depth]) => {
        const [centre, width] = [Math.PI * centreShare, Math.PI * widthShare];
        const signals = [
          `out: { notch: { frequency: ${centre / 0.1} rad/s, width: ${width / 0.1} rad/s, depth: ${depth} }, of: x }`,
        ];
        // The edges lie about the angle whose cosine is cos(centre)·cos(width/2) (Regalia and Mitra 1987).
        const middle = Math.acos(Math.cos(centre) * Math.cos(width / 2));
        const edges = [middle - width / 2, middle + width / 2];
        const gains = responses({ signals }, [centre, 1e-9, Math.PI - 1e-9, ...edges]).map((one) =>
          Math.hypot(...one),
        );
        const edge = Math.sqrt((1 + depth * depth) / 2);
        [depth, 1, 1, edge, edge].forEach((wanted, at) => {
          expect(Math.abs(gains[at] - wanted)).toBeLessThan(1e-6);
        });
      }),
      { seed: 5, numRuns: 60 },
    );
  });

  /** Everything at once, with an angle as input and a voltage as output, in any units. */
  function composite(angle: string, voltage: string): Law {
    const [a, v] = [`unit: ${angle}`, `unit: ${voltage}`];
    return {
      unit: angle,
      outUnit: voltage,
      signals: [
        `smooth: { low_pass: 0.3 s, of: x, ${a} }`,
        `curve: { table: { points: [-1 rad, 0 rad, 2 rad], values: [0 V, 1 V, 0.5 V], between: cubic }, of: smooth, ${v} }`,
        `surface: { table: { points: [-1 rad, 2 rad], values: [[0 V, 1 V], [2 V, -1 V]], second: smooth, second_points: [-900 mrad, 900 mrad] }, of: x, ${v} }`,
        `fed: { state_feedback: { states: [x, turning], gains: [2 V/rad, -1 V*s/rad], targets: [0.1 rad, 20 mrad/s] }, ${v} }`,
        `law: { pid: { form: interacting, kp: 2 V/rad, integral_time: 0.4 s, derivative_time: 20 ms, bumpless_start: 0.2 V, anti_windup: hold_integral }, of: { target: 0.2 rad, measurement: x }, ${v}, range: [-3 V, 3 V] }`,
        `angle: { estimate: model, ${a} }`,
        `turning: { estimate: model, unit: ${angle}/s }`,
        `model: { observer: { states: [angle, turning], measured: x, driven_by: fed, state_matrix: [[1, 0.1 s], [0, 0.9]], input_matrix: [0.01 rad/V, 0.2 rad/s/V], output_matrix: [1, 0], process_covariance: [[1e-4 rad^2, 0], [0, 1e-2 rad^2/s^2]], measurement_covariance: 1e-3 rad^2, uses: this_sample }, ${a} }`,
        `ahead: { feed_forward: 0.2 s, of: x, gain: 0.3 V/rad, ${v} }`,
        `filtered: { transfer_function: { numerator: [0.5 V/rad, 0.1 V/rad], denominator: [1, -0.6] }, of: x, ${v} }`,
        `out: { switch: { between: [law, fed, curve + surface + ahead + filtered], by: "if(x > (0.5 rad), 2, x > (0.1 rad))", bumpless: 0.5 s }, ${v}, slew: 5 V/s }`,
      ],
    };
  }
  const scales: Record<string, number> = { rad: 1, mrad: 1e-3, deg: Math.PI / 180 };
  const names = ['out', 'law', 'fed', 'curve', 'surface', 'ahead', 'filtered', 'turning'];
  const stimulus = (seed: number): number[] => noise(80, seed);

  it('the unit of a quantity changes nothing', () => {
    const choice = fc.tuple(
      fc.constantFrom('rad', 'mrad', 'deg'),
      fc.constantFrom('V', 'mV', 'kV'),
      fc.integer({ min: 1, max: 1e6 }),
    );
    fc.assert(
      fc.property(choice, ([angle, voltage, seed]) => {
        const [plain, other] = [
          stepper(composite('rad', 'V'), names),
          stepper(composite(angle, voltage), names),
        ];
        for (const x of stimulus(seed)) {
          const wanted = plain(x);
          other(x / scales[angle]).forEach((value, at) => {
            expect(Math.abs(value - wanted[at])).toBeLessThan(1e-11 * (1 + Math.abs(wanted[at])));
          });
        }
      }),
      { seed: 6, numRuns: 12 },
    );
  });

  it('the order in which signals are listed changes no bit', () => {
    const law = composite('deg', 'mV');
    const orders = fc.shuffledSubarray(law.signals, { minLength: law.signals.length });
    const rows = stimulus(12).map((x) => 100 * x);
    const plain = stepper(law, names);
    const wanted = rows.map((x) => plain(x));
    fc.assert(
      fc.property(orders, (signals) => {
        const step = stepper({ ...law, signals }, names);
        rows.forEach((x, k) => {
          expect(step(x)).toEqual(wanted[k]);
        });
      }),
      { seed: 7, numRuns: 12 },
    );
  });
});
