import fc from 'fast-check';
import { expect, test } from 'vitest';
import { outputs } from '../loop/blocks/law.js';

// Protects the page's 'Three-term control, line by line': its lines, as they stand there, against what the block computes.

const period = 0.1;
const [low, high] = [-1, 1.5];

const settings = fc.record({
  form: fc.constantFrom('parallel', 'standard', 'interacting'),
  sum_by: fc.constantFrom('backward', 'forward', 'trapezoid'),
  gains: fc.constantFrom('per_second', 'per_sample'),
  anti_windup: fc.constantFrom(undefined, 'hold_integral', 'bound_integral', 'pull_back'),
  corner: fc.constantFrom(undefined, 3, 8),
  assumed: fc.constantFrom(undefined, 0.13),
  b: fc.constantFrom(undefined, 0, 0.4),
  c: fc.constantFrom(undefined, 0, 0.7),
  start: fc.constantFrom(undefined, 0.3),
  track: fc.boolean(),
  kp: fc.constantFrom(0.4, 1.3),
  second: fc.constantFrom(0.3, 2),
  third: fc.constantFrom(0.05, 0.4),
});
type Settings = typeof settings extends fc.Arbitrary<infer T> ? T : never;

/** One instant: target, measurement, what to track, and whether to. */
type Instant = readonly [number, number, number, number];

function yaml(s: Settings): string {
  const sample = s.gains === 'per_sample';
  const second = sample ? '' : ' s';
  const actions =
    s.form === 'parallel'
      ? `ki: ${s.second}${sample ? '' : ' 1/s'}, kd: ${s.third}${second}`
      : `integral_time: ${s.second}${second}, derivative_time: ${s.third}${second}`;
  const given = (text: string, value: unknown): string => (value === undefined ? '' : `, ${text}`);
  return `out: { pid: { form: ${s.form}, kp: ${s.kp}, ${actions}, sum_by: ${s.sum_by}, gains: ${s.gains}${[
    given(`derivative_corner: ${s.corner} rad/s`, s.corner),
    given(`assumed_period: ${s.assumed} s`, s.assumed),
    given(`target_weight: ${s.b}`, s.b),
    given(`derivative_target_weight: ${s.c}`, s.c),
    given(`anti_windup: ${s.anti_windup}`, s.anti_windup),
    s.anti_windup === 'pull_back' ? `, pull_back_time: 0.7${second}` : '',
    given(`bumpless_start: ${s.start}`, s.start),
    s.track ? ', track: hand, track_when: by_hand' : '',
  ].join('')} }, of: { target: target, measurement: x }, range: [${low}, ${high}] }`;
}

/** ki·T, kd, kd·ω as the form and the gains say; T and ω. */
function factors(s: Settings) {
  const T = s.assumed ?? period;
  const sample = s.gains === 'per_sample';
  const perInstant =
    s.form === 'parallel' ? (sample ? s.second : s.second * T) : (sample ? s.kp : s.kp * T) / s.second;
  const kd = s.form === 'standard' ? s.kp * s.third : s.third;
  const w = s.corner ?? 0;
  return { T, w, kiT: perInstant, kd, kdw: sample ? kd * (w * T) : kd * w, sample };
}

function derivative(s: Settings, change: number, d1: number): number {
  const { T, w, kd, kdw, sample } = factors(s);
  if (s.corner === undefined) return kd * (sample ? change : change / T);
  if (s.sum_by === 'backward') return (d1 + kdw * change) / (1 + w * T);
  if (s.sum_by === 'forward') return (1 - w * T) * d1 + kdw * change;
  return ((2 - w * T) * d1 + 2 * kdw * change) / (2 + w * T);
}

const held = (x: number): number => Math.min(high, Math.max(low, x));

/** The lines of the page, in float64, from power-up. */
function byHand(s: Settings, instants: readonly Instant[]): number[] {
  const { T, kiT, sample } = factors(s);
  let [f1, g1, d1, i1] = [0, 0, 0, 0];
  return instants.map(([target, measurement, hand, byHandNow], at) => {
    const first = at === 0 && s.start !== undefined;
    const weighted = (weight: number | undefined): number => (weight ?? 1) * target - measurement;
    const g = weighted(s.c);
    const d = derivative(s, g - (first ? g : g1), d1);
    const inner = s.form === 'interacting';
    const f = target - measurement + (inner ? d : 0);
    const p = s.kp * (weighted(s.b) + (inner ? d : 0));
    const last = first ? f : f1;
    const gained = { backward: f, forward: last, trapezoid: (f + last) * 0.5 }[s.sum_by]!;
    const rest = p + (inner ? 0 : d);
    let i = i1 + kiT * gained;
    const step = kiT * gained;
    const v0 = rest + i;
    if (s.anti_windup === 'hold_integral' && ((v0 > high && step > 0) || (v0 < low && step < 0))) i = i1;
    if (s.anti_windup === 'bound_integral') i = held(i);
    if (s.track && byHandNow !== 0) i = hand - rest;
    if (first) i = s.start! - rest;
    const v = rest + i;
    const u = held(v);
    [f1, g1, d1] = [f, g, d];
    i1 = s.anti_windup === 'pull_back' ? i + (sample ? u - v : T * (u - v)) / 0.7 : i;
    return u;
  });
}

test('the lines of three-term control give what the block gives, with any of its settings', () => {
  const value = fc.double({ min: -1, max: 1, noNaN: true });
  const instant = fc.tuple(value, value, value, fc.constantFrom(0, 0, 1));
  fc.assert(
    fc.property(settings, fc.array(instant, { minLength: 30, maxLength: 30 }), (s, instants) => {
      const law = {
        signals: [yaml(s)],
        period,
        inputs: { target: '1', ...(s.track ? { hand: '1', by_hand: '1' } : {}) },
      };
      const rows = instants.map(([target, x, hand, now]) => [x, target, ...(s.track ? [hand, now] : [])]);
      const found = outputs(law, rows);
      byHand(s, instants).forEach((wanted, k) => {
        expect(Math.abs(found[k] - wanted)).toBeLessThan(1e-9);
      });
    }),
    { numRuns: 150 },
  );
});
