import { plainNumber, productOf, quotientOf } from './dimension.js';
import { suggestion } from './nearest.js';
import { readCoefficientName } from './read_coefficient_name.js';
import { readExpression, readFree, type Slot } from './read_expression.js';
import type { Workplace } from './read_signal.js';
import { missing } from './reading.js';
import type { Dimension, Expression, Setting } from './spec.js';
import { childOf, itemsOf, type ListTree, type TextTree, type Tree, textOf } from './tree.js';
import type { Axis, SettingDescription } from './vocabulary.js';

/** Reads a setting that is a list of signals, of names, or a matrix. Lists of the wrong size are reported. */
export function readList(
  tree: Tree,
  description: Extract<SettingDescription, { kind: 'signals' | 'estimates' | 'matrix' }>,
  place: Workplace,
): Setting | undefined {
  switch (description.kind) {
    case 'signals':
      return readSignals(tree, description.late === true, place);
    case 'estimates':
      return readNames(tree, description.late === true, place);
    case 'matrix':
      return readMatrix(tree, description, place);
  }
}

function partsOf(tree: Tree): TextTree[] {
  return (tree.kind === 'list' ? tree.items : [tree]).flatMap((item) => textOf(item) ?? []);
}

function readSignals(tree: Tree, late: boolean, { around, reading }: Workplace): Setting {
  const row = partsOf(tree).map((item) => {
    const free = readFree(item, around, reading);
    return free?.dimension === undefined ? missing(item.place) : free.expression;
  });
  return { kind: 'rows', rows: [row], place: tree.place, ...(late && { late }) };
}

function readNames(tree: Tree, late: boolean, { entry, reading }: Workplace): Setting {
  const all = [...reading.names.entries.values()];
  const controller = reading.names.entries.get(entry.key)?.controller;
  const known = all.filter((one) => one.kind === 'controller signal' && one.controller === controller);
  const names = partsOf(tree).map(({ text, place }) => {
    reading.names.used.add(text);
    if (!known.some(({ name }) => name === text)) {
      const near = suggestion(
        text,
        known.map(({ name }) => name),
      );
      reading.problems.add(place, `\`${text}\` is no signal of this controller${near}`);
      reading.names.incomplete = true;
    }
    return text;
  });
  return { kind: 'names', names, place: tree.place, ...(late && { late }) };
}

/** What one row or column stands for: a unit as a dimension and its SI value. */
interface AxisUnit {
  dimension: Dimension | undefined;
  scale: number;
}

/** The units along an axis; an axis that is not the entries of a list goes on with its only one. */
interface AxisUnits {
  units: AxisUnit[];
  counted: boolean;
  /** The list that is missing, whose entries would be the axis. */
  missing?: string;
}

function readMatrix(
  tree: Tree,
  description: Extract<SettingDescription, { kind: 'matrix' }>,
  place: Workplace,
): Setting | undefined {
  const { reading } = place;
  const what = `\`${description.name}\``;
  if (tree.kind === 'text' && reading.names.entries.get(tree.text)?.kind === 'coefficient') {
    return readCoefficientName(tree, what, reading);
  }
  const rows = axisUnits(description.rows, place);
  const columns = axisUnits(description.columns, place);
  const trees = shaped(tree, rows, columns);
  if (!fits(trees, rows, columns)) {
    reading.problems.add(tree.place, wrongSize(what, trees, rows, columns));
    return undefined;
  }
  const entry = (item: Tree, i: number, j: number): Expression => {
    const slot = {
      ...entrySlot(unitAt(rows, i), unitAt(columns, j), description.entry, what),
      size: description.columns !== 'plain',
    };
    return readExpression(item, slot, place.around, reading) ?? missing(item.place);
  };
  return {
    kind: 'rows',
    rows: trees.map((row, i) => row.map((item, j) => entry(item, i, j))),
    place: tree.place,
  };
}

function axisUnits(axis: Axis, { block, entry, unit, scale, input, around, reading }: Workplace): AxisUnits {
  if (axis === 'plain') return { counted: false, units: [{ dimension: plainNumber, scale: 1 }] };
  if (axis === 'output') return { counted: false, units: [{ dimension: unit?.dimension, scale }] };
  if (axis === 'input') return { counted: false, units: [input ?? { dimension: undefined, scale: 1 }] };
  const list = childOf(childOf(entry.value, block.key), axis.of);
  if (list === undefined) return { counted: true, units: [], missing: axis.of };
  const units = partsOf(list).map((item): AxisUnit => {
    const free = readFree(item, around, reading);
    return { dimension: free?.dimension, scale: free?.scale ?? 1 };
  });
  return { counted: true, units };
}

/** One list is a row, or a column where there must be several rows and there can be one column. */
function shaped(tree: Tree, rows: AxisUnits, columns: AxisUnits): Tree[][] {
  if (tree.kind !== 'list') return [[tree]];
  const nested = tree.items.filter((item): item is ListTree => item.kind === 'list');
  if (nested.length === tree.items.length) return nested.map((row) => [...itemsOf(row)]);
  const column = rows.counted && rows.units.length !== 1 && (!columns.counted || columns.units.length === 1);
  return column ? tree.items.map((item) => [item]) : [tree.items];
}

function fits(trees: Tree[][], rows: AxisUnits, columns: AxisUnits): boolean {
  const width = trees[0].length;
  const even = trees.every((row) => row.length === width && row.every(({ kind }) => kind !== 'list'));
  const high = !rows.counted || trees.length === rows.units.length;
  return even && high && (!columns.counted || width === columns.units.length);
}

function wrongSize(what: string, trees: Tree[][], rows: AxisUnits, columns: AxisUnits): string {
  const counted = (count: number, word: string): string => `${count} ${word}${count === 1 ? '' : 's'}`;
  const missing = rows.missing ?? columns.missing;
  if (missing) return `${what} needs \`${missing}\`, since it has a number for each of its entries`;
  const widths = [...new Set(trees.map((row) => row.length))].join(' or ');
  const height = rows.counted ? counted(rows.units.length, 'row') : 'rows';
  const width = columns.counted ? ` of ${counted(columns.units.length, 'number')}` : '';
  return `${what} has ${counted(trees.length, 'row')} of ${widths}; expected ${height}${width}`;
}

function unitAt({ units, counted }: AxisUnits, at: number): AxisUnit {
  return units[counted ? at : 0];
}

function entrySlot(row: AxisUnit, column: AxisUnit, entry: 'ratio' | 'product', what: string): Slot {
  const known = row.dimension !== undefined && column.dimension !== undefined;
  const join = entry === 'ratio' ? quotientOf : productOf;
  return {
    dimension: known ? join(row.dimension!, column.dimension!) : undefined,
    scale: entry === 'ratio' ? row.scale / column.scale : row.scale * column.scale,
    what: `an entry of ${what}`,
  };
}
