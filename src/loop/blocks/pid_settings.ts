import { plainNumber, productOf, quotientOf, rateDimension, timeDimension } from '../../spec/dimension.js';
import type { SettingDescription, SignalDimensions } from '../../spec/vocabulary.js';

const perSample = ({ word }: SignalDimensions): boolean => word('gains') === 'per_sample';
const times = (of: SignalDimensions) => (perSample(of) ? plainNumber : timeDimension);

function number(
  name: string,
  dimension: (of: SignalDimensions) => readonly number[],
  meaning: string,
): SettingDescription {
  return { name, kind: 'expression', optional: true, dimension, meaning };
}

function choice(name: string, words: readonly string[], meaning: string): SettingDescription {
  return { name, kind: 'word', words, optional: true, meaning };
}

/** The settings of `pid`, for the spec reader. */
export const pidSettings: readonly SettingDescription[] = [
  choice(
    'form',
    ['parallel', 'standard', 'interacting'],
    'parallel takes kp, ki, kd; standard kp·(1 + 1/(Ti s) + Td s) and interacting kp·(1 + 1/(Ti s))·(1 + Td s) take kp, integral_time, derivative_time; parallel by default',
  ),
  number('kp', ({ output, input }) => quotientOf(output, input), 'proportional gain'),
  number(
    'ki',
    (of) => quotientOf(of.output, perSample(of) ? of.input : productOf(of.input, timeDimension)),
    'integral gain, a second or a sample as gains says',
  ),
  number(
    'kd',
    (of) => quotientOf(of.output, perSample(of) ? of.input : productOf(of.input, rateDimension)),
    'derivative gain, in seconds or samples as gains says',
  ),
  number('integral_time', times, 'Ti, in seconds or samples as gains says'),
  number('derivative_time', times, 'Td, in seconds or samples as gains says'),
  {
    name: 'derivative_corner',
    kind: 'corner',
    optional: true,
    meaning: 'corner ω of the first-order filter on the derivative',
  },
  choice(
    'sum_by',
    ['backward', 'forward', 'trapezoid'],
    'summation rule of the integral and of the filter on the derivative; backward by default',
  ),
  choice(
    'gains',
    ['per_second', 'per_sample'],
    'per_sample: the period is folded into the gains; per_second by default',
  ),
  number(
    'assumed_period',
    () => timeDimension,
    "the period that the firmware computes with, where it is not that of its timer; the controller's period by default",
  ),
  number(
    'target_weight',
    () => plainNumber,
    'b: the proportional action takes b·target − measurement; 1 by default',
  ),
  number(
    'derivative_target_weight',
    () => plainNumber,
    'c: the derivative takes c·target − measurement; 0 is the derivative of the measurement; 1 by default',
  ),
  choice(
    'anti_windup',
    ['hold_integral', 'bound_integral', 'pull_back'],
    'hold_integral: i stays at i₁ where u would pass the range and the sum would go further out; bound_integral: i stays inside the range; pull_back: i + (T/pull_back_time)·(u in the range − u) is kept; no rule by default',
  ),
  number('pull_back_time', times, 'time constant of pull_back, in seconds or samples as gains says'),
  number(
    'bumpless_start',
    ({ output }) => output,
    'the output at the first instant after power-up: the integral starts as (this − p) − d, with e₁ = e',
  ),
  number(
    'track',
    ({ output }) => output,
    'what the output is made to be by the integral, (this − p) − d, while track_when is not 0',
  ),
  number('track_when', () => plainNumber, 'whether another law is in charge, so that the output tracks'),
];
