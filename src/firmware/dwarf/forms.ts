import type { Cursor } from '../cursor.js';
import { FirmwareError } from '../failure.js';
import type { AttributeShape } from './abbreviations.js';
import { form } from './codes.js';

/** What the size of a form depends on. */
export interface FormSizes {
  version: number;
  offsetSize: 4 | 8;
  addressSize: number;
}

/** A value as it is stored; what it means depends on the form and the attribute. */
export type RawValue = number | bigint | Uint8Array | string;

/** Bytes of a form, undefined when they vary with the value. */
export function fixedSize(code: number, sizes: FormSizes): number | undefined {
  switch (code) {
    case form.flagPresent:
    case form.implicitConst:
      return 0;
    case form.data1:
    case form.flag:
    case form.ref1:
    case form.strx1:
    case form.addrx1:
      return 1;
    case form.data2:
    case form.ref2:
    case form.strx2:
    case form.addrx2:
      return 2;
    case form.strx3:
    case form.addrx3:
      return 3;
    case form.data4:
    case form.ref4:
    case form.refSup4:
    case form.strx4:
    case form.addrx4:
      return 4;
    case form.data8:
    case form.ref8:
    case form.refSig8:
    case form.refSup8:
      return 8;
    case form.data16:
      return 16;
    case form.addr:
      return sizes.addressSize;
    case form.refAddr:
      return sizes.version === 2 ? sizes.addressSize : sizes.offsetSize;
    case form.strp:
    case form.lineStrp:
    case form.secOffset:
    case form.strpSup:
    case form.gnuRefAlt:
    case form.gnuStrpAlt:
      return sizes.offsetSize;
    default:
      return undefined;
  }
}

/** Passes over a value. @throws FirmwareError for a form that no version of DWARF knows */
export function skipForm(cursor: Cursor, code: number, sizes: FormSizes): void {
  const size = fixedSize(code, sizes);
  if (size !== undefined) {
    cursor.skip(size);
    return;
  }
  switch (code) {
    case form.string:
      cursor.skipText();
      break;
    case form.sdata:
    case form.udata:
    case form.refUdata:
    case form.strx:
    case form.addrx:
    case form.loclistx:
    case form.rnglistx:
    case form.gnuAddrIndex:
    case form.gnuStrIndex:
      cursor.skipLeb();
      break;
    case form.indirect:
      skipForm(cursor, directForm(cursor), sizes);
      break;
    default:
      cursor.skip(blockLength(cursor, code));
  }
}

function directForm(cursor: Cursor): number {
  const actual = cursor.uleb();
  if (actual === form.indirect) throw cursor.failure('an indirect form names an indirect form');
  return actual;
}

/** An attribute of an entry; the form is the one that counts where an indirect form names another. */
export interface Attribute {
  name: number;
  form: number;
  value: RawValue;
}

/** Reads the attribute which comes next. */
export function readAttribute(cursor: Cursor, shape: AttributeShape, sizes: FormSizes): Attribute {
  const { name, form: code } = shape;
  if (code === form.indirect) {
    const actual = directForm(cursor);
    const implicit = actual === form.implicitConst ? cursor.sleb64() : 0n;
    return readAttribute(cursor, { name, form: actual, implicit, size: fixedSize(actual, sizes) }, sizes);
  }
  if (code === form.implicitConst) return { name, form: code, value: shape.implicit };
  if (shape.size === undefined) return { name, form: code, value: readVarying(cursor, code) };
  return { name, form: code, value: readFixed(cursor, code, shape.size) };
}

function readFixed(cursor: Cursor, code: number, size: number): RawValue {
  if (size === 0) return 1;
  if (code === form.data8 || code === form.refSig8) return cursor.u64();
  return size === 16 ? cursor.slice(16) : cursor.unsigned(size);
}

function readVarying(cursor: Cursor, code: number): RawValue {
  switch (code) {
    case form.string:
      return cursor.text();
    case form.sdata:
      return cursor.sleb64();
    case form.udata:
      return cursor.uleb64();
    case form.refUdata:
    case form.strx:
    case form.addrx:
    case form.loclistx:
    case form.rnglistx:
    case form.gnuAddrIndex:
    case form.gnuStrIndex:
      return cursor.uleb();
    default:
      return cursor.slice(blockLength(cursor, code));
  }
}

function blockLength(cursor: Cursor, code: number): number {
  switch (code) {
    case form.block1:
      return cursor.u8();
    case form.block2:
      return cursor.u16();
    case form.block4:
      return cursor.u32();
    case form.block:
    case form.exprloc:
      return cursor.uleb();
    default:
      throw new FirmwareError(
        'unsupported',
        `${cursor.region}: attribute form 0x${code.toString(16)} at offset 0x${cursor.position.toString(16)} is not known; build with -gdwarf-4`,
      );
  }
}
