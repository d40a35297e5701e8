import { blocks } from '../../src/loop/blocks/index.js';
import { shapes } from '../../src/loop/inputs/index.js';
import { measures } from '../../src/measure/index.js';
import { formatSpecError, loadSpec } from '../../src/spec/index.js';
import type { Spec } from '../../src/spec/spec.js';

const vocabulary = {
  blocks: blocks.map(({ description }) => description),
  shapes: shapes.map(({ description }) => description),
  measures: measures.map(({ description }) => description),
};

/** A motor's speed loop: one lag, a controller with delay, no build. Two parameters move the loop. */
export const motor = `
pawl: 1
loop: Motor speed
constants:
  kp: 0.8 V*s/rad
  ki: 12 V/rad
parameters:
  lag:  { nominal: 50 ms, spread: 30 % }
  gain: { nominal: 2 rad/(V*s), from: 1.2 rad/(V*s), to: 3 rad/(V*s) }
inputs:
  goal: { unit: rad/s }
plant:
  speed: { lag: lag, of: drive, gain: gain, unit: rad/s }
sensors:
  tacho: { of: speed, unit: rad/s }
controllers:
  law:
    every: 2 ms
    delay: 1 ms
    signals:
      error:    { value: goal - tacho, unit: rad/s }
      integral: { value: before(integral) + ki*(2 ms)*error, unit: V }
      command:  { value: kp*error + integral, unit: V }
actuators:
  drive: { of: command, unit: V }
scenarios:
  step:
    lasts: 1 s
    inputs: { goal: { step: 10 rad/s, at: 50 ms } }
requirements:
  - { name: M-1, measure: overshoot, of: speed, to: goal, in: step, at_most: 30 % }
  - { name: M-2, measure: phase_margin, at: drive, at_least: 75 deg }
  - { name: M-3, measure: gain_margin, at: drive, at_least: 6 dB }
  - { name: M-4, measure: modulus_margin, at: drive, at_least: 0.7 }
perturbation: { plants: 40, seed: 5, search: 60 }
`;

/** The motor with some of its text replaced; each piece must occur. */
export function motorWith(...changes: [from: string, to: string][]): Spec {
  const text = changes.reduce((whole, [from, to]) => {
    if (!whole.includes(from)) throw new Error(`the motor does not contain: ${from}`);
    return whole.replace(from, to);
  }, motor);
  const loaded = loadSpec(text, 'motor.pawl.yaml', vocabulary);
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
  return loaded.spec;
}
