import type { MeasureGroup } from './example.js';

const of = (name: string, text: string, unit: string, formula: string, why?: string) => ({
  requirement: `{ name: ${name}, measure: ${text} }`,
  unit,
  formula,
  ...(why ? { why } : {}),
});

/**
 * A motor's speed under proportional control: L = a/(z − 1) with a = 1·10 ms/0.02 = 1/2 (an integrator behind a hold; Åström and
 * Wittenmark, 'Computer-Controlled Systems', 1997, table 2.1, from memory). All else follows by algebra.
 */
const motor: MeasureGroup = {
  title: "a motor's speed",
  shows:
    'a motor of 0.02 kg·m², its speed sampled every T = 10 ms: L = a/(z − 1) with a = 1·T/0.02 = 1/2, and |L| = a/(2·sin(ωT/2))',
  shown: `plant:
  speed: { integral: torque/(0.02 kg*m^2), unit: rad/s }
sensors:
  tacho: { of: speed, unit: rad/s }
controllers:
  drive:
    every: 10 ms
    signals: { push: { value: (1 N*m*s/rad)*(wanted - tacho), unit: N*m } }
actuators:
  torque: { of: push, unit: N*m }`,
  hidden: 'inputs: { wanted: { unit: rad/s } }',
  outcomes: [
    of('M-1', 'stability, at: torque, at_least: 10 1/s', '1/s', 'ln(2)/0.01', 'the mode z = 1 − a'),
    of('M-2', 'gain_margin, at: torque, at_least: 6 dB', 'dB', '20·log10(2/0.5)', 'L(−1) = −a/2'),
    of('M-3', 'crossover, at: torque, at_least: 5 Hz', 'rad/s', '2·asin(0.25)/0.01', '|L| = 1'),
    of('M-4', 'lowest_crossover, at: torque, at_least: 5 Hz', 'rad/s', '2·asin(0.25)/0.01', 'the only one'),
    of(
      'M-5',
      'phase_margin, at: torque, at_least: 45 deg',
      'deg',
      '90 − asin(0.25)·180/π',
      'arg L = −90° − ωT/2',
    ),
    of(
      'M-6',
      'delay_margin, at: torque, at_least: 10 ms',
      'ms',
      '1000·(π/2 − asin(0.25))/(2·asin(0.25)/0.01)',
    ),
    of('M-7', 'modulus_margin, at: torque, at_least: 0.5', '', '1 − 0.5/2', '|1 + L| at z = −1'),
    of(
      'M-8',
      'disc_margin, at: torque, at_least: 0.7',
      '',
      '2·(1 − 0.25)/(1 + 0.25)',
      '1/|S − 1/2| at z = −1',
    ),
    of('M-9', 'sensitivity_peak, at: torque, at_most: 6 dB', 'dB', '20·log10(1/(1 − 0.25))'),
    of(
      'M-10',
      'complementary_peak, at: torque, at_most: 3 dB',
      'dB',
      '0',
      'L/(1 + L) = a/(z − 1 + a) is largest, 1, at z = 1',
    ),
    of('M-11', 'bandwidth, at: torque, at_least: 10 Hz', 'rad/s', 'acos(0.75)/0.01', 'a²/|z − 1/2|² = 1/2'),
    of('M-12', 'sampling_ratio, at: torque, at_least: 6', '', '2·π/acos(0.75)'),
    of(
      'M-13',
      'hold_phase_loss, at: torque, at_most: 20 deg',
      'deg',
      'asin(0.25)·180/π',
      'ωT/2 at the crossover',
    ),
    of(
      'M-14',
      'largest_loop_gain, at: torque, from_frequency: 25 Hz, at_most: -6 dB',
      'dB',
      '20·log10(0.5/(2·sin(π/4)))',
      'at 25 Hz',
    ),
    of(
      'M-15',
      'smallest_loop_gain, at: torque, to_frequency: 1 Hz, at_least: 12 dB',
      'dB',
      '20·log10(0.5/(2·sin(π/100)))',
      'at 1 Hz',
    ),
    of(
      'M-16',
      'largest_sensitivity, at: torque, frequency: 25 Hz, at_most: 6 dB',
      'dB',
      '20·log10(√(2)/√(1.25))',
      '|z − 1|/|z − 1/2| at z = j',
    ),
    of(
      'M-17',
      'largest_following_gain, at: torque, frequency: 25 Hz, at_most: 0 dB',
      'dB',
      '20·log10(0.5/√(1.25))',
      'a/|z − 1/2| at z = j',
    ),
    of('M-18', 'least_damping, at: torque, at_least: 0.4', '', '1', 'a real mode does not swing'),
    of(
      'M-19',
      'noise_gain, at: tacho, of: torque, at_most: 2 N*m*s/rad',
      'N*m*s/rad',
      '√(1 + 0.5^2/(1 − 0.5^2))',
      'of (z − 1)/(z − 1/2) = 1 − 0.5/z − 0.25/z² − …',
    ),
  ],
};

/** A fan whose drag grows with the square of its speed: L has another pole at each working point. */
const fan: MeasureGroup = {
  title: 'a working point',
  shows:
    'a fan with drag c·speed², c = 0.1 mN·m·s²/rad², J = 0.002 kg·m²: around a speed v its pole is at 2·c·v/J, 10 /s at 100 rad/s, and the gain of a pulse of T = 20 ms is (1 − e^(−0.2))/10/J',
  shown: `plant:
  speed: { integral: (torque - (1e-4 N*m*s^2/rad^2)*speed^2)/(2 g*m^2), unit: rad/s }
sensors:
  tacho: { of: speed, unit: rad/s }
controllers:
  drive: { every: 20 ms, signals: { push: { value: (0.05 N*m*s/rad)*(wanted - tacho), unit: N*m } } }
actuators:
  torque: { of: push, unit: N*m }`,
  hidden: 'inputs: { wanted: { unit: rad/s } }',
  outcomes: [
    of(
      'N-1',
      'stability, at: torque, around: { speed: 100 rad/s }, at_least: 10 1/s',
      '1/s',
      '−ln(e^(−0.2) − 0.05·(1 − e^(−0.2))/10/0.002)/0.02',
      'the mode z = e^(−0.2) − 0.05·gain',
    ),
    of(
      'N-2',
      'stability, at: torque, at_least: 10 1/s',
      '1/s',
      '−ln(1 − 0.05·0.02/0.002)/0.02',
      'at rest: no drag, and a gain of T/J',
    ),
  ],
};

/** Measures of the loop. */
export const loopMeasures: readonly MeasureGroup[] = [motor, fan];
