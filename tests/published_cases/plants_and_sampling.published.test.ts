import { describe, expect, it } from 'vitest';
import { Linearisation } from '../../src/linear/linearise.js';
import { polesOf } from '../../src/linear/poles.js';
import { Evaluation } from '../../src/loop/evaluate.js';
import { expandLoop } from '../../src/loop/expand.js';
import { expectPublished, publishedCase } from '../published.js';
import { type SmallLoop, smallSpecOf, smallValues } from '../small_loop.js';

describe('a brushed motor (J02; Franklin, Powell and Emami-Naeini 2010)', () => {
  const { given } = publishedCase('J02');
  const constants = [
    `resistance: ${given.resistance_ohm} ohm`,
    `constant: ${given.torque_constant_N_m_per_A} N*m/A`,
    `inertia: ${given.inertia_kg_m2} kg*m^2`,
    `friction: ${given.friction_N_m_s} N*m*s`,
    `inductance: ${given.inductance_H} V*s/A`,
  ].join('\n');
  const motor = (plant: string, requirements: string[]): SmallLoop => ({
    constants,
    inputs: 'voltage: { unit: V }',
    plant,
    scenarios: 'run: { lasts: 1 s, inputs: { voltage: { step: 1 V, at: 0 s } } }',
    requirements: requirements.map((text, i) => `{ name: R${i}, in: run, ${text} }`),
  });

  it('without inductance has its gain, time constant and stall torque', () => {
    const plant =
      'torque: { value: constant*(voltage - constant*speed)/resistance + 0*constant*voltage*(inductance/inductance)/resistance, unit: N*m }\nspeed: { integral: (torque - friction*speed)/inertia, unit: rad/s }\npace: { value: speed*(1 V*s), unit: V }';
    const [gain, torque] = smallValues(
      motor(plant, [
        'measure: largest_value, of: speed, at_most: 1 rad/s',
        'measure: largest_value, of: torque, at_most: 1 N*m',
      ]),
      3,
    );
    expectPublished('J02', 'speed_gain', gain);
    expectPublished('J02', 'stall_torque_per_volt', torque);
    // The speed as a share of its end value reaches 1 − 1/e of it after one time constant.
    const level = (1 - Math.exp(-1)) * publishedCase('J02').given.torque_constant_N_m_per_A;
    const shareOfStep = (level / given.torque_constant_N_m_per_A) * gain;
    const [time] = smallValues(
      motor(plant, [`measure: delay_time, of: pace, to: voltage, share: ${shareOfStep}, at_most: 100 ms`]),
      3,
    );
    expectPublished('J02', 'mechanical_time_constant', time);
  });

  it('with inductance has two real poles', () => {
    const spec = smallSpecOf(
      motor(
        'current: { integral: (voltage - resistance*current - constant*speed)/inductance, unit: A }\nspeed: { integral: (constant*current - friction*speed)/inertia, unit: rad/s }',
        ['measure: largest_value, of: speed, at_most: 1 rad/s'],
      ),
    );
    const linearisation = new Linearisation(expandLoop(spec, new Map()));
    const poles = polesOf(linearisation.slopes('derivative', 'state', new Evaluation({})), undefined);
    expect(poles.every(({ imaginary }) => imaginary === 0)).toBe(true);
    expectPublished(
      'J02',
      'poles_with_inductance',
      poles.map(({ real }) => real).sort((a, b) => a - b),
    );
  });
});

describe('the hold between samples (J03; Åström and Wittenmark 1997)', () => {
  const { sampling_period_s: period, frequency_Hz: frequency } = publishedCase('J03').given;
  const omega = 2 * Math.PI * frequency;
  /** An integrator whose sampled loop gain is one at the frequency. */
  const gain = (2 * Math.sin((omega * period) / 2)) / period;
  const loop = (delay: number, requirements: string[]): SmallLoop => ({
    inputs: 'u: {}',
    plant: 'y: { integral: drive }',
    sensors: 'seen: { of: y }',
    controllers: `law:\n  every: ${period} s\n  delay: ${delay} s\n  signals:\n    command: { value: (${gain} 1/s)*(u - seen), unit: 1/s }`,
    actuators: 'drive: { of: command, unit: 1/s }',
    requirements: requirements.map((text, i) => `{ name: R${i}, at: drive, ${text} }`),
  });

  it('costs half a period, and a sample of computation one more', () => {
    const [loss, crossover, loopGain, margin] = smallValues(
      loop(0, [
        'measure: hold_phase_loss, at_most: 10 deg',
        'measure: crossover, at_most: 60 Hz',
        `measure: largest_loop_gain, frequency: ${frequency} Hz, at_most: 2`,
        'measure: phase_margin, at_least: 10 deg',
      ]),
    );
    const [delayed] = smallValues(loop(period, ['measure: phase_margin, at_least: 10 deg']));
    const degrees = 180 / Math.PI;
    expectPublished('J03', 'mean_delay', loss / crossover);
    expectPublished('J03', 'phase', -loss * degrees);
    // Of the 90° that an integrator leaves, the hold takes its share, and the delay its own.
    expectPublished('J03', 'phase', margin * degrees - 90);
    expectPublished('J03', 'phase_with_computation_delay', delayed * degrees - 90);
    // The sampled integrator's gain is the continuous one's over that of the hold.
    expectPublished('J03', 'gain', gain / omega / loopGain);
  });
});

describe('the quanta of a converter (J04; Bennett 1948)', () => {
  it('make the published error on a signal that crosses many of them', () => {
    const { full_scale_V: scale, bits } = publishedCase('J04').given;
    const step = scale / 2 ** bits;
    // A ramp of an irrational number of quanta a sample spreads the error evenly.
    const slope = step * Math.sqrt(2) * 1000;
    const [error, largest] = smallValues({
      inputs: 'u: {}',
      plant: `y: { integral: (${slope} V/s)*u, unit: V }`,
      sensors: `seen: { of: y, quantum: ${step} V, unit: V }\nexact: { of: y, unit: V }`,
      controllers: 'law:\n  every: 1 ms\n  signals:\n    gap: { value: seen - exact, unit: V }',
      scenarios: 'run: { lasts: 4.1 s, inputs: { u: { step: 1, at: 0.1 s } } }',
      requirements: [
        '{ name: A, in: run, measure: rms_effort, of: gap, at_most: 1 V }',
        '{ name: B, in: run, measure: peak_effort, of: gap, at_most: 1 V }',
      ],
    });
    expectPublished('J04', 'step', step);
    // 4,000 samples of an even spread: the mean square is good to about one over their number.
    expectPublished('J04', 'root_mean_square_error', error, 1e-3);
    expect(largest).toBeLessThanOrEqual((step / 2) * (1 + 1e-9));
    expect(largest).toBeGreaterThan(0.999 * (step / 2));
  });
});

describe('first harmonics of clipped signals (J05; Gelb and Vander Velde 1968)', () => {
  const { amplitude, slope, limit_of_linear_range, half_dead_band, relay_level, hysteresis_half_width } =
    publishedCase('J05').given;

  it('are means of products with the sine', () => {
    // s = A·sin t by an oscillator without damping that a step sets off: s = A·(cos t) shifted; c is its quadrature.
    const turn = 2 * Math.PI;
    const mean = (of: string): string =>
      `measure: steady_state_error, of: ${of}, to: none, over: ${2 * turn} s, until: ${4 * turn} s, at_most: 1`;
    const clip = slope * limit_of_linear_range;
    const values = smallValues(
      {
        inputs: 'u: {}\nnone: {}',
        plant: [
          'v: { integral: (1 1/s^2)*(u - x), unit: 1/s }',
          'x: { integral: v }',
          's: { value: x - u }',
          `saturated: { value: "s*max(${-clip}, min(${clip}, ${slope}*s))" }`,
          `banded: { value: "s*${slope}*(s - max(${-half_dead_band}, min(${half_dead_band}, s)))" }`,
          `relay: { value: ${relay_level}*abs(s) }`,
          `switched: { hysteresis: { on_above: ${hysteresis_half_width}, off_below: ${-hysteresis_half_width}, on: ${relay_level}, off: ${-relay_level} }, of: s }`,
          'inPhase: { value: s*switched }',
          'quadrature: { value: (1 s)*v*switched }',
        ].join('\n'),
        scenarios: `run: { lasts: ${4.1 * turn} s, start: zero, inputs: { u: { step: ${amplitude}, at: 0 s } } }`,
        requirements: ['saturated', 'banded', 'relay', 'inPhase', 'quadrature'].map(
          (signal, i) => `{ name: R${i}, in: run, ${mean(signal)} }`,
        ),
      },
      6,
    );
    const [saturation, band, relay, real, imaginary] = values.map((value) => (2 * value) / amplitude ** 2);
    // Kinks and switches lie within steps of the integration, 2⁻⁶ of 0.4 rad: 2e-5 for kinks, 1e-2 for jumps.
    expectPublished('J05', 'saturation', saturation, 2e-5);
    expectPublished('J05', 'dead_band', band, 2e-5);
    expectPublished('J05', 'relay', relay, 2e-5);
    expectPublished('J05', 'relay_with_hysteresis', [real, -imaginary], 1e-2);
  });
});

describe('stiff chemical kinetics (L06; Robertson 1966)', () => {
  it('have the published concentrations after 40 s', () => {
    // The first concentration starts at 1 by a step that is added to it: with it at 0 all is at rest.
    const at = 'from: 40 s, until: 40.000001 s';
    const values = smallValues(
      {
        inputs: 'u: {}',
        plant: [
          'y1: { value: moved + u }',
          'moved: { integral: (-0.04 1/s)*y1 + (1e4 1/s)*y2*y3 }',
          'y2: { integral: (0.04 1/s)*y1 - (1e4 1/s)*y2*y3 - (3e7 1/s)*y2*y2 }',
          'y3: { integral: (3e7 1/s)*y2*y2 }',
        ].join('\n'),
        sensors: 'seen: { of: y1 }',
        controllers: 'clock:\n  every: 10 ms\n  signals:\n    last: { value: seen }',
        scenarios: 'run: { lasts: 41 s, inputs: { u: { step: 1, at: 0 s } } }',
        requirements: ['y1', 'y2', 'y3'].map(
          (name) => `{ name: ${name}, in: run, measure: largest_value, of: ${name}, ${at}, at_most: 2 }`,
        ),
      },
      6,
    );
    // A controller that does nothing sets the steps: 10 ms halved six times, short against the fastest reaction (5e3/s).
    expectPublished('L06', 'y1', values[0], 1e-5);
    expectPublished('L06', 'y2', values[1], 1e-5);
    expectPublished('L06', 'y3', values[2], 1e-5);
  });
});

describe('relay oscillation of a lag with dead time (J07; Åström and Hägglund 1984)', () => {
  const {
    gain,
    time_constant_s: T,
    delay_s: L,
    relay_level,
    hysteresis_half_width: h,
  } = publishedCase('J07').given;
  /** The relay is a controller that looks every millisecond; the dead time is that of its output. */
  const oscillation = (half: number): number[] =>
    smallValues({
      inputs: 'u: {}',
      plant: `y: { lag: ${T} s, of: drive, gain: ${gain} }`,
      sensors: 'seen: { of: y }',
      controllers: [
        'law:',
        '  every: 1 ms',
        `  delay: ${L} s`,
        '  signals:',
        '    gap: { value: u - seen }',
        `    relay: { hysteresis: { on_above: ${half}, off_below: ${-half}, on: ${relay_level}, off: ${-relay_level} }, of: gap }`,
      ].join('\n'),
      actuators: 'drive: { of: relay }',
      scenarios: 'run: { lasts: 30 s, start: zero, inputs: { u: { step: 1e-9, at: 0.1 s } } }',
      requirements: [
        '{ name: A, in: run, measure: oscillation_amplitude, of: y, from: 15 s, at_most: 1 }',
        '{ name: B, in: run, measure: oscillation_frequency, of: y, from: 15 s, at_most: 1 Hz }',
      ],
    });

  it('has the published amplitude and period', () => {
    const [amplitude, frequency] = oscillation(h);
    const [, quicker] = oscillation(1e-9);
    // A switch comes up to 1 ms after the crossing, four of them (two crossings, on their way up and down) in a period.
    expectPublished('J07', 'amplitude', amplitude, 4e-3);
    expectPublished('J07', 'period', 1 / frequency, 2e-3);
    expectPublished('J07', 'period_without_hysteresis', 1 / quicker, 3e-3);
  });
});
