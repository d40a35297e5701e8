import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { measured } from './measured.js';
import { type TracePoint, traceOf } from './trace_of.js';

/** A plant of these signals, driven by `u` (m) as an event says. */
function driven(plant: string, event: string, lasts = '10 s', more = ''): string {
  return `
inputs: { u: { unit: m } }
plant:
${plant.replace(/^/gm, '  ')}
scenarios: { run: { lasts: ${lasts}, ${more}inputs: { u: ${event} } } }`;
}

function expectTrace(trace: TracePoint[], expected: (t: number) => number, digits = 9): void {
  for (const { time, value } of trace) expect(value, `at ${time} s`).toBeCloseTo(expected(time), digits);
}

/** The largest slope from one end of a piece to the other, jumps between pieces included. */
function fastest(trace: TracePoint[]): number {
  let most = 0;
  for (let i = 1; i < trace.length; i++) {
    const [before, after] = [trace[i - 1], trace[i]];
    const change = Math.abs(after.value - before.value);
    if (change > 1e-11) most = Math.max(most, change / (after.time - before.time));
  }
  return most;
}

const clamp = (x: number, low: number, high: number): number => Math.min(high, Math.max(low, x));

describe('slew of a plant signal', () => {
  it('turns a step into a ramp, up and down, and starts a new one from where it is', () => {
    const { y } = traceOf(
      driven(
        'y: { value: u, slew: 0.5 m/s, unit: m }',
        '[{ step: 1 m, at: 1 s }, { step: -2 m, at: 2.3 s }, { step: 0.2 m, at: 4 s }]',
      ),
      ['y'],
    );
    // Up from 0 at 1 s, down from 0.65 at 2.3 s to −0.2 at 4 s (not yet at −1), down further to −0.8 at 5.2 s.
    expectTrace(y, (t) => {
      if (t < 1) return 0;
      return t < 2.3 ? 0.5 * (t - 1) : Math.max(-0.8, 0.65 - 0.5 * (t - 2.3));
    });
    expect(fastest(y)).toBeCloseTo(0.5, 9);
  });

  it('makes a triangle of a sine that is too fast, as the describing function of a rate limiter has it', () => {
    // Fully rate-limited beyond A·w/s = √(1 + π²/4) = 1.862: amplitude π·s/(2w), turning where it meets the sine, which is
    // arccos(π·s/(2·A·w)) late (H. Duda, 'Prediction of pilot-in-the-loop oscillations due to rate saturation', 1997).
    const [A, w, s] = [2, 2 * Math.PI, 4];
    const { y } = traceOf(
      driven(
        `y: { value: u, slew: ${s} m/s, unit: m }`,
        '{ sine: { amplitude: 2 m, frequency: 1 Hz }, at: 0 s }',
        '40 s',
      ),
      ['y'],
    );
    const amplitude = (Math.PI * s) / (2 * w);
    const turn = 39 + (Math.PI - Math.asin(amplitude / A)) / w;
    const late = y.filter(({ time }) => time > 39);
    expect(Math.max(...late.map(({ value }) => value))).toBeCloseTo(amplitude, 9);
    const top = late.reduce((best, point) => (point.value > best.value ? point : best));
    expect(top.time).toBeCloseTo(turn, 9);
    expectTrace(
      late.filter(({ time }) => time > turn - 0.4 && time < turn + 0.4),
      (t) => amplitude - s * Math.abs(t - turn),
    );
  });

  it('leaves a sine where it is too fast and follows it again from where they meet', () => {
    // x = sin t, s = 0.5: off where cos t = −0.5 on the way down, at t₁ = 2π/3, then x₁ − (t − t₁)/2 until it meets the sine
    // on its way up; found here by bisection of the closed form.
    const { y } = traceOf(
      driven(
        'y: { value: u, slew: 0.5 m/s, unit: m }',
        '{ sine: { amplitude: 1 m, frequency: 6.283185307179586 s, phase: 90 deg }, at: 0 s }',
        '6 s',
      ),
      ['y'],
    );
    // The phase of 90° jumps to 1 first: a ramp from 0 that meets cos t.
    const meets = root((t) => 0.5 * t - Math.cos(t), 0, 2);
    expectTrace(
      y.filter(({ time }) => time < meets),
      (t) => 0.5 * t,
    );
    // There cos t falls by more than 0.5 (t > 30°), and so it turns at once; the fall meets the cosine on its way up.
    const again = root((t) => Math.cos(meets) - 0.5 * (t - meets) - Math.cos(t), 2.5, 4);
    expectTrace(
      y.filter(({ time }) => time > meets && time < again),
      (t) => Math.cos(meets) - 0.5 * (t - meets),
    );
  });

  it('stands behind the range, so that only what the range lets through counts', () => {
    const { y } = traceOf(
      driven(
        'y: { value: u, range: [-1 m, 1 m], slew: 1 m/s, unit: m }',
        '{ ramp: 3 m/s, at: 0 s, for: 2 s }',
        '4 s',
      ),
      ['y'],
    );
    expectTrace(y, (t) => Math.min(1, t));
  });

  it('before a lag gives the lag its exact answer to a ramp', () => {
    // T y' = x − y with x = s·t up to 1: y = s·(t − T + T·e^{−t/T}); then what is left falls as e^{−t/T}. Partial fractions.
    const [s, T] = [0.5, 0.7];
    const { y } = traceOf(
      driven(
        `x: { value: u, slew: ${s} m/s, unit: m }\ny: { lag: ${T} s, of: x, unit: m }`,
        '{ step: 1 m, at: 0 s }',
      ),
      ['y', 'x'],
    );
    const ramp = (t: number): number => s * (t - T + T * Math.exp(-t / T));
    expectTrace(y, (t) => (t <= 1 / s ? ramp(t) : 1 - (1 - ramp(1 / s)) * Math.exp(-(t - 1 / s) / T)), 11);
  });

  it('works on every block of the plant', () => {
    for (const block of [
      'transfer_function: { numerator: [4], denominator: [1, 1, 4] }, of: u',
      'second_order_lag: { corner: 3 rad/s, damping: 0.4 }, of: u',
      'lead_lag: { lead: 2 s, lag: 1 s }, of: u',
      'dead_band: 0.1 m, of: u',
      'backlash: 0.1 m, of: u',
      'dead_time: 0.3 s, of: u',
      'hysteresis: { on_above: 0.5 m, off_below: 0.2 m, on: 1 m, off: 0 m }, of: u',
      'table: { points: [0 m, 1 m, 2 m], values: [0 m, 3 m, 4 m] }, of: u',
    ]) {
      const plant = `y: { ${block}, slew: 0.4 m/s, unit: m }`;
      const { y } = traceOf(driven(plant, '[{ step: 1 m, at: 1 s }, { step: -0.9 m, at: 7 s }]', '14 s'), [
        'y',
      ]);
      expect(fastest(y), block).toBeLessThan(0.4 * (1 + 1e-6));
      expect(fastest(y), block).toBeGreaterThan(0.39);
    }
  });

  it('follows a relay that switches on its way without a jump', () => {
    const { y } = traceOf(
      driven(
        `x: { lag: 1 s, of: u, unit: m }
relay: { hysteresis: { on_above: 0.5 m, off_below: 0.2 m, on: 1 m, off: 0 m }, of: x, unit: m }
y: { value: relay, slew: 0.4 m/s, unit: m }`,
        '{ step: 1 m, at: 0 s }',
      ),
      ['y'],
    );
    expectTrace(y, (t) => clamp(0.4 * (t - Math.log(2)), 0, 1));
  });

  it('with a huge rate is none at all, and passes what is slower unchanged', () => {
    const plant = (slew: string): string =>
      `x: { second_order_lag: { corner: 3 rad/s, damping: 0.4 }, of: u, unit: m }
z: { value: 2*x + u, ${slew} unit: m }
y: { lag: 1 s, of: z, unit: m }`;
    const of = (slew: string): TracePoint[] =>
      traceOf(driven(plant(slew), '{ step: 1 m, at: 1 s }'), ['y']).y;
    const free = of('');
    // One jump of 1 m takes 0.1 ns more; at the ends of whole steps the two are to be compared.
    const values = (trace: TracePoint[]): Map<string, number> =>
      new Map(trace.map(({ time, value }) => [time.toFixed(6), value]));
    const bound = values(of('slew: 1e10 m/s,'));
    for (const [time, value] of values(free))
      if (time !== '1.000000') expect(bound.get(time), time).toBeCloseTo(value, 9);
  });

  it('never moves faster than it may, and what is slower passes unchanged', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.05, max: 5, noNaN: true }),
        fc.double({ min: 0.1, max: 3, noNaN: true }),
        fc.double({ min: 0.1, max: 2, noNaN: true }),
        (slew, amplitude, frequency) => {
          const event = `[{ sine: { amplitude: ${amplitude} m, frequency: ${frequency} Hz }, at: 0.3 s }, { step: 0.3 m, at: 2 s }]`;
          const { x, y } = traceOf(
            driven(`x: { value: 1*u, unit: m }\ny: { value: u, slew: ${slew} m/s, unit: m }`, event, '5 s'),
            ['y', 'x'],
          );
          expect(fastest(y)).toBeLessThan(slew * (1 + 1e-6) + 1e-9);
          if (slew > 2 * Math.PI * frequency * amplitude) {
            const slow = y.filter(
              ({ time }) => time < 2 || time > 2 + 0.3 / (slew - 2 * Math.PI * frequency * amplitude),
            );
            expect(slow.length).toBeGreaterThan(2);
            y.forEach((point, i) => {
              if (slow.includes(point)) expect(point.value).toBe(x[i].value);
            });
          }
        },
      ),
      { numRuns: 25 },
    );
  });

  it('does not depend on the order in which the signals stand', () => {
    const signals = [
      'x: { value: u - 0.5*z, slew: 0.4 m/s, unit: m }',
      'z: { lag: 0.5 s, of: x, unit: m }',
      'v: { value: 2*z, slew: 0.3 m/s, unit: m }',
    ];
    const of = (lines: string[]): TracePoint[] =>
      traceOf(driven(lines.join('\n'), '{ step: 2 m, at: 1 s }'), ['v']).v;
    const [one, other] = [of(signals), of([...signals].reverse())];
    for (const [i, point] of one.entries()) expect(other[i].value).toBeCloseTo(point.value, 12);
  });

  it('has gain one at rest and in linear analysis', () => {
    const loop = (slew: string): string => `
inputs: { target: { unit: rad, rest: 0.3 rad } }
plant:
  push: { value: 2*drive, ${slew} }
  speed: { lag: 50 ms, of: push, gain: 10 rad/s, unit: rad/s }
  angle: { integral: speed, unit: rad }
sensors: { encoder: { of: angle, unit: rad } }
controllers: { axis: { every: 10 ms, signals: { effort: { value: 0.1*(target - encoder) } } } }
actuators: { drive: { of: effort } }
scenarios: { still: { lasts: 1 s } }
requirements:
  - { name: gain, measure: gain_margin, at: drive, at_least: 1.1 }
  - { name: phase, measure: phase_margin, at: drive, at_least: 1 deg }
  - { name: decay, measure: stability, at: drive, at_least: 0 1/s }
  - { name: top, measure: largest_value, of: angle, in: still, at_most: 1 rad }
`;
    const [free, bound] = [measured(loop('')), measured(loop('slew: 0.01 1/s,'))];
    for (const name of ['gain', 'phase', 'decay', 'top'])
      expect(bound[name], name).toBeCloseTo(free[name], 9);
  });

  it('starts at its `start` at power-up', () => {
    const { y } = traceOf(
      driven(
        'x: { value: u + (1 m), unit: m }\ny: { value: x, slew: 0.5 m/s, start: -1 m, unit: m }',
        '{ step: 0 m, at: 0 s }',
        '5 s',
        'start: zero, ',
      ),
      ['y'],
    );
    expectTrace(y, (t) => Math.min(1, -1 + 0.5 * t));
  });

  it('behind a dead time is the same, later', () => {
    const { y } = traceOf(
      driven(
        'x: { value: u, slew: 0.5 m/s, unit: m }\ny: { dead_time: 0.7 s, of: x, unit: m }',
        '[{ step: 1 m, at: 1 s }, { step: -0.5 m, at: 4 s }]',
        '6 s',
      ),
      ['y'],
    );
    expectTrace(y, (t) => (t < 4.7 ? clamp(0.5 * (t - 1.7), 0, 1) : Math.max(0.5, 1 - 0.5 * (t - 4.7))));
  });
});

/** Where a function that changes its sign once between two values is zero. */
function root(f: (t: number) => number, from: number, to: number): number {
  let [low, high] = [from, to];
  for (let round = 0; round < 80; round++) {
    const middle = (low + high) / 2;
    if (f(middle) < 0 === f(low) < 0) low = middle;
    else high = middle;
  }
  return low;
}
