import type { Cursor } from '../cursor.js';
import type { Abbreviation } from './abbreviations.js';
import { at } from './codes.js';
import type { Unit } from './debug_information.js';
import { type Attribute, readAttribute, skipForm } from './forms.js';

/** One entry of the debug information: a variable, a type, a member … */
export interface Entry {
  unit: Unit;
  /** Offset within the unit's section. */
  offset: number;
  tag: number;
  hasChildren: boolean;
  attributes: Attribute[];
  /** Offset behind its attributes, where its children begin. */
  end: number;
}

/** Deeper nesting than this is no program's. */
const deepest = 256;

/** A cursor that cannot leave the unit. */
export function unitCursor(unit: Unit, position: number): Cursor {
  const cursor = unit.debug.cursor(unit.section, position);
  if (position < unit.first || position > unit.end) throw cursor.failure('a reference leads out of its unit');
  return cursor;
}

/** The entry at an offset; undefined where a list of children ends. */
export function readEntry(unit: Unit, offset: number): Entry | undefined {
  return readEntryAt(unit, unitCursor(unit, offset));
}

function readEntryAt(unit: Unit, cursor: Cursor): Entry | undefined {
  const offset = cursor.position;
  const abbreviation = readCode(unit, cursor);
  return abbreviation && readRest(unit, cursor, offset, abbreviation);
}

function readRest(unit: Unit, cursor: Cursor, offset: number, abbreviation: Abbreviation): Entry {
  const attributes: Attribute[] = [];
  for (const shape of abbreviation.attributes) attributes.push(readAttribute(cursor, shape, unit));
  const { tag, hasChildren } = abbreviation;
  return { unit, offset, tag, hasChildren, attributes, end: cursor.position };
}

function readCode(unit: Unit, cursor: Cursor): Abbreviation | undefined {
  const code = cursor.uleb();
  if (code === 0) return undefined;
  const abbreviation = unit.debug.abbreviations(unit).get(code);
  if (!abbreviation) throw cursor.failure(`abbreviation ${code} is not in the table of its unit`);
  return abbreviation;
}

const keptRoots = new WeakMap<Unit, Entry>();

/** The unit's own entry. */
export function rootOf(unit: Unit): Entry | undefined {
  if (unit.first >= unit.end) return undefined;
  const root = keptRoots.get(unit) ?? readEntry(unit, unit.first);
  if (root) keptRoots.set(unit, root);
  return root;
}

/**
 * The direct children of an entry, or those of some kinds; grandchildren are passed over without reading them.
 * @param wanted says of a tag whether such entries are read at all
 */
export function* childrenOf(parent: Entry, wanted?: (tag: number) => boolean): Generator<Entry> {
  if (!parent.hasChildren) return;
  const { unit } = parent;
  const cursor = unitCursor(unit, parent.end);
  while (cursor.position < unit.end) {
    const offset = cursor.position;
    const abbreviation = readCode(unit, cursor);
    if (!abbreviation) return;
    if (wanted && !wanted(abbreviation.tag)) {
      passAttributes(abbreviation, unit, cursor);
      if (abbreviation.hasChildren) passNested(unit, cursor);
      continue;
    }
    const child = readRest(unit, cursor, offset, abbreviation);
    yield child;
    cursor.moveTo(child.end);
    if (child.hasChildren) passChildren(child, cursor);
  }
}

/** Moves the cursor behind the children of an entry. */
function passChildren(entry: Entry, cursor: Cursor): void {
  const sibling = entry.attributes.find((attribute) => attribute.name === at.sibling);
  if (sibling && typeof sibling.value === 'number') {
    const next = entry.unit.offset + sibling.value;
    if (next <= cursor.position || next > entry.unit.end)
      throw cursor.failure(`a sibling at 0x${next.toString(16)}`);
    cursor.moveTo(next);
    return;
  }
  passNested(entry.unit, cursor);
}

/** Moves the cursor behind a list of entries, whatever is nested in it. */
function passNested(unit: Unit, cursor: Cursor): void {
  let depth = 1;
  while (depth > 0 && cursor.position < unit.end) {
    const abbreviation = readCode(unit, cursor);
    if (!abbreviation) depth--;
    else {
      passAttributes(abbreviation, unit, cursor);
      if (abbreviation.hasChildren && ++depth > deepest)
        throw cursor.failure(`nesting deeper than ${deepest}`);
    }
  }
}

function passAttributes(abbreviation: Abbreviation, unit: Unit, cursor: Cursor): void {
  if (abbreviation.fixedSize !== undefined) cursor.skip(abbreviation.fixedSize);
  else for (const { form } of abbreviation.attributes) skipForm(cursor, form, unit);
}
