import { describe, expect, it } from 'vitest';
import { expectPublished, publishedCase } from '../published.js';
import { measured, resultsOf } from './measured.js';

/** A plant driven by one input that steps to `size` at 0, with requirements on its signals. */
function driven(plant: string, requirements: string, size = '1 m', lasts = '40 s'): string {
  return `
inputs: { target: { unit: m } }
plant:
${plant}
scenarios: { jump: { lasts: ${lasts}, inputs: { target: { step: ${size}, at: 0 s } } } }
requirements:
${requirements}
`;
}

const requirement = (name: string, measure: string, more: string): string =>
  `  - { name: ${name}, measure: ${measure}, in: jump, ${more} }`;

describe('second_order_lag', () => {
  // Ogata, 'Modern Control Engineering', 2010: closed forms of the standard second-order system.
  for (const id of ['A01', 'A03', 'A05', 'A08']) {
    const { given } = publishedCase(id);
    it(`steps as the published system with damping ${given.damping_ratio} (${id})`, () => {
      const results = measured(
        driven(
          `  y: { second_order_lag: { corner: ${given.natural_frequency_rad_per_s} rad/s, damping: ${given.damping_ratio} }, of: target, unit: m }`,
          [
            requirement('overshoot', 'overshoot', 'of: y, to: target, at_most: 300 %'),
            requirement('rise', 'rise_time', 'of: y, to: target, at_most: 10 s'),
            requirement('settling', 'settling_time', 'of: y, to: target, band: 5 %, at_most: 26 s'),
          ].join('\n'),
        ),
        { halvings: 3 },
      );
      expectPublished(id, 'overshoot', 100 * results.overshoot);
      expectPublished(id, 'rise_time_10_90', results.rise);
      expectPublished(id, 'settling_time_5_percent', results.settling);
    });
  }
});

describe('lead_lag in the plant', () => {
  it('jumps by the ratio of its time constants and settles at its gain', () => {
    // y(t) = gain·(1 + (T₁/T₂ − 1)·e^{−t/T₂}), from partial fractions.
    const results = measured(
      driven(
        '  y: { lead_lag: { lead: 3 s, lag: 2 s }, of: target, gain: 2, unit: m }',
        [
          requirement('top', 'largest_value', 'of: y, at_most: 9 m'),
          requirement('settling', 'settling_time', 'of: y, to: target, band: 110 %, at_most: 20 s'),
        ].join('\n'),
      ),
      { halvings: 2 },
    );
    expect(results.top).toBeCloseTo(3, 12);
    expect(results.settling).toBeCloseTo(2 * Math.log(1 / 0.1), 9);
  });
});

describe('dead_time', () => {
  const sampled = (plant: string, delay: string, sensor: string): string => `
parameters: { late: { nominal: 7.3 ms, from: 1 ms, to: 20 ms } }
inputs: { target: { unit: rad } }
plant:
  speed: { integral: (30 1/s^2)*${plant} - (2 1/s)*speed, unit: rad/s }
  angle: { integral: speed, unit: rad }
  late_angle: { dead_time: late, of: angle, unit: rad }
sensors: { encoder: { of: ${sensor}, filter: 4 ms, unit: rad } }
controllers: { axis: { every: 10 ms, delay: ${delay}, signals: { push: { value: 0.8*(target - encoder), unit: rad } } } }
actuators: { drive: { of: push, unit: rad } }
scenarios: { jump: { lasts: 20 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements:
  - { name: top, measure: overshoot, of: angle, to: target, in: jump, at_most: 90 % }
  - { name: gain, measure: gain_margin, at: drive, at_least: 1.1 }
  - { name: phase, measure: phase_margin, at: push, at_least: 1 deg }
  - { name: modulus, measure: modulus_margin, at: encoder, at_least: 0.1 }
  - { name: late, measure: largest_value, of: late_angle, in: jump, at_most: 5 rad }
`;

  it('before a sensor, behind an actuator and as the delay of a controller is one and the same loop', () => {
    const inSensor = measured(sampled('drive', '2 ms', 'late_angle'));
    const inController = measured(sampled('drive', '9.3 ms', 'angle'));
    for (const name of ['gain', 'phase', 'modulus']) {
      expect(inSensor[name]).toBeCloseTo(inController[name], 9);
    }
    // Only the reference sees the difference: the sensor's dead time lies in the feedback, the controller's in the path.
    const inPlant = sampled('pushed', '2 ms', 'angle').replace(
      'plant:',
      'plant:\n  pushed: { dead_time: late, of: drive, unit: rad }',
    );
    const behindActuator = measured(inPlant);
    for (const name of ['top', 'gain', 'phase', 'modulus', 'late']) {
      expect(behindActuator[name], name).toBeCloseTo(inController[name], 9);
    }
  });

  it('shows a signal exactly as it was: the same peak, later by the dead time', () => {
    const text = sampled('drive', '2 ms', 'angle')
      .replace(
        'requirements:',
        'requirements:\n  - { name: when, measure: time_of_largest_value, of: angle, in: jump, at_most: 9 s }',
      )
      .replace(
        'requirements:',
        'requirements:\n  - { name: late when, measure: time_of_largest_value, of: late_angle, in: jump, at_most: 9 s }',
      )
      .replace(
        'requirements:',
        'requirements:\n  - { name: peak, measure: largest_value, of: angle, in: jump, at_most: 9 rad }',
      );
    const results = measured(text, { halvings: 2 });
    expect(results.late).toBeCloseTo(results.peak, 10);
    expect(results['late when'] - results.when).toBeCloseTo(0.0073, 7);
  });

  it('shifts an input by the dead time, events included', () => {
    const results = measured(
      driven(
        '  y: { dead_time: 1.37 s, of: target, gain: 2, unit: m }',
        requirement('delay', 'delay_time', 'of: y, to: target, at_most: 20 s'),
      ),
    );
    expect(results.delay).toBeCloseTo(1.37, 12);
  });

  it('shows the stops and resets of a signal as they were', () => {
    const results = measured(
      driven(
        `  heap: { integral: { integral: (1 1/s)*target, high_stop: 2 m }, unit: m }
  saw: { integral: { integral: (1 1/s)*target, reset_when: saw > (1.5 m) }, unit: m }
  late_heap: { dead_time: 0.9 s, of: heap, unit: m }
  late_saw: { dead_time: 0.9 s, of: saw, unit: m }`,
        ['heap', 'saw']
          .flatMap((name) => [
            requirement(name, 'travel', `of: ${name}, at_most: 900 m`),
            requirement(`late ${name}`, 'travel', `of: late_${name}, from: 0.9 s, at_most: 900 m`),
            requirement(`late ${name} top`, 'largest_value', `of: late_${name}, at_most: 900 m`),
          ])
          .join('\n'),
        '1 m',
        '10.9 s',
      ).replace(/(name: (heap|saw), .*?)at_most/g, '$1until: 10 s, at_most'),
      { halvings: 1 },
    );
    expect(results['late heap top']).toBeCloseTo(2, 9);
    expect(results['late heap']).toBeCloseTo(results.heap, 9);
    expect(results['late saw top']).toBeCloseTo(1.5, 9);
    // Up by 10 m in 10 s, and back by 1.5 m six times.
    expect(results.saw).toBeCloseTo(19, 9);
    expect(results['late saw']).toBeCloseTo(19, 9);
  });

  it('inside a continuous loop is refused at its place, with what to do', () => {
    const spec = driven(
      '  y: { lag: 1 s, of: target - late, unit: m }\n  late: { dead_time: 0.2 s, of: y, unit: m }',
      requirement('top', 'largest_value', 'of: y, at_most: 9 m'),
    );
    expect(() => resultsOf(spec)).toThrow('this dead time lies in a continuous loop');
  });
});

describe('dead_band', () => {
  it('takes its half width off both sides', () => {
    for (const [size, top, low] of [
      ['3 m', 2.5, 2.5],
      ['-3 m', -2.5, -2.5],
      ['0.4 m', 0, 0],
    ] as const) {
      const results = measured(
        driven(
          '  y: { dead_band: 0.5 m, of: target, unit: m }',
          [
            requirement('top', 'largest_value', 'of: y, at_most: 9 m'),
            requirement('low', 'smallest_value', 'of: y, at_least: -9 m'),
          ].join('\n'),
          size,
        ),
      );
      expect(results.top).toBeCloseTo(top, 12);
      expect(results.low).toBeCloseTo(low, 12);
    }
  });
});

describe('backlash', () => {
  // The play operator (M. A. Krasnosel'skii and A. V. Pokrovskii, 'Systems with Hysteresis', 1989): driven by a vibration of
  // amplitude A around 0, a gap of width b leaves an output of amplitude A − b/2.
  it('leaves the play’s share of a vibration', () => {
    const results = measured(
      driven(
        `  swing: { integral: (2 1/s)*pull, start: 0 m, unit: m }
  pull: { integral: -(2 1/s)*(swing - target), start: 0 m, unit: m }
  y: { backlash: 0.6 m, of: swing, unit: m }`,
        [
          requirement('top', 'largest_value', 'of: y, at_most: 9 m'),
          requirement('low', 'smallest_value', 'of: y, at_least: -9 m'),
          requirement('whole', 'largest_value', 'of: swing, at_most: 9 m'),
        ].join('\n'),
        '1 m',
        '12 s',
      ),
      { halvings: 2 },
    );
    // The swing goes from 0 to 2 around the target of 1, the output from 0.3 to 1.7; it starts in the middle of the gap, at 0.
    expect(results.whole).toBeCloseTo(2, 8);
    expect(results.top).toBeCloseTo(1.7, 8);
    expect(results.low).toBe(0);
  });

  it('has no margin', () => {
    const results = resultsOf(`
inputs: { target: { unit: rad } }
plant:
  motor: { integral: drive, unit: rad }
  angle: { backlash: 1 mrad, of: motor, unit: rad }
sensors: { encoder: { of: angle, unit: rad } }
controllers: { axis: { every: 10 ms, signals: { push: { value: "(2 1/s)*(target - encoder)", unit: rad/s } } } }
actuators: { drive: { of: push, unit: rad/s } }
scenarios: { jump: { lasts: 20 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements: [{ name: gain, measure: gain_margin, at: drive, at_least: 1.1 }]
`);
    expect(results.gain).toMatchObject({
      kind: 'unformed',
      why: "at the point of linearisation 'encoder' is at a backlash or relay, which has no single slope",
    });
  });
});

describe('hysteresis', () => {
  it('makes the published relay oscillation of 1/(s+1)^3 (J06)', () => {
    const { given } = publishedCase('J06');
    const level = given.relay_level;
    const results = measured(
      driven(
        `  relay: { hysteresis: { on_above: 1 nm, off_below: -1 nm, on: ${level} m, off: -${level} m }, of: target - c, unit: m }
  a: { lag: 1 s, of: relay, unit: m }
  b: { lag: 1 s, of: a, unit: m }
  c: { lag: 1 s, of: b, unit: m }`,
        [
          requirement('f', 'oscillation_frequency', 'of: c, from: 30 s, until: 58 s, at_most: 1 Hz'),
          requirement('amplitude', 'oscillation_amplitude', 'of: c, from: 30 s, until: 58 s, at_most: 1 m'),
        ].join('\n'),
        '1 nm',
        '60 s',
      ).replace('lasts:', 'start: zero, lasts:'),
      { halvings: 6 },
    );
    // The band of the relay and the rest of the transient are what is left.
    expectPublished('J06', 'exact_period', 1 / results.f, 1e-6);
    expectPublished('J06', 'exact_amplitude', results.amplitude, 1e-5);
  });
});

describe('integral with stops', () => {
  it('rests at the stop and leaves it at once when the rate turns', () => {
    const results = measured(
      `
inputs: { push: { unit: m/s } }
plant: { place: { integral: { integral: push, high_stop: 2 m, low_stop: -1 m }, unit: m } }
scenarios: { there: { lasts: 20 s, inputs: { push: [{ pulse: 0.5 m/s, at: 1 s, for: 8 s }, { pulse: -1 m/s, at: 10 s, for: 0.75 s }] } } }
requirements:
  - { name: top, measure: largest_value, of: place, in: there, at_most: 9 m }
  - { name: low, measure: smallest_value, of: place, in: there, at_least: -9 m }
  - { name: end, measure: steady_state_error, of: place, to: push, in: there, at_most: 9 m }
`.replace(/ {2}- \{ name: end.*\n/, ''),
      { halvings: 3 },
    );
    expect(results.top).toBeCloseTo(2, 10);
    expect(results.low).toBe(0);
  });
});

describe('friction', () => {
  it('is its stated sum, at rest and sliding', () => {
    // A load that pulls with P against friction alone settles where friction equals P: the formula solved for the speed.
    const text = (pull: number): string =>
      `
inputs: { target: { unit: m/s }, pull: { unit: N } }
plant:
  drag: { friction: { viscous: 4 N*s/m, coulomb: 3 N, static: 5 N, stribeck_speed: 0.1 m/s, smoothing_speed: 1 mm/s }, of: speed, unit: N }
  speed: { integral: (pull - drag)/(2 kg), unit: m/s }
scenarios: { jump: { lasts: 60 s, inputs: { pull: { step: ${pull} N, at: 0 s } } } }
requirements: [{ name: top, measure: largest_value, of: speed, in: jump, at_most: 90 m/s }]
`.replace('target: { unit: m/s }, ', '');
    expect(measured(text(11), { halvings: 4 }).top).toBeCloseTo((11 - 3) / 4, 6);
    // Below break-away it creeps: tanh(v/v₀) = P/S, with the Stribeck part still whole.
    const creep = measured(text(2.5), { halvings: 4 }).top;
    const force = (v: number): number => (3 + 2 * Math.exp(-((v / 0.1) ** 2))) * Math.tanh(v / 1e-3) + 4 * v;
    expect(force(creep)).toBeCloseTo(2.5, 6);
  });

  it('needs the static part and its speed together', () => {
    expect(() =>
      resultsOf(
        driven(
          '  drag: { friction: { coulomb: 3 N, static: 5 N, smoothing_speed: 1 mm/s }, of: target/(1 s), unit: N }',
          requirement('top', 'largest_value', 'of: drag, at_most: 9 N'),
        ),
      ),
    ).toThrow("friction 'drag' needs 'static' and 'stribeck_speed' together, or neither");
  });
});

describe('integral with a reset', () => {
  it('jumps back each time that its condition becomes true: a sawtooth', () => {
    const results = measured(
      driven(
        `  saw: { integral: { integral: target/(1 s), reset_when: saw >= (0.75 m), reset_to: -0.25 m }, unit: m }`,
        [
          requirement('top', 'largest_value', 'of: saw, at_most: 9 m'),
          requirement('low', 'smallest_value', 'of: saw, at_least: -9 m'),
          requirement('travel', 'travel', 'of: saw, at_most: 900 m'),
        ].join('\n'),
        '1 m',
        '10 s',
      ),
      { halvings: 4 },
    );
    expect(results.top).toBeCloseTo(0.75, 9);
    expect(results.low).toBeCloseTo(-0.25, 9);
    // It rises by 10 m in 10 s and falls back by 1 m at 0.75 s, 1.75 s … 9.75 s.
    expect(results.travel).toBeCloseTo(20, 6);
  });
});

describe('slew in the plant', () => {
  it('bounds the rate of a lag: it climbs straight and then as the lag does', () => {
    // Straight while (1 − y)/T > s, that is up to y = 1 − s·T at t = y/s; then what is left falls as e^{−t/T}.
    const results = measured(
      driven(
        '  y: { lag: 2 s, of: target, slew: 0.1 m/s, unit: m }',
        requirement('settling', 'settling_time', 'of: y, to: target, band: 5 %, at_most: 20 s'),
      ),
      { halvings: 5 },
    );
    expect(results.settling).toBeCloseTo(8 + 2 * Math.log(0.2 / 0.05), 6);
  });
});

describe('transfer_function in the plant', () => {
  const figures = [
    requirement('overshoot', 'overshoot', 'of: y, to: target, at_most: 900 %'),
    requirement('rise', 'rise_time', 'of: y, to: target, at_most: 20 s'),
    requirement('low', 'smallest_value', 'of: y, at_least: -9 m'),
  ].join('\n');
  const figuresOf = (block: string): Record<string, number> =>
    measured(driven(`  y: { ${block}, of: target, unit: m }`, figures), { halvings: 3 });

  it('by coefficients is the second-order system of the handbook (A04)', () => {
    const { given } = publishedCase('A04');
    const [w, zeta] = [given.natural_frequency_rad_per_s, given.damping_ratio];
    const results = figuresOf(
      `transfer_function: { numerator: [${w * w}], denominator: [1, ${2 * zeta * w}, ${w * w}] }`,
    );
    expectPublished('A04', 'overshoot', 100 * results.overshoot);
    expectPublished('A04', 'rise_time_10_90', results.rise);
  });

  it('by zeros and poles is the same as by coefficients', () => {
    // (s − 2)(s + 3)/((s + 1)(s² + 2s + 5)), with a zero on the right: it starts the wrong way.
    const byCoefficients = figuresOf(
      'transfer_function: { numerator: [1, 1, -6], denominator: [1, 3, 7, 5] }, gain: -0.8',
    );
    const byRoots = figuresOf(
      'transfer_function: { zeros: [[2, 0], [-3, 0]], poles: [[-1, 0], [-1, 2]] }, gain: -0.8',
    );
    for (const [name, figure] of Object.entries(byCoefficients)) expect(byRoots[name]).toBeCloseTo(figure, 9);
    expect(byRoots.low).toBeLessThan(0);
  });

  it('with as many zeros as poles passes the input on at once', () => {
    const leadLag = figuresOf('lead_lag: { lead: 0.5 s, lag: 2 s }');
    const ratio = figuresOf('transfer_function: { numerator: [0.5, 1], denominator: [2, 1] }');
    for (const [name, figure] of Object.entries(leadLag)) expect(ratio[name]).toBeCloseTo(figure, 9);
  });

  it('refuses a derivative, a missing denominator, and both forms at once', () => {
    for (const [settings, message] of [
      [
        'numerator: [1, 0, 0], denominator: [1, 1]',
        'has 2 zeros and only 1 poles, and so would be a derivative',
      ],
      ['numerator: [1]', 'needs a denominator, or poles'],
      ['denominator: [1, 1], poles: [[-1, 0]]', 'has both denominator and poles'],
      ['denominator: [0, 1]', 'has a denominator that starts with 0'],
    ]) {
      expect(() => figuresOf(`transfer_function: { ${settings} }`)).toThrow(message);
    }
  });
});

describe('state_equations', () => {
  it('are the same system as the transfer function that they make', () => {
    const figures = requirement('rise', 'rise_time', 'of: y, to: target, at_most: 20 s');
    const [ratio, states] = [
      'transfer_function: { numerator: [2, 3], denominator: [1, 2, 3] }',
      'state_equations: { state_matrix: [[-2, -3], [1, 0]], input_matrix: [1, 0], output_matrix: [2, 3] }',
    ].map(
      (block) => measured(driven(`  y: { ${block}, of: target, unit: m }`, figures), { halvings: 3 }).rise,
    );
    expect(states).toBeCloseTo(ratio, 10);
  });

  it('say which matrix does not fit', () => {
    const block =
      'state_equations: { state_matrix: [[-2, -3], [1, 0]], input_matrix: [1], output_matrix: [2, 3] }';
    const spec = driven(
      `  y: { ${block}, of: target, unit: m }`,
      requirement('top', 'largest_value', 'of: y, at_most: 9 m'),
    );
    expect(() => resultsOf(spec)).toThrow(
      "state_equations of 'y' with 2 states: input_matrix has 1 numbers, expected 2",
    );
  });
});

describe('two opposed actuators around an idle point', () => {
  // Two jets with thrust g·v² each, one valve opened by the command and the other closed by it, with gains that do not match.
  const spec = (balance: string): string => `
inputs: { target: { unit: rad } }
plant:
  up: { lag: 40 ms, of: valve_up, gain: 3 N, unit: N }
  down: { lag: 60 ms, of: valve_down, gain: 2 N, unit: N }
  turn: { integral: ((0.5 m)*(up^2/(1 N) - down^2/(1 N)) ${balance})/(2 kg*m^2) - turn/(1 s), unit: rad/s }
  angle: { integral: turn, unit: rad }
sensors: { encoder: { of: angle, unit: rad } }
controllers:
  axis:
    every: 10 ms
    signals:
      push: { pid: { kp: 0.4, ki: 0.2 1/s }, of: target - encoder }
      open_up: { value: 0.5 + push, range: [0, 1] }
      open_down: { value: 0.5 - push, range: [0, 1] }
actuators: { valve_up: { of: open_up }, valve_down: { of: open_down } }
scenarios: { jump: { lasts: 20 s, inputs: { target: { step: 10 mrad, at: 0 s } } } }
requirements:
  - { name: gain, measure: gain_margin, at: push, at_least: 1.1 }
  - { name: top, measure: overshoot, of: angle, to: target, in: jump, at_most: 900 % }
`;

  it('is linearised at the idle point that is found: where both pushes balance, not where the command is zero', () => {
    const { gain } = measured(spec(''));
    // Balance: 3·(0.5 + p) = 2·(0.5 − p), so p = −0.1 and each force is 1.2 N; slopes 2·0.5·1.2·(3, 2) = 3.6 and 2.4 N*m.
    const linear = spec('')
      .replace('(0.5 m)*(up^2/(1 N) - down^2/(1 N))', '(1.2 m)*(up - down)')
      .replace('value: 0.5 + push, range: [0, 1]', 'value: push')
      .replace('value: 0.5 - push, range: [0, 1]', 'value: -push');
    expect(gain).toBeCloseTo(measured(linear).gain, 9);
  });
});
