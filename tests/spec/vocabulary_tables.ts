import { vocabulary } from '../../src/cli/vocabulary.js';
import { baseUnits, formatDimension } from '../../src/spec/index.js';
import type { Dimension } from '../../src/spec/spec.js';
import type {
  Axis,
  BlockDescription,
  MeasureDescription,
  MeasureKey,
  SettingDescription,
  ShapeDescription,
} from '../../src/spec/vocabulary.js';
import type { Example } from './examples/example.js';
import {
  blockExamples,
  measureGroups,
  patterns,
  sectionExamples,
  shapeExamples,
  statements,
} from './examples/index.js';
import { headroomTable, shareText } from './examples/judging.js';
import { exampleText, measureGroupText, patternText, shapeExampleText } from './examples/written_examples.js';

const cell = (text: string): string => text.replaceAll('|', '\\|');
const table = (head: string[], rows: string[][]): string =>
  [head, head.map(() => '---'), ...rows].map((row) => `| ${row.map(cell).join(' | ')} |`).join('\n');

function shapeRows({ key, length, meaning, settings }: ShapeDescription): string[] {
  const during = { none: '', optional: '; `for:` may be given', needed: '; `for:` is needed' }[length];
  const own = settings.map(({ name, optional, kind, meaning: what }) => {
    const takes = kind === 'frequency' ? ', in Hz or as a time' : '';
    return `  - \`${name}\`${optional ? ' (may be left out)' : ''}: ${what}${takes}`;
  });
  const examples = shapeExamples.filter(({ of }) => of === key).map(shapeExampleText);
  return [`- \`${key}\`: ${meaning}${during}`, ...own, ...examples];
}

function blockText(block: BlockDescription): string {
  const rooms = block.rooms.map((room) => (room === 'plant' ? 'the plant' : 'controllers')).join(' and ');
  const beside = [
    block.takesInput
      ? `\`of:\`${block.takesPair ? ' (a signal, or `{ target: …, measurement: … }`)' : ''}`
      : '',
    block.takesGain ? '`gain:`' : '',
  ].filter((text) => text !== '');
  const takes = beside.length > 0 ? ` Beside it: ${beside.join(', ')}.` : '';
  const rows = block.settings.map((setting) => {
    const { meaning, byDefault } = parted(setting.meaning);
    return [
      `\`${setting.name}\``,
      kindOf(setting),
      unitOfSetting(setting),
      setting.optional ? (byDefault ?? 'left out') : 'needed',
      meaning,
    ];
  });
  return [
    `### ${headingOf(block, rooms)}`,
    '',
    `In ${rooms}.${takes} ${block.meaning}.${block.key === 'pid' ? ` All of it: ${lineByLine}.` : ''}`,
    '',
    table(['setting', 'takes', 'unit', 'default', 'meaning'], rows),
    ...examplesOf(block).flatMap((example) => ['', exampleText(example)]),
  ].join('\n');
}

/** Of a block in one room, or in both; of two blocks with one key each has its own room. */
export const examplesOf = ({ key, rooms }: BlockDescription): Example[] =>
  blockExamples.filter(({ of, room }) => of === key && (room === undefined || rooms.includes(room)));

/** Two blocks with one key are told apart by their rooms. */
function headingOf({ key }: BlockDescription, rooms: string): string {
  const alike = vocabulary.blocks.filter((block) => block.key === key);
  return alike.length > 1 ? `${key} in ${rooms}` : key;
}

const lineByLine = '[three-term control, line by line](#three-term-control-line-by-line)';

/** What a description says last, `; 0 by default`, apart from the rest. */
function parted(meaning: string): { meaning: string; byDefault: string | undefined } {
  const [, rest, byDefault] = /^(.*); ([^;]*) by default$/.exec(meaning) ?? [];
  return byDefault === undefined ? { meaning, byDefault } : { meaning: rest, byDefault };
}

/** The unit of a setting, from those of the signal itself (`y`) and of what it takes (`of`). */
function unitOfSetting(setting: SettingDescription): string {
  switch (setting.kind) {
    case 'expression':
      return inSignalUnits(setting.dimension({ output: ofSignal, input: ofInput, word: () => undefined }));
    case 'time_constant':
      return 's, Hz or rad/s';
    case 'corner':
      return 'Hz or rad/s';
    case 'matrix':
      return unitOfEntries(setting);
    case 'signals':
    case 'estimates':
      return setting.name === 'estimate' ? '' : 'each its own';
    case 'coefficients':
    case 'word':
      return '';
  }
}

/** Mass stands for the unit of the signal, current for that of what it takes. */
const [ofSignal, ofInput] = ['kg', 'A'].map((unit) => baseUnits.map((one) => (one === unit ? 1 : 0)));

function inSignalUnits(dimension: Dimension): string {
  return formatDimension(dimension)
    .replace('a plain number', 'plain')
    .replace('1/s (rad/s)', 'rad/s')
    .replace('kg', 'y')
    .replace('A', 'of');
}

function unitOfEntries({ rows, columns, entry }: Extract<SettingDescription, { kind: 'matrix' }>): string {
  const axis = (of: Axis): string =>
    typeof of === 'object' ? of.of : { plain: '', output: 'y', input: 'of' }[of];
  const [row, column] = [axis(rows), axis(columns)];
  if (row === '' && column === '') return 'plain';
  if (column === '') return row;
  return entry === 'product' ? `${row}*${column}` : `${row === '' ? '1' : row}/${column}`;
}

function kindOf(setting: SettingDescription): string {
  switch (setting.kind) {
    case 'expression':
      return 'expression';
    case 'time_constant':
      return 'time, or corner';
    case 'corner':
      return 'corner';
    case 'coefficients':
      return 'a coefficient array';
    case 'word':
      return setting.words.map((word) => `\`${word}\``).join(', ');
    case 'signals':
      return 'a signal, or a list';
    case 'estimates':
      return setting.name === 'estimate' ? 'an observer' : 'a list of signals';
    case 'matrix':
      return 'list, rows, or array';
  }
}

function measureText(): string {
  const rows = (basis: MeasureDescription['basis']): string[][] =>
    vocabulary.measures
      .filter((measure) => measure.basis === basis)
      .map((measure) => [
        `\`${measure.name}\``,
        measure.keys.map(keyText).join(', '),
        measure.meaning,
        measure.ratio ? 'ratio or dB' : unitOf(measure),
        measure.better,
      ]);
  const head = ['measure', 'keys', 'definition', 'unit', 'better'];
  const part = (basis: MeasureDescription['basis'], title: string): string[] => [
    title,
    '',
    table(head, rows(basis)),
    ...measureGroups[basis].flatMap((group) => ['', measureGroupText(group)]),
  ];
  return [
    ...part('trace', '### Of a trace\n\nWith `in:` a scenario.'),
    '',
    ...part('loop', '### Of the loop\n\nOpened `at:` a signal.'),
    '',
    ...part(
      'firmware',
      '### Of the build alone\n\nWith `of:` a coefficient; the same for every plant, so that no scenario and no `holds_for:` is given.',
    ),
    '',
    '### Keys of the measures',
    '',
    table(['key', 'of', 'takes', 'meaning'], measureKeyRows()),
  ].join('\n');
}

/** The keys of measures, each once for each meaning that it has; which measure takes which stands in their tables. */
function measureKeyRows(): string[][] {
  const uses = new Map<string, { key: MeasureKey; measures: string[] }>();
  for (const { name: measure, keys } of vocabulary.measures) {
    for (const key of keys) {
      const same = `${key.name} ${key.kind} ${key.meaning}`;
      const use = uses.get(same) ?? { key, measures: [] };
      use.measures.push(measure);
      uses.set(same, use);
    }
  }
  const all = [...uses.values()].sort((a, b) =>
    a.key.name < b.key.name ? -1 : a.key.name > b.key.name ? 1 : 0,
  );
  return all.map(({ key, measures }) => [
    `\`${key.name}\``,
    measures.length > fewMeasures ? 'those that have it' : measures.map((name) => `\`${name}\``).join(', '),
    takenBy(key),
    key.meaning,
  ]);
}

const fewMeasures = 6;

function takenBy({ kind }: MeasureKey): string {
  switch (kind) {
    case 'signal':
      return 'a signal';
    case 'target':
      return 'an input or a signal';
    case 'loop_point':
      return 'a sensor, controller signal or actuator';
    case 'share':
      return 'a share';
    case 'frequency':
      return 'a frequency in Hz or rad/s';
    case 'statement':
      return 'a statement';
    case 'bound':
      return 'a list of [time, value]';
    case 'controller':
      return 'a controller';
    case 'coefficient':
      return 'a coefficient';
    case 'quantity':
      return 'a quantity';
  }
}

function keyText(key: MeasureKey): string {
  const { name, optional } = key;
  const more = key.kind === 'loop_point' && key.several !== undefined ? ' …' : '';
  return optional ? `[\`${name}\`]` : `\`${name}\`${more}`;
}

/** A unit that shows what becomes of the signal's own. */
function unitOf(measure: MeasureDescription): string {
  const mass = [0, 1, 0, 0, 0, 0, 0, 0];
  return formatDimension(measure.dimension(mass)).replace('a plain number', 'plain').replace('kg', 'of');
}

/** The parts of the reference that are written from the descriptions in the code, by the name of their place. */
export const written = (): Record<string, string> => ({
  shapes: ['', ...vocabulary.shapes.flatMap(shapeRows)].join('\n'),
  blocks: vocabulary.blocks.map(blockText).join('\n\n'),
  measures: measureText(),
  statements: measureGroupText(statements),
  headroom: `${headroomTable()}\n\n${shareText()}`,
  patterns: patterns.map(patternText).join('\n\n'),
  ...Object.fromEntries(
    Object.entries(sectionExamples).map(([name, examples]) => [name, examples.map(exampleText).join('\n\n')]),
  ),
});
