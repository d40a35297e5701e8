import { describe, expect, it } from 'vitest';
import { measured } from '../measured.js';

/** A motor's speed under a controller, at rest at a speed of 10 rad/s before its target and load change. */
function loop(signals: string, extra = ''): string {
  return `
inputs: { wanted: { unit: rad/s, rest: 10 rad/s }, load: { unit: rad/s^2, rest: -3 rad/s^2 } }
plant: { speed: { integral: "(2 1/s^2)*drive - (0.5 1/s)*speed + load", unit: rad/s } }
sensors: { seen: { of: speed, unit: rad/s } }
controllers:
  law:
    every: 50 ms
    signals:
      ${signals}
actuators: { drive: { of: command, unit: rad } }
scenarios:
  step: { lasts: 20 s, inputs: { wanted: { step: 1 rad/s, at: 1 s }, load: { step: 0.1 rad/s^2, at: 10 s } } }
  still: { lasts: 5 s, inputs: { wanted: { step: 1 urad/s, at: 1 s } } }
requirements:
  - { name: moves, measure: peak_deviation, of: speed, to: wanted, in: still, at_most: 1 rad/s }
  - { name: left, measure: peak_deviation, of: speed, to: wanted, in: step, at_most: 1 rad/s }
  - { name: phase, measure: phase_margin, at: drive, at_least: 10 deg }
  - { name: phase at the sensor, measure: phase_margin, at: seen, at_least: 10 deg }
${extra}`;
}

const gains = 'kp: 1 s, ki: 0.6';
const pid = (more = '') =>
  `{ pid: { ${gains}${more} }, of: wanted - seen, unit: rad, range: [-40 rad, 40 rad] }`;

describe('in a whole loop at rest', () => {
  const plain = measured(loop(`command: ${pid()}`));

  it('a proportional-integral law holds the load and answers the step', () => {
    expect(plain.moves).toBeLessThan(1.1e-6);
    expect(plain.left).toBeCloseTo(1, 6);
    expect(plain.phase).toBeCloseTo(plain['phase at the sensor'], 9);
  });

  const equivalents: [string, string][] = [
    ['a bumpless start, which is for power-up', `command: ${pid(', bumpless_start: 3 rad')}`],
    ['tracking of a law that is not in charge', `command: ${pid(', track: 1 rad, track_when: 0')}`],
    [
      'pulling back, which acts at the range alone',
      `command: ${pid(', anti_windup: pull_back, pull_back_time: 1 s')}`,
    ],
    [
      'target and measurement given apart',
      `command: { pid: { ${gains} }, of: { target: wanted, measurement: seen }, unit: rad }`,
    ],
    [
      'a switch that stays where it is',
      `command: { switch: { between: [0 rad, law_1], by: wanted > (2 rad/s), bumpless: 1 s }, unit: rad }
      law_1: ${pid()}`,
    ],
    ['a slew that is fast enough', `command: ${pid().replace('unit: rad', 'unit: rad, slew: 900 rad/s')}`],
    [
      'the same law as a transfer function',
      `command: { transfer_function: { numerator: [1.03 s, -1 s], denominator: [1, -1] }, of: wanted - seen, unit: rad }`,
    ],
    [
      'an unused counter beside it',
      `command: ${pid()}
      late: { value: "before(late) + (wanted - seen > (5 rad/s))" }`,
    ],
  ];
  for (const [what, signals] of equivalents) {
    it(`${what} changes nothing`, () => {
      const found = measured(loop(signals));
      for (const [name, value] of Object.entries(plain)) {
        // The point of rest is found to 1e-12 of its terms.
        expect(Math.abs(found[name] - value), name).toBeLessThan(1e-9 * Math.max(1, value));
      }
    });
  }

  it('an observer starts with the right estimates, and a right model leaves the margins of its state feedback', () => {
    // Sampled exactly behind the hold: e^(-0.5·0.05), and what the drive adds.
    const pole = Math.exp(-0.025);
    const drive = (2 * (1 - pole)) / 0.5;
    const fed = (states: string) =>
      `feedback: { state_feedback: { states: [${states}], gains: [1.5 s] }, unit: rad }
      command: { value: "feedback + (1.5 s)*wanted + (5 s)*(wanted - wanted)", unit: rad }`;
    const direct = measured(loop(fed('seen')));
    const observed = measured(
      loop(`${fed('estimated')}
      estimated: { estimate: model, unit: rad/s }
      model: { observer: { states: [estimated], measured: seen, driven_by: command, state_matrix: ${pole}, input_matrix: ${drive} 1/s, output_matrix: 1, gain: 1, uses: this_sample }, unit: rad/s }`),
    );
    // A gain of one takes the measured speed as it is, so that both are one law.
    for (const [name, value] of Object.entries(direct)) {
      expect(Math.abs(observed[name] - value), name).toBeLessThan(1e-9 * Math.max(1, value));
    }
  });
});
