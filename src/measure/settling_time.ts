import { timeDimension } from '../spec/dimension.js';
import type { Curve } from './curve.js';
import { responseKey, stepKey } from './keys.js';
import { lastEntry } from './last_entry.js';
import { type MeasureResult, measured, type TraceMeasure, unformed, type Window } from './measure.js';

/**
 * Time from the step of the target to the response's last entry into after ± band·|after − before|, where it stays to the
 * end of the window; being exactly on the band counts as inside. Zero when it never leaves the band; `never` when it is
 * outside at the end of the window.
 */
export const settlingTime: TraceMeasure = {
  description: {
    name: 'settling_time',
    basis: 'trace',
    keys: [
      responseKey,
      stepKey,
      {
        name: 'band',
        kind: 'share',
        optional: false,
        meaning: 'half width of the band, as a share of the step',
      },
    ],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'single_step_outlasting_limit',
    meaning:
      'from the step of `to` to the last entry of `of` into after ± band·|after − before|, staying inside to the end of the window; s; 0 where it never leaves the band, never where it ends outside',
  },
  measure: ({ of, step, quantity }) => {
    if (!step) return unformed('the target makes no single step');
    const half = quantity('band')! * Math.abs(step.after - step.before);
    return timeToStay(of, step.after, half, { from: step.time, until: step.until });
  },
};

/** Time from the start of a window to the last entry into centre ± half, where the curve stays to its end. */
export function timeToStay(of: Curve, centre: number, half: number, { from, until }: Window): MeasureResult {
  const entry = lastEntry(of, centre - half, centre + half, from, until);
  if (entry.kind === 'not_a_number') return unformed('the response is not a number');
  if (entry.kind === 'inside') return measured(entry.time - from);
  const span = Number((until - from).toPrecision(4));
  const left = Math.abs(entry.value - centre);
  return { kind: 'never', why: `longer than ${span} s: never stays in the band`, left };
}
