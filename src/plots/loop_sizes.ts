import type { Complex } from '../linear/complex.js';
import { liftedSensitivity } from '../linear/lifted_margins.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import { prepareResponseMatrix } from '../linear/response.js';
import { largestSingularValue } from '../linear/singular_value.js';
import { prepareTransfer } from '../linear/transfer.js';
import type { LoopView } from '../measure/loop_view.js';
import type { GainPlot } from '../report/index.js';
import { seenAtOneFrequency } from './lifted_loop.js';
import { times, waveOver } from './wave.js';

/** The size of a response, a plain ratio, at an angular frequency in rad/s; not-a-number at a pole. */
export type SizeAt = (frequency: number) => number;

type Response = GainPlot['response'];

/**
 * The size of a response of an opened loop over frequency, as it is judged. `response`: of a signal that changes once in a cycle.
 * `any_signal`: of several changes or several signals the largest singular value, as for peaks. `sine`: of several changes of
 * one signal the root-mean-square of all that a sine makes of itself, over that of the sine, as for bands; of L itself what is
 * seen of it at that frequency.
 */
export function sizeOf(view: LoopView, response: Response, meaning: GainPlot['meaning']): SizeAt {
  if (meaning === 'response') return singleSize(view, response);
  if (response !== 'loop') return keepingFinite(closedSize(view, response, meaning));
  const seen = seenAtOneFrequency(view);
  return keepingFinite((frequency) => {
    const { real, imaginary } = seen(frequency);
    return Math.hypot(real, imaginary);
  });
}

function singleSize({ equations }: LoopView, response: Response): SizeAt {
  const transfer = prepareTransfer(equations);
  const parts = new Float64Array(4);
  return (frequency) => {
    transfer.evaluate(frequency, parts);
    // L is top over bottom, up to a factor that they share.
    const [bottomReal, bottomImaginary, topReal, topImaginary] = parts;
    const [top, bottom] = [Math.hypot(topReal, topImaginary), Math.hypot(bottomReal, bottomImaginary)];
    if (response === 'loop') return top / bottom;
    return (
      (response === 'sensitivity' ? bottom : top) /
      Math.hypot(bottomReal + topReal, bottomImaginary + topImaginary)
    );
  };
}

function closedSize(
  { equations, changes, period }: LoopView,
  response: Response,
  meaning: GainPlot['meaning'],
): SizeAt {
  const matrixAt = prepareResponseMatrix(liftedSensitivity(equations));
  return (frequency) => {
    const sensitivity = matrixAt(frequency);
    const matrix = response === 'following' ? oneMinus(sensitivity) : sensitivity;
    if (meaning === 'any_signal') return largestSingularValue(matrix).value;
    const made = times(matrix, waveOver(changes, frequency * period));
    return Math.hypot(...made.flatMap(({ real, imaginary }) => [real, imaginary]));
  };
}

function keepingFinite(sizeAt: SizeAt): SizeAt {
  return (frequency) => {
    try {
      return sizeAt(frequency);
    } catch (error) {
      if (error instanceof NumericFailure) return Number.NaN;
      throw error;
    }
  };
}

/** I − S = L·(I + L)⁻¹ */
function oneMinus(matrix: readonly (readonly Complex[])[]): Complex[][] {
  return matrix.map((row, i) =>
    row.map(({ real, imaginary }, j) => ({ real: (i === j ? 1 : 0) - real, imaginary: -imaginary })),
  );
}

const lookedAt = 240;
const rounds = 60;
/** Golden section: Kiefer (1953). */
const golden = (Math.sqrt(5) - 1) / 2;

/**
 * The place in a band of frequencies (rad/s) where a size is largest or smallest, for a mark in a picture: looked for evenly over
 * the logarithm, then between the neighbours of the best.
 */
export function extremePlace(
  sizeAt: SizeAt,
  { from, to }: { from: number; to: number },
  which: 'largest' | 'smallest',
): { frequency: number; value: number } {
  const start = Math.max(from, to / 1e6);
  const grid = Array.from({ length: lookedAt }, (_, at) => start * (to / start) ** (at / (lookedAt - 1)));
  const score = (frequency: number): number => (which === 'largest' ? sizeAt(frequency) : -sizeAt(frequency));
  const scores = grid.map(score);
  const best = scores.reduce((found, one, at) => (one > scores[found] ? at : found), 0);
  let [low, high] = [grid[Math.max(0, best - 1)], grid[Math.min(grid.length - 1, best + 1)]];
  for (let round = 0; round < rounds; round++) {
    const [left, right] = [high - golden * (high - low), low + golden * (high - low)];
    if (score(left) > score(right)) high = right;
    else low = left;
  }
  const frequency = [(low + high) / 2, grid[best]].reduce((a, b) => (score(b) >= score(a) ? b : a));
  return { frequency, value: sizeAt(frequency) };
}
