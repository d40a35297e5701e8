import type { Node } from '../graph.js';
import type { Block, BlockUse, Workshop } from './block.js';
import { derivativeAction } from './pid_derivative.js';
import { gainsOf, type PidGains } from './pid_gains.js';
import { type PidInputs, pidInputs } from './pid_inputs.js';
import { integralAction } from './pid_integral.js';
import { pidSettings } from './pid_settings.js';

/**
 * Proportional, integral and derivative action as difference equations (Åström and Wittenmark, 'Computer-Controlled
 * Systems', 1997, chapter 8; Åström and Hägglund, 'Advanced PID Control', 2006, for forms, weights and windup; from
 * memory). e is the given signal, T the period, ω the derivative's corner, a subscript 1 the value at the last instant;
 * every operation rounds as the target does, in the order written; each line is one expression of the firmware, but the
 * increment of i is one of its own under `hold_integral`, which asks for its sign.
 *
 *     p = kp·e
 *     i = i₁ + (ki·T)·e         backward     (ki·T)·e₁  forward     (ki·T)·((e + e₁)·0.5)  trapezoid
 *     d = (d₁ + (kd·ω)·(e − e₁)) / (1 + ω·T)                            backward
 *     d = (1 − ω·T)·d₁ + (kd·ω)·(e − e₁)                               forward
 *     d = ((2 − ω·T)·d₁ + (2·(kd·ω))·(e − e₁)) / (2 + ω·T)             trapezoid
 *     d = kd·((e − e₁)/T)                                              without a corner
 *     u = (p + i) + d, then the range
 *
 * - `gains: per_sample`: ki stands for ki·T, kd·(ω·T) for kd·ω, and d = kd·(e − e₁) without a corner.
 * - `form: standard`: (kp·T)/Ti stands for ki·T, kp·Td for kd; with gains a sample the times count samples: kp/Ti.
 * - `form: interacting`: d is formed with Td alone in kd's place; then f = e + d, p = kp·f, i takes f for e, u = p + i.
 * - With target r and measurement y apart, e = r − y, p takes b·r − y and d takes c·r − y where a weight is given.
 * - `assumed_period` stands for T throughout.
 */
export const pid: Block = {
  description: {
    key: 'pid',
    rooms: ['controller'],
    takesInput: true,
    takesPair: true,
    takesGain: false,
    settings: pidSettings,
    meaning: 'u = (kp·e + i) + d; interacting: u = kp·(e + d) + i',
  },
  keepsRange: true,
  expand: (use, workshop) => {
    const gains = gainsOf(use, workshop);
    const inputs = pidInputs(use, workshop);
    return gains.form === 'interacting'
      ? interacting(use, workshop, gains, inputs)
      : sumOfActions(use, workshop, gains, inputs);
  },
};

function sumOfActions(use: BlockUse, workshop: Workshop, gains: PidGains, inputs: PidInputs): Node {
  const { arithmetic } = workshop;
  const proportional = gains.kp && arithmetic.multiply(gains.kp, inputs.proportional);
  const derivative = gains.derivative && derivativeAction(use, workshop, gains.derivative, inputs);
  const total = (integral: Node | undefined): Node =>
    arithmetic.sum([
      ...(gains.kp ? [{ factor: gains.kp, value: inputs.proportional }] : []),
      ...[integral, derivative].flatMap((value) => (value ? [{ value }] : [])),
    ]);
  if (!gains.integralStep) return inRange(use, workshop, total(undefined));
  return integralAction(use, workshop, gains.integralStep, {
    taken: inputs.error,
    last: () => inputs.last(inputs.error),
    others: [proportional, derivative].filter((part) => part !== undefined),
    total,
    started: inputs.started,
  });
}

/** The derivative acts first, and the proportional and integral actions on its sum with the error. */
function interacting(use: BlockUse, workshop: Workshop, gains: PidGains, inputs: PidInputs): Node {
  const { arithmetic } = workshop;
  const derivative = gains.derivative && derivativeAction(use, workshop, gains.derivative, inputs);
  const led = (node: Node): Node => (derivative ? arithmetic.add(node, derivative) : node);
  const taken = led(inputs.error);
  const driven = led(inputs.proportional);
  const proportional = arithmetic.multiply(gains.kp!, driven);
  if (!gains.integralStep) return inRange(use, workshop, proportional);
  return integralAction(use, workshop, gains.integralStep, {
    taken,
    last: () => inputs.last(taken),
    others: [proportional],
    total: (integral) => arithmetic.sum([{ factor: gains.kp!, value: driven }, { value: integral }]),
    started: inputs.started,
  });
}

function inRange(use: BlockUse, { arithmetic }: Workshop, node: Node): Node {
  return use.range ? arithmetic.apply('limit', node, use.range.low, use.range.high) : node;
}
