import { FirmwareError, quoted } from '../failure.js';
import { at, form } from './codes.js';
import type { DebugInformation, Unit } from './debug_information.js';
import { type Entry, readEntry, rootOf } from './entry.js';
import type { RawValue } from './forms.js';

/** A value with its form; undefined when the entry does not have the attribute. */
export function attribute(entry: Entry, name: number): { form: number; value: RawValue } | undefined {
  return entry.attributes.find((candidate) => candidate.name === name);
}

/** A flag which is set. */
export function hasFlag(entry: Entry, name: number): boolean {
  const found = attribute(entry, name);
  return found !== undefined && found.value !== 0;
}

/** An attribute's number; undefined when it has none, or one that has to be computed. */
export function numberAttribute(entry: Entry, name: number): number | undefined {
  const found = attribute(entry, name);
  if (found === undefined) return undefined;
  if (typeof found.value === 'number') return isReference(found.form) ? undefined : found.value;
  return typeof found.value === 'bigint' ? Number(found.value) : undefined;
}

/** An attribute's text, wherever it is kept. */
export function textAttribute(entry: Entry, name: number): string | undefined {
  const found = attribute(entry, name);
  return found && textOf(entry.unit, found.form, found.value);
}

/** The text which a value of a string form stands for. */
export function textOf(unit: Unit, formCode: number, value: RawValue): string | undefined {
  if (typeof value === 'string') return value;
  if (typeof value !== 'number') return undefined;
  const { debug } = unit;
  switch (formCode) {
    case form.strp:
      return debug.cursor('.debug_str', value).text();
    case form.lineStrp:
      return debug.cursor('.debug_line_str', value).text();
    case form.strx:
    case form.strx1:
    case form.strx2:
    case form.strx3:
    case form.strx4:
    case form.gnuStrIndex: {
      const offsets = debug.cursor('.debug_str_offsets', stringOffsetsBase(unit) + value * unit.offsetSize);
      return debug.cursor('.debug_str', offsets.length(unit.offsetSize)).text();
    }
    case form.strpSup:
    case form.gnuStrpAlt:
      // A name in a supplementary file can be nothing that was asked for; it must not hinder the other names.
      return undefined;
    default:
      return undefined;
  }
}

/** Where the unit's part of `.debug_str_offsets` begins. */
export function stringOffsetsBase(unit: Unit): number {
  const root = rootOf(unit);
  const base = root && attribute(root, at.stringOffsetsBase)?.value;
  return typeof base === 'number' ? base : unit.offsetSize * 2;
}

/** An address from the unit's part of `.debug_addr`. */
export function indexedAddress(unit: Unit, index: number): number {
  const root = rootOf(unit);
  const base = root && attribute(root, at.addressBase)?.value;
  const start = typeof base === 'number' ? base : unit.offsetSize === 8 ? 16 : 8;
  return unit.debug.cursor('.debug_addr', start + index * unit.addressSize).unsigned(unit.addressSize);
}

/** The entry that an attribute refers to: in this unit, in another one, or the type of a type unit. */
export function referredEntry(entry: Entry, name: number): Entry | undefined {
  const found = attribute(entry, name);
  if (!found) return undefined;
  const { unit } = entry;
  if (found.form === form.refSig8 && typeof found.value === 'bigint')
    return typeBySignature(unit.debug, found.value);
  if (typeof found.value !== 'number') return undefined;
  if (found.form === form.refAddr) {
    const other = unit.debug.unitAt(found.value);
    if (!other)
      throw unit.debug
        .cursor('.debug_info')
        .failure(`a reference to 0x${found.value.toString(16)}, outside of every unit`);
    return readEntry(other, found.value);
  }
  if ([form.gnuRefAlt, form.refSup4, form.refSup8].includes(found.form as never)) {
    throw new FirmwareError(
      'unsupported',
      `the debug information of ${quoted(unit.debug.elf.name)} refers to a supplementary file; give the image before it was packed by dwz`,
    );
  }
  return isReference(found.form) ? readEntry(unit, unit.offset + found.value) : undefined;
}

function isReference(code: number): boolean {
  return code >= form.refAddr && code <= form.refUdata;
}

const keptSignatures = new WeakMap<DebugInformation, Map<bigint, Unit>>();

function typeBySignature(debug: DebugInformation, signature: bigint): Entry | undefined {
  let units = keptSignatures.get(debug);
  if (!units) {
    units = new Map();
    for (const unit of debug.units()) if (unit.signature !== undefined) units.set(unit.signature, unit);
    keptSignatures.set(debug, units);
  }
  const unit = units.get(signature);
  return unit && readEntry(unit, unit.offset + (unit.typeOffset ?? 0));
}
