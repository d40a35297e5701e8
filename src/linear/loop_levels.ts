import { prepareFormFrequencies, type QuadraticForm } from './level_frequencies.js';
import type { LoopResponse } from './loop_response.js';
import { fromRows, scale } from './matrix.js';
import type { StateEquations } from './state_equations.js';

/**
 * The returned function gives frequencies (rad/s, ascending) among which are all those at which the size of a response of a
 * loop transfer L is a level above zero. They come from S = 1/(1 + L) or from T = L/(1 + L), of which L is (1 − S)/S or
 * T/(1 − T): so poles of L on the boundary of stability, as those of integrators, do no harm.
 * @param sensitivity S, without poles on the boundary of stability.
 */
export function prepareLoopLevels(
  sensitivity: StateEquations,
  response: LoopResponse,
): (level: number) => number[] {
  const { c, d } = sensitivity;
  const ofSensitivity = once(() => prepareFormFrequencies(sensitivity));
  const complementary = { ...sensitivity, c: scale(c, -1), d: fromRows([[1 - d.data[0]]]) };
  const ofComplementary = once(() => prepareFormFrequencies(complementary));
  const { loopWeight, unitWeight } = response;
  return (level) =>
    isSmall(response, level)
      ? ofComplementary()(levelForm(loopWeight, unitWeight, response.open ? [-1, 1] : [0, 1], level))
      : ofSensitivity()(levelForm(unitWeight, loopWeight, response.open ? [1, 0] : [0, 1], level));
}

/** Whether the level is told from zero by T, of which nothing is lost where L is small, and not by S. */
function isSmall({ loopWeight, unitWeight, open }: LoopResponse, level: number): boolean {
  return open ? level < 1 : unitWeight === 0 && loopWeight !== 0;
}

/**
 * |own·X + other·(1 − X)|² − level²·|slope·X + constant|² as a form of X, with the bottom [slope, constant].
 */
function levelForm(own: number, other: number, bottom: [number, number], level: number): QuadraticForm {
  const slope = own - other;
  const [bottomSlope, bottomConstant] = bottom;
  const square = level * level;
  return {
    output: slope * slope - square * bottomSlope * bottomSlope,
    across: other * slope - square * bottomSlope * bottomConstant,
    input: other * other - square * bottomConstant * bottomConstant,
  };
}

function once<T>(work: () => T): () => T {
  let result: { value: T } | undefined;
  return () => {
    result ??= { value: work() };
    return result.value;
  };
}
