import { z } from 'zod';
import { bound, text } from './skeleton_slots.js';
import type { MeasureKey, Vocabulary } from './vocabulary.js';

const statementSlot = () => z.union([text('a comparison such as angle < 2 mrad'), statement]);

/** A statement over time: which keys go together is checked when it is read. */
const statement = z
  .strictObject({
    that: text('a comparison such as angle < 2 mrad').optional(),
    get throughout() {
      return statementSlot().optional();
    },
    get at_some_time() {
      return statementSlot().optional();
    },
    get holds_up_to() {
      return statementSlot().optional();
    },
    get holds() {
      return statementSlot().optional();
    },
    get when() {
      return statementSlot().optional();
    },
    get all_of() {
      return z.array(statementSlot()).optional();
    },
    get one_of() {
      return z.array(statementSlot()).optional();
    },
    from: text('a time such as 0.5 s').optional(),
    to: text('a time such as 2 s').optional(),
    scale: text('a quantity that counts as a headroom of 100 %').optional(),
  })
  .describe('a statement such as { throughout: angle < 2 mrad, from: 1 s, to: 3 s, scale: 1 mrad }');

/** Which measures take a list is checked when it is read. */
const loopPoints = z
  .union([text('a signal'), z.array(text('the name of a signal')).min(1)])
  .describe('where the loop is opened: a signal, or a list such as [duty_pan, duty_tilt]');

function measureSlot(key: MeasureKey) {
  if (key.kind === 'statement') return statementSlot().describe(key.meaning);
  if (key.kind === 'loop_point') return loopPoints;
  return key.kind === 'bound' ? bound : text(key.meaning);
}

/** One of the requirements: the keys of all measures, and those that every requirement has. */
export function requirement(vocabulary: Vocabulary) {
  const keys = vocabulary.measures.flatMap((measure) => measure.keys);
  const slots = Object.fromEntries(keys.map((key) => [key.name, measureSlot(key).optional()]));
  return z
    .strictObject({
      ...slots,
      name: text('a name'),
      measure: text('the name of a measure'),
      in: text('the name of a scenario').optional(),
      around: z
        .record(z.string(), text('a quantity'))
        .describe('signal values, such as { speed: 5 rad/s }')
        .optional(),
      at_most: text('a limit: a number with its unit').optional(),
      at_least: text('a limit: a number with its unit').optional(),
      between: z
        .tuple([text('a limit'), text('a limit')])
        .describe('two limits in brackets, such as [1 V, 2 V]')
        .optional(),
      builds: z
        .union([text('the name of a build'), z.array(text('the name of a build')).min(1)])
        .describe('the builds that it is for: a name, or a list such as [left, right]')
        .optional(),
      holds_for: text('nominal, all, or a share such as 99 %').optional(),
      scale: text('a quantity').optional(),
      reason: text('plain words').optional(),
    })
    .describe('{ name: …, measure: …, at_most: … }');
}
