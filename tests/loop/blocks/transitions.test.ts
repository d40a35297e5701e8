import { describe, expect, it } from 'vitest';
import { measured } from '../measured.js';
import { traceOf } from '../trace_of.js';
import { noise, outputs, responses } from './law.js';

const period = 0.1;

describe('slew of a controller’s signal', () => {
  it('lets it move by rate times period an instant, in closed form', () => {
    const signals = ['out: { value: x, slew: 3 1/s }'];
    const steps = Array.from({ length: 6 }, (_, k) => Math.min(1, 3 * period * (k + 1)));
    const found = outputs({ signals }, [1, 1, 1, 1, 1, 1, 0.9, -5]);
    steps.forEach((wanted, k) => {
      expect(found[k]).toBeCloseTo(wanted, 14);
    });
    expect(found[6]).toBeCloseTo(0.9, 14);
    expect(found[7]).toBeCloseTo(0.6, 14);
  });

  it('starts at `start:` and ends in the range', () => {
    const signals = ['out: { value: 10*x, slew: 2 1/s, range: [-1, 1], start: 0.5 }'];
    const found = outputs({ signals }, [1, 1, 1, 1]);
    [0.7, 0.9, 1, 1].forEach((wanted, k) => {
      expect(found[k]).toBeCloseTo(wanted, 14);
    });
  });

  it('gives way to a range that closes faster', () => {
    const signals = ['out: { value: x, slew: 1 1/s, range: [0, top] }'];
    const rows = [1, 1, 1, 0.05, 1].map((top) => [1, top]);
    const found = outputs({ signals, inputs: { top: '1' } }, rows);
    [0.1, 0.2, 0.3, 0.05, 0.15].forEach((wanted, k) => {
      expect(found[k]).toBeCloseTo(wanted, 14);
    });
  });

  it('is no part of the linearised loop', () => {
    const signals = ['out: { low_pass: 0.4 s, of: x, slew: 2 1/s }'];
    const plain = ['out: { low_pass: 0.4 s, of: x }'];
    const angles = [0.1, 1, 3];
    responses({ signals }, angles).forEach(([re, im], k) => {
      const [wantedRe, wantedIm] = responses({ signals: plain }, angles)[k];
      expect(re).toBeCloseTo(wantedRe, 13);
      expect(im).toBeCloseTo(wantedIm, 13);
    });
  });
});

describe('rest of a loop with a slewed signal', () => {
  // A tank with a level of 40 mm held by an opening of 0.4: so many steps of slew·period away from where the search starts.
  const held = (more: string): string => `
inputs: { target: { unit: mm, rest: 40 mm }, leak: { unit: mm } }
plant: { level: { lag: 20 s, of: valve*(100 mm) + leak, unit: mm } }
sensors: { float: { of: level, filter: 1 s, unit: mm } }
controllers:
  tank:
    every: 1 s
    delay: 0.2 s
    signals:
      error: { value: target - float, unit: mm }
      opening: { pid: { kp: 0.04 1/mm, ki: 0.002 1/(mm*s), anti_windup: hold_integral }, of: error, range: [-1, 1] }
      eased: { value: opening${more} }
actuators: { valve: { of: eased } }
scenarios: { run: { lasts: 60 s, inputs: { leak: { step: 0.01 mm, at: 30 s } } } }
`;

  it('is found 100,000 steps away, where it is without one, and the trace starts there', () => {
    const free = traceOf(held(''), ['level']).level;
    // A step of the slew in one period is 4e-6, and the leak asks for less than 1e-3 in all.
    const slow = traceOf(held(', slew: 4e-6 1/s'), ['level', 'eased']);
    slow.level.forEach(({ time, value }, i) => {
      if (time <= 30) expect(value).toBeCloseTo(free[i].value, 12);
      expect(value).toBeCloseTo(0.04, 4);
    });
    const steps = slow.eased.slice(1).map(({ value }, i) => Math.abs(value - slow.eased[i].value));
    expect(Math.max(...steps)).toBeCloseTo(4e-6, 12);
  });

  it('counts no hits of a limit, which belong to a range', () => {
    const text = `${held(', slew: 4e-6 1/s')}requirements:
  - { name: hits, measure: limit_hit_count, of: tank, in: run, at_most: 0 }
  - { name: rate, measure: slew_rate, of: eased, in: run, at_most: 1 1/s }`;
    const { hits, rate } = measured(text);
    expect(hits).toBe(0);
    expect(rate).toBeCloseTo(4e-6, 12);
  });

  it('changes nothing in the first instants of a trace that moves at once', () => {
    const at = (event: string, more: string): number[] =>
      traceOf(held(more).replace('leak: { step: 0.01 mm, at: 30 s }', event), ['eased']).eased.map(
        ({ value }) => value,
      );
    const moved = at('target: { step: 20 mm, at: 0 s }', ', slew: 0.01 1/s');
    // From 0.4 by 0.01 an instant while the law asks for more: in closed form.
    for (const k of [0, 1, 2, 3, 4]) expect(moved).toContainEqual(expect.closeTo(0.4 + 0.01 * (k + 1), 12));
    expect(moved[0]).toBeCloseTo(0.41, 12);
  });
});

describe('switch', () => {
  const laws = (more: string): string[] => [
    `out: { switch: { between: [2*x, 1 - x, 0.5], by: number${more} }, range: [-5, 5] }`,
  ];
  const inputs = { number: '1' };

  it('takes the law of the nearest number', () => {
    const numbers = [-1, 0, 0.4, 0.6, 1.4, 2, 7];
    const rows = numbers.map((number) => [0.1, number]);
    expect(outputs({ signals: laws(''), inputs }, rows)).toEqual([0.2, 0.2, 0.2, 0.9, 0.9, 0.5, 0.5]);
  });

  it('without a bump goes on from the last output, and fades to the law in charge', () => {
    const rows = [0, 0, 1, 1, 1, 2, 2].map((number) => [0.1, number]);
    const found = outputs({ signals: laws(', bumpless: 0.3 s'), inputs }, rows);
    const rate = 0.3 / (0.3 + period);
    const second = (k: number): number => 0.9 + (0.2 - 0.9) * rate ** k;
    const third = (k: number): number => 0.5 + (second(2) - 0.5) * rate ** k;
    const wanted = [0.2, 0.2, second(0), second(1), second(2), third(0), third(1)];
    wanted.forEach((value, k) => {
      expect(found[k]).toBeCloseTo(value, 14);
    });
  });

  it('has nothing to fade at power-up, whichever law is in charge first', () => {
    expect(outputs({ signals: laws(', bumpless: 0.3 s'), inputs }, [[0.1, 2]])).toEqual([0.5]);
  });

  it('by a condition, has the response of the law in charge at rest', () => {
    const signals = ['out: { switch: { between: [3*x, 7*x], by: x > 1, bumpless: 1 s } }'];
    const [[re, im]] = responses({ signals }, [0.7]);
    expect(re).toBeCloseTo(3, 12);
    expect(im).toBeCloseTo(0, 12);
  });
});

describe('numbers of the build', () => {
  it('take the unit of their place in a design, which is worked out in double precision', () => {
    const of = (centre: string, width: string, lag: string): string[] => [
      `cut: { notch: { frequency: ${centre}, width: ${width}, depth: -20 dB }, of: x }`,
      `out: { low_pass: { time_constant: ${lag}, sum_by: exact }, of: cut }`,
    ];
    const coefficients = { centre: [9.5], width: [2.5], lag: [0.25] };
    const stimulus = noise(50);
    const built = outputs({ signals: of('centre', 'width', 'lag'), coefficients }, stimulus);
    expect(built).toEqual(outputs({ signals: of('9.5 rad/s', '2.5 rad/s', '0.25 s') }, stimulus));
  });
});

describe('feed_forward', () => {
  it('behind or before a lag of the same rule gives back its input; by the exact rule one instant later', () => {
    const stimulus = noise(100);
    const chain = (rule: string): string[] => [
      `slow: { low_pass: { time_constant: 0.35 s, sum_by: ${rule} }, of: x }`,
      `out: { feed_forward: { lead: 0.35 s, sum_by: ${rule} }, of: slow, gain: 2 }`,
    ];
    const backward = outputs({ signals: chain('backward') }, stimulus);
    const exact = outputs({ signals: chain('exact') }, stimulus);
    stimulus.forEach((x, k) => {
      expect(backward[k]).toBeCloseTo(2 * x, 12);
      expect(exact[k]).toBeCloseTo(k === 0 ? 0 : 2 * stimulus[k - 1], 12);
    });
  });

  it('without a lead is a gain', () => {
    for (const rule of ['backward', 'exact']) {
      const signals = [`out: { feed_forward: { lead: 0 s, sum_by: ${rule} }, of: x, gain: 0.7 }`];
      expect(outputs({ signals }, [1, -2, 3])).toEqual([0.7, -1.4, 0.7 * 3]);
    }
  });
});

describe('a monotone cubic', () => {
  // F. N. Fritsch and R. E. Carlson, 1980: the radiochemical data on which other cubics overshoot (from memory).
  const points = [7.99, 8.09, 8.19, 8.7, 9.2, 10, 12, 15, 20];
  const values = [0, 2.76429e-5, 4.37498e-2, 0.169183, 0.469428, 0.94374, 0.998636, 0.999919, 0.999994];

  it('goes through its points, rises with them and stays between them', () => {
    const signals = [`out: { table: { points: [${points}], values: [${values}], between: cubic }, of: x }`];
    const between = Array.from({ length: 1201 }, (_, k) => 7.99 + (12.01 * k) / 1200);
    const found = outputs({ signals }, between);
    found.forEach((value, k) => {
      expect(value).toBeGreaterThanOrEqual(k === 0 ? 0 : found[k - 1]);
    });
    expect(found[1200]).toBeLessThanOrEqual(0.999994);
    outputs({ signals }, points).forEach((value, k) => {
      expect(value).toBeCloseTo(values[k], 14);
    });
  });
});
