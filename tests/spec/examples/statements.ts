import type { MeasureGroup } from './example.js';

const of = (name: string, holds: string, formula: string, why?: string) => ({
  requirement: `{ name: ${name}, measure: over_time, holds: ${holds}, in: shift, at_least: 0 }`,
  unit: '',
  formula,
  within: 1e-6,
  ...(why ? { why } : {}),
});

/** What can be said of signals over time: a belt that starts, and its alarm at a fault. */
export const statements: MeasureGroup = {
  title: 'a belt and its alarm',
  shows:
    'a belt that starts at 1 s, and an alarm at a fault from 2 s to 5 s; t seconds after they are switched, e^(−t) is missing',
  shown: `plant:
  belt:  { lag: 1 s, of: start, gain: 2 m/s, unit: m/s }
  alarm: { lag: 1 s, of: fault }
scenarios:
  shift: { lasts: 10 s, inputs: { start: { step: 1, at: 1 s }, fault: { pulse: 1, at: 2 s, for: 3 s } } }`,
  hidden: 'inputs: { start: {}, fault: {} }',
  halvings: 7,
  outcomes: [
    of('S-1', '{ that: belt < 0.3 m/s, scale: 0.1 m/s }', '0.3/0.1', 'at the start of the scenario'),
    of(
      'S-2',
      '{ throughout: belt > 1 m/s, from: 2 s, to: 4 s, scale: 0.1 m/s }',
      '(2·(1 − e^(−1)) − 1)/0.1',
      'least at 2 s',
    ),
    of(
      'S-3',
      '{ at_some_time: belt > 1.9 m/s, to: 4 s, scale: 0.1 m/s }',
      '(2·(1 − e^(−3)) − 1.9)/0.1',
      'most at 4 s: it is not reached',
    ),
    of(
      'S-4',
      '{ throughout: { when: fault > 0.5, holds: { at_some_time: alarm > 0.5, to: 1 s } }, scale: 1 }',
      '0.5 − e^(−1)',
      'the alarm answers within 1 s',
    ),
    of(
      'S-5',
      '{ holds: start < 1.5, holds_up_to: alarm > 0.5, scale: 1 }',
      '0.5 − e^(−3)',
      'best at 5 s, and 1.5 − 1 up to then is more',
    ),
    of(
      'S-6',
      '{ all_of: [{ throughout: belt < 2.1 m/s }, { at_some_time: alarm > 0.9, scale: 0.1 }], scale: 0.5 m/s }',
      '(2.1 − 2·(1 − e^(−9)))/0.5',
      'less than (0.1 − e^(−3))/0.1',
    ),
    of(
      'S-7',
      '{ one_of: [{ throughout: belt < 1.5 m/s, scale: 1 m/s }, { throughout: alarm < 0.97, scale: 1 }] }',
      '0.97 − 1 + e^(−3)',
      'the belt fails by half a metre a second',
    ),
  ],
};
