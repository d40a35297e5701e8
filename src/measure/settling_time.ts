import { timeDimension } from '../spec/dimension.js';
import { lastEntry } from './last_entry.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/**
 * Time from the step of the target to the response's last entry into after ± band·|after − before|, where it stays to the
 * end of the window. Zero when it never leaves the band; `never` when it is outside at the end of the window.
 */
export const settlingTime: TraceMeasure = {
  description: {
    name: 'settling_time',
    basis: 'trace',
    keys: [
      { name: 'of', kind: 'signal', optional: false, meaning: 'the response' },
      { name: 'to', kind: 'target', optional: false, meaning: 'the input that makes one step' },
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
    window: 'single_step_outlasting_limit',
    meaning:
      'from the step of `to` to the last entry of `of` into after ± band·|after − before|, staying inside to the end of the window; s',
  },
  measure: ({ of, step, quantity }) => {
    if (!step) return unformed('the target makes no single step');
    const band = quantity('band')! * Math.abs(step.after - step.before);
    const entry = lastEntry(of, step.after - band, step.after + band, step.time, step.until);
    if (entry.kind === 'not_a_number') return unformed('the response is not a number');
    if (entry.kind === 'inside') return measured(entry.time - step.time);
    const left = Math.abs(entry.value - step.after);
    const span = Number((step.until - step.time).toPrecision(4));
    return { kind: 'never', why: `longer than ${span} s: never stays in the band`, left };
  },
};
