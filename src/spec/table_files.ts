import { createRequire } from 'node:module';
import { posix } from 'node:path';
import { type Includes, isInside, topFolder } from './include.js';
import { suggestion } from './nearest.js';
import type { Problems } from './problems.js';
import type { Place } from './spec.js';
import { childOf, entriesOf, itemsOf, type ListTree, type TextTree, type Tree, textOf } from './tree.js';

/** What tables from files are read with. */
export interface TableFiles {
  /** The spec's own file: paths are relative to where they stand, and stay in its folder or in `includes.within`. */
  file: string;
  includes: Includes | undefined;
  problems: Problems;
}

/** More rows than this are no bench log but a mistake. */
const mostRows = 1_000_000;
const ownKeys = ['file', 'column', 'columns', 'unit', 'units'];

/**
 * A tree in which every mapping `{ file: log.csv, columns: [t, gust], units: [s, N*m] }` is replaced by the list of the file's
 * rows, as if they stood in the spec: numbers with units, each with its place in the file. With `column:` and `unit:` the
 * list is of single numbers.
 */
export function withTableFiles<T extends Tree>(tree: T, files: TableFiles): T {
  return replaced(tree, files) as T;
}

function replaced(tree: Tree, files: TableFiles): Tree {
  if (tree.kind === 'list') return { ...tree, items: tree.items.map((item) => replaced(item, files)) };
  if (tree.kind !== 'map') return tree;
  if (isTableFile(tree)) return tableOf(tree, files) ?? { kind: 'broken', place: tree.place };
  const entries = tree.entries.map((entry) => ({ ...entry, value: replaced(entry.value, files) }));
  return { ...tree, entries };
}

function isTableFile(tree: Tree): boolean {
  const keys = entriesOf(tree).map(({ key }) => key);
  return keys.includes('file') && (keys.includes('column') || keys.includes('columns'));
}

function tableOf(tree: Tree, files: TableFiles): ListTree | undefined {
  const { problems } = files;
  const unknown = entriesOf(tree).find(({ key }) => !ownKeys.includes(key));
  if (unknown) {
    const expected = 'expected file, column, unit, or file, columns, units';
    problems.add(unknown.keyPlace, `a table from a file has no key \`${unknown.key}\`; ${expected}`);
  }
  const file = textOf(childOf(tree, 'file'));
  if (file === undefined || unknown) return undefined;
  const names = textsOf(childOf(tree, 'columns') ?? childOf(tree, 'column'));
  const units = textsOf(childOf(tree, 'units') ?? childOf(tree, 'unit'));
  if (units.length > 0 && units.length !== names.length) {
    problems.add(tree.place, `${names.length} columns have ${units.length} units; expected one for each`);
    return undefined;
  }
  const table = readTable(file, files);
  const columns = table && columnsOf(table, names, files);
  if (!table || !columns) return undefined;
  const single = childOf(tree, 'column') !== undefined;
  const items = table.rows.map(({ values, place }): Tree => {
    const cells = columns.map((column, i) =>
      cell(values[column], units[i]?.text, { ...place, column: column + 1 }),
    );
    return single ? cells[0] : { kind: 'list', items: cells, place };
  });
  return { kind: 'list', items, place: tree.place };
}

function textsOf(tree: Tree | undefined): TextTree[] {
  return (tree?.kind === 'list' ? itemsOf(tree) : tree ? [tree] : []).flatMap((item) => textOf(item) ?? []);
}

interface Table {
  file: TextTree;
  names: string[];
  /** `place` counts columns of the table, not of the text. */
  rows: { values: string[]; place: Place }[];
}

function readTable(written: TextTree, { file, includes, problems }: TableFiles): Table | undefined {
  const refuse = (message: string): undefined => {
    problems.add(written.place, `\`${written.text}\` ${message}`);
    return undefined;
  };
  const within = topFolder(file, includes);
  const path = posix.normalize(posix.join(posix.dirname(written.place.file), written.text));
  if (!isInside(written.text, path, within)) return refuse(`leads outside \`${within}\``);
  const text = includes?.read(path);
  if (text === undefined) return refuse(`cannot be read: there is no file \`${path}\``);
  const parsed = parse(text);
  if (typeof parsed === 'string') return refuse(`is no table: ${parsed}`);
  const [head, ...rows] = parsed;
  if (head === undefined || rows.length === 0) {
    return refuse('has no rows; expected a line of column names and then numbers');
  }
  if (rows.length > mostRows) return refuse(`has ${rows.length} rows, more than ${mostRows}`);
  const placed = rows.map(({ values, line }) => ({ values, place: { file: path, line, column: 1 } }));
  return { file: written, names: head.values, rows: placed };
}

/** The rows of a text with comma, semicolon or tab between values, a line that starts with # being a comment; or why not. */
function parse(text: string): { values: string[]; line: number }[] | string {
  // Loaded only when a spec has such a file: few have, and it takes longer than reading the spec.
  const library: typeof import('csv-parse/sync') = createRequire(import.meta.url)('csv-parse/sync');
  try {
    const records = library.parse(text, {
      delimiter: [',', ';', '\t'],
      comment: '#',
      comment_no_infix: true,
      trim: true,
      skip_empty_lines: true,
      bom: true,
      info: true,
    }) as unknown as { record: string[]; info: { lines: number } }[];
    return records.map(({ record, info }) => ({ values: record, line: info.lines }));
  } catch (error) {
    return (error as Error).message;
  }
}

function columnsOf(
  { file, names }: Table,
  wanted: TextTree[],
  { problems }: TableFiles,
): number[] | undefined {
  const columns = wanted.map(({ text, place }) => {
    const at = names.indexOf(text);
    if (at < 0) problems.add(place, `\`${file.text}\` has no column \`${text}\`${suggestion(text, names)}`);
    return at;
  });
  return columns.includes(-1) ? undefined : columns;
}

/** A value as if it stood in the spec. */
function cell(value: string, unit: string | undefined, place: Place): TextTree {
  const text = unit === undefined || unit === '' ? value : `${value} ${unit}`;
  return { kind: 'text', text, source: text, placeAt: () => place, place };
}
