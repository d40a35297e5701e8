import { vocabulary } from '../../src/cli/vocabulary.js';
import { formatDimension } from '../../src/spec/index.js';
import type {
  BlockDescription,
  MeasureDescription,
  MeasureKey,
  SettingDescription,
  ShapeDescription,
} from '../../src/spec/vocabulary.js';

const cell = (text: string): string => text.replaceAll('|', '\\|');
const table = (head: string[], rows: string[][]): string =>
  [head, head.map(() => '---'), ...rows].map((row) => `| ${row.map(cell).join(' | ')} |`).join('\n');

function shapeRows({ key, length, meaning, settings }: ShapeDescription): string[] {
  const during = { none: '', optional: '; `for:` may be given', needed: '; `for:` is needed' }[length];
  const own = settings.map(({ name, optional, kind, meaning: what }) => {
    const takes = kind === 'frequency' ? ', in Hz or as a time' : '';
    return `  - \`${name}\`${optional ? ' (may be left out)' : ''}: ${what}${takes}`;
  });
  return [`- \`${key}\`: ${meaning}${during}`, ...own];
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
  const rows = block.settings.map((setting) => [
    `\`${setting.name}\``,
    kindOf(setting),
    setting.optional ? '' : 'needed',
    setting.meaning,
  ]);
  return [
    `### ${block.key}`,
    '',
    `In ${rooms}.${takes} ${block.meaning}.`,
    '',
    table(['setting', 'takes', '', 'meaning'], rows),
  ].join('\n');
}

function kindOf(setting: SettingDescription): string {
  switch (setting.kind) {
    case 'expression':
      return 'expression';
    case 'time_constant':
      return 'time, or corner in Hz or rad/s';
    case 'corner':
      return 'corner in Hz or rad/s';
    case 'coefficients':
      return 'a coefficient array';
    case 'word':
      return setting.words.map((word) => `\`${word}\``).join(', ');
    case 'signals':
      return 'a signal, or a list';
    case 'estimates':
      return 'a list of signals';
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
  return [
    'Of a trace, with `in:` a scenario:',
    '',
    table(head, rows('trace')),
    '',
    'Of the loop, opened `at:` a signal, or [at several](#opening-a-loop-at-several-signals) at once where the key is `at` …:',
    '',
    table(head, rows('loop')),
    '',
    'Of the build alone, `of:` a coefficient; the same for every plant, so that no scenario and no `holds_for:` is given:',
    '',
    table(head, rows('firmware')),
  ].join('\n');
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
});
