import type { Cursor } from '../cursor.js';
import { form } from './codes.js';
import { type FormSizes, fixedSize } from './forms.js';

/** An attribute that follows, and in which form. */
export interface AttributeShape {
  name: number;
  form: number;
  /** The value itself, for the form that keeps it here. */
  implicit: bigint;
  /** Bytes, undefined when they vary. */
  size: number | undefined;
}

/** The shape of entries: what they stand for and which attributes follow in which form. */
export interface Abbreviation {
  tag: number;
  hasChildren: boolean;
  attributes: AttributeShape[];
  /** Bytes of all attributes together, when every form has a fixed size. */
  fixedSize: number | undefined;
}

/** Reads one table of abbreviations, by code, up to its closing zero. */
export function readAbbreviations(cursor: Cursor, sizes: FormSizes): Map<number, Abbreviation> {
  const table = new Map<number, Abbreviation>();
  for (let code = cursor.uleb(); code !== 0; code = cursor.atEnd ? 0 : cursor.uleb()) {
    table.set(code, readAbbreviation(cursor, sizes));
  }
  return table;
}

function readAbbreviation(cursor: Cursor, sizes: FormSizes): Abbreviation {
  const abbreviation: Abbreviation = {
    tag: cursor.uleb(),
    hasChildren: cursor.u8() !== 0,
    attributes: [],
    fixedSize: 0,
  };
  for (;;) {
    const name = cursor.uleb();
    const formCode = cursor.uleb();
    const implicit = formCode === form.implicitConst ? cursor.sleb64() : 0n;
    if (name === 0 && formCode === 0) return abbreviation;
    const size = fixedSize(formCode, sizes);
    abbreviation.attributes.push({ name, form: formCode, implicit, size });
    abbreviation.fixedSize =
      size === undefined || abbreviation.fixedSize === undefined ? undefined : abbreviation.fixedSize + size;
  }
}
