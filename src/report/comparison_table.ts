import type { Coefficient } from '../firmware/coefficient.js';
import type { ImageComparison } from '../firmware/index.js';
import { indexText, storedNumber } from './coefficient_table.js';
import { counted } from './format_value.js';
import { oneLine, shortened } from './plain_text.js';
import { textTable } from './text_table.js';

const headings = [
  '',
  'where in the build',
  'before',
  'after',
  'stored before',
  'stored after',
  'declared at',
];
const mostOfAName = 60;

/** What differs between two builds as a table of plain text: a row for each number, and how many are the same. */
export function comparisonTable({ changed, added, vanished, unchanged }: ImageComparison): string {
  const rows = [
    ...changed.flatMap(({ before, after }) => numberRows('changed', before, after)),
    ...added.flatMap((after) => numberRows('added', undefined, after)),
    ...vanished.flatMap((before) => numberRows('vanished', before, undefined)),
  ];
  const same = `${counted(unchanged, 'coefficient')} unchanged\n`;
  return rows.length === 0 ? same : `${textTable([headings, ...rows])}\n${same}`;
}

function numberRows(
  what: string,
  before: Coefficient | undefined,
  after: Coefficient | undefined,
): string[][] {
  const { path, shape, declaredAt } = (after ?? before)!;
  const count = Math.max(before?.elements.length ?? 0, after?.elements.length ?? 0);
  return Array.from({ length: count }, (_, at) => {
    const [old, fresh] = [before?.elements[at], after?.elements[at]];
    return { old, fresh, at };
  })
    .filter(({ old, fresh }) => old?.stored !== fresh?.stored || before?.type !== after?.type)
    .map(({ old, fresh, at }) => [
      what,
      shortened(oneLine(path), mostOfAName) + indexText(at, shape),
      old ? storedNumber(old.value, before!.format) : '',
      fresh ? storedNumber(fresh.value, after!.format) : '',
      old?.stored ?? '',
      fresh?.stored ?? '',
      declaredAt ? shortened(`${oneLine(declaredAt.file)}:${declaredAt.line}`, mostOfAName) : '',
    ]);
}
