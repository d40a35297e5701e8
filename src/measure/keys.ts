import { timeDimension } from '../spec/dimension.js';
import type { MeasureKey } from '../spec/vocabulary.js';

/** Keys that several measures share, so that one word means one thing. */
export const responseKey: MeasureKey = {
  name: 'of',
  kind: 'signal',
  optional: false,
  meaning: 'the response',
};

export const signalKey: MeasureKey = { name: 'of', kind: 'signal', optional: false, meaning: 'the signal' };

export const stepKey: MeasureKey = {
  name: 'to',
  kind: 'target',
  optional: false,
  meaning: 'the input that makes one step',
};

export const targetKey: MeasureKey = {
  name: 'to',
  kind: 'target',
  optional: false,
  meaning: 'what it should follow',
};

export const loopPointKey: Extract<MeasureKey, { kind: 'loop_point' }> = {
  name: 'at',
  kind: 'loop_point',
  optional: false,
  meaning: 'where the loop is opened',
};

/** For measures that do not depend on the units of signals. */
export const loopPointsKey: typeof loopPointKey = {
  ...loopPointKey,
  several: 'of_any_unit',
  meaning: 'where the loop is opened; a list opens it at several signals at once',
};

/** For measures that compare signals in size. */
export const comparedLoopPointsKey: typeof loopPointKey = { ...loopPointsKey, several: 'of_comparable_size' };

export const coefficientKey: MeasureKey = {
  name: 'of',
  kind: 'coefficient',
  optional: false,
  meaning: 'a coefficient',
};

/** The window of a measure: times of the scenario. */
export const windowKeys: readonly MeasureKey[] = [
  {
    name: 'from',
    kind: 'quantity',
    dimension: () => timeDimension,
    optional: true,
    meaning: 'where the window begins, as a time of the scenario; its first event unless given',
  },
  {
    name: 'until',
    kind: 'quantity',
    dimension: () => timeDimension,
    optional: true,
    meaning: 'where the window ends, as a time of the scenario; its end unless given',
  },
];

/** The frequencies over which a response is looked at. */
export const frequencyRangeKeys: readonly MeasureKey[] = [
  { name: 'frequency', kind: 'frequency', optional: true, meaning: 'the one frequency' },
  {
    name: 'from_frequency',
    kind: 'frequency',
    optional: true,
    meaning: 'where the range begins; zero frequency unless given',
  },
  {
    name: 'to_frequency',
    kind: 'frequency',
    optional: true,
    meaning: 'where the range ends; half the sampling frequency unless given',
  },
];
