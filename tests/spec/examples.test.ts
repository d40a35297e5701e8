import { expect, test } from 'vitest';
import { vocabulary } from '../../src/cli/vocabulary.js';
import { computed } from './examples/computed.js';
import { type Example, type Outcome, usualTolerance } from './examples/example.js';
import { valueOfFormula } from './examples/formula.js';
import {
  blockExamples,
  measureGroups,
  patterns,
  sectionExamples,
  shapeExamples,
  statements,
} from './examples/index.js';
import { headroomExamples, headroomOf, shareClaimed, shareExample } from './examples/judging.js';
import { worthTelling } from './examples/written_examples.js';
import { examplesOf } from './vocabulary_tables.js';

/** Each formula is worked out by JavaScript alone, from the text that the page shows. */
function expectOutcomes(example: Omit<Example, 'of'>): void {
  const values = computed(example);
  example.outcomes.forEach((outcome: Outcome, at) => {
    const { formula, where, within = usualTolerance } = outcome;
    const expected = valueOfFormula(formula, where);
    const error = Math.abs(values[at] - expected);
    const what = `${JSON.stringify(outcome)}: ${expected} by hand, computed ${values[at]}`;
    expect(error, what).toBeLessThanOrEqual(within * Math.max(1, Math.abs(expected)));
  });
}

const named = (examples: readonly Example[]) =>
  examples.map((one) => [[one.of, one.room, one.shows].filter(Boolean).join(', '), one] as const);

/** The page promises this of every example, where it says nothing else beside the number. */
test('a tolerance that the page does not tell is small', () => {
  const groups = [
    blockExamples,
    shapeExamples,
    measureGroups,
    sectionExamples,
    patterns,
    [statements],
  ].flatMap((one) => Object.values(one).flat());
  const within = groups.flatMap(({ outcomes }) =>
    outcomes.map((outcome) => outcome.within ?? usualTolerance),
  );
  expect(Math.max(...within.filter((one) => one <= worthTelling))).toBeLessThanOrEqual(1e-6);
});

test.each(named(blockExamples))('the block %s', (_, example) => {
  expectOutcomes(example);
});

test.each(named(Object.values(sectionExamples).flat()))('the section %s', (_, example) => {
  expectOutcomes(example);
});

test.each(named(patterns))('the %s', (_, example) => {
  expectOutcomes(example);
});

test.each(headroomExamples.map((one) => [one.limit, one] as const))('the headroom of %s', (_, example) => {
  expect(headroomOf(example)).toBeCloseTo(valueOfFormula(example.formula), 9);
});

test('the share of plants that random ones can claim', () => {
  const { claimed, needed } = shareClaimed(shareExample);
  expect(claimed).toBeCloseTo(valueOfFormula(shareExample.formula), 9);
  expect(claimed).toBeGreaterThanOrEqual(shareExample.share);
  expect(needed).toBe(shareExample.plants);
});

test('the statements over time', () => {
  expectOutcomes(statements);
});

test.each(named(shapeExamples))('the input shape %s', (_, example) => {
  expectOutcomes(example);
});

test.each(
  Object.values(measureGroups)
    .flat()
    .map((group) => [group.shows, group] as const),
)('the measures of %s', (_, group) => {
  expectOutcomes(group);
});

const shownIn = (examples: readonly { shown: string; when?: Record<string, string> }[]): string =>
  examples.map(({ shown, when = {} }) => `${shown}\n${Object.values(when).join('\n')}`).join('\n');

test.each(
  vocabulary.blocks.map((block) => [`${block.key} of the ${block.rooms.join(' and ')}`, block] as const),
)('the block %s has an example in each of its rooms, and each of its settings is in one', (_, block) => {
  const examples = examplesOf(block);
  for (const room of block.rooms) {
    const here = examples.filter((one) => block.rooms.length === 1 || one.room === room);
    expect(here.length, `examples of ${block.key} in the ${room}`).toBeGreaterThan(0);
  }
  const main = block.main ?? block.key;
  for (const { name } of block.settings) {
    const key = name === main ? `(${name}|${block.key})` : name;
    expect(shownIn(examples)).toMatch(new RegExp(`\\b${key}:`));
  }
  for (const { outcomes } of examples) expect(outcomes.length).toBeGreaterThan(0);
});

test.each(vocabulary.shapes.map((shape) => [shape.key, shape] as const))(
  'the shape %s has an example, and each of its settings is in it',
  (key, { settings, length }) => {
    const examples = shapeExamples.filter(({ of }) => of === key);
    expect(examples.flatMap(({ outcomes }) => outcomes).length).toBeGreaterThan(0);
    for (const name of [...settings.map((one) => one.name), ...(length === 'needed' ? ['for'] : [])])
      expect(shownIn(examples)).toMatch(new RegExp(`\\b${name}:`));
  },
);

test.each(vocabulary.measures.map((measure) => [measure.name, measure] as const))(
  'the measure %s has an example, and each of its own keys is in one',
  (name, { basis, keys }) => {
    const requirements = measureGroups[basis].flatMap(({ outcomes }) =>
      outcomes.map(({ requirement }) => requirement),
    );
    const own = requirements.filter((text) => text.includes(`measure: ${name},`));
    expect(own.length, `examples of ${name}`).toBeGreaterThan(0);
    const shared = ['from', 'until', 'frequency', 'from_frequency', 'to_frequency'];
    for (const key of keys) {
      const where = shared.includes(key.name) ? requirements : own;
      expect(
        where.some((text) => text.includes(` ${key.name}: `)),
        key.name,
      ).toBe(true);
    }
  },
);
