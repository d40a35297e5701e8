import { at, form, tag } from '../../src/firmware/dwarf/codes.js';
import { ByteWriter } from './byte_writer.js';
import type { SectionSpec } from './elf_builder.js';

/** A value of an attribute; `{ to }` refers to the entry of that label. */
export type Value = number | bigint | string | Uint8Array | { to: string };

/** An entry to be written. */
export interface EntrySpec {
  tag: number;
  label?: string;
  attributes: [name: number, form: number, value: Value][];
  children?: EntrySpec[];
}

export interface UnitSpec {
  version?: 2 | 3 | 4 | 5;
  littleEndian?: boolean;
  entries: EntrySpec[];
  /** Attributes of the unit's own entry, besides its name. */
  attributes?: [name: number, form: number, value: Value][];
}

/** `.debug_info` and `.debug_abbrev` of compile units around the entries; every entry has an abbreviation of its own. */
export function debugSections(...units: UnitSpec[]): SectionSpec[] {
  const littleEndian = units[0].littleEndian ?? true;
  const info = new ByteWriter(littleEndian);
  const abbreviations = new ByteWriter(littleEndian);
  for (const [i, unit] of units.entries()) writeUnit(unit, i, info, abbreviations);
  return [
    { name: '.debug_info', bytes: info.result },
    { name: '.debug_abbrev', bytes: abbreviations.result },
  ];
}

function writeUnit(unit: UnitSpec, index: number, info: ByteWriter, abbreviations: ByteWriter): void {
  const labels = new Map<string, number>();
  const fixes: { at: number; to: string }[] = [];
  const start = info.length;
  let code = 0;

  const write = (entry: EntrySpec) => {
    code++;
    abbreviations
      .uleb(code)
      .uleb(entry.tag)
      .u8(entry.children ? 1 : 0);
    if (entry.label) labels.set(entry.label, info.length - start);
    info.uleb(code);
    for (const [name, formCode, value] of entry.attributes) {
      abbreviations.uleb(name).uleb(formCode);
      if (formCode === form.implicitConst) abbreviations.sleb(value as number);
      else writeValue(info, formCode, value, fixes);
    }
    abbreviations.u8(0).u8(0);
    if (!entry.children) return;
    for (const child of entry.children) write(child);
    info.u8(0);
  };

  const { version = 4 } = unit;
  info.u32(0).u16(version);
  if (version === 5) info.u8(1).u8(8).u32(abbreviations.length);
  else info.u32(abbreviations.length).u8(8);
  const name: [number, number, Value] = [at.name, form.string, index === 0 ? 'built.c' : `built${index}.c`];
  write({ tag: tag.compileUnit, attributes: [name, ...(unit.attributes ?? [])], children: unit.entries });
  info.patch(start, info.length - start - 4, 4);
  for (const fix of fixes) info.patch(fix.at, labels.get(fix.to) ?? 0xfffff, 4);
  abbreviations.u8(0);
}

function writeValue(
  info: ByteWriter,
  formCode: number,
  value: Value,
  fixes: { at: number; to: string }[],
): void {
  if (typeof value === 'object' && 'to' in value) {
    fixes.push({ at: info.length, to: value.to });
    info.u32(0);
  } else if (typeof value === 'string') info.text(value);
  else if (value instanceof Uint8Array) {
    if (formCode === form.block1) info.u8(value.length);
    else if (formCode === form.exprloc || formCode === form.block) info.uleb(value.length);
    info.raw(value);
  } else if (formCode === form.sdata) info.sleb(value);
  else if (formCode === form.udata) info.uleb(value);
  else if (formCode !== form.flagPresent) info.number(value, sizes[formCode] ?? 4);
}

const sizes: Record<number, number> = {
  [form.data1]: 1,
  [form.data2]: 2,
  [form.data4]: 4,
  [form.data8]: 8,
  [form.addr]: 8,
  [form.flag]: 1,
  [form.refSig8]: 8,
  [form.strx1]: 1,
  [form.addrx1]: 1,
};

/** A location expression of one fixed address. */
export function addressOf(address: number, littleEndian = true): Uint8Array {
  return new ByteWriter(littleEndian).u8(0x03).u64(address).result;
}

/** A base type of C. */
export function baseType(label: string, name: string, size: number, encoding: number): EntrySpec {
  return {
    tag: tag.baseType,
    label,
    attributes: [
      [at.name, form.string, name],
      [at.byteSize, form.data1, size],
      [at.encoding, form.data1, encoding],
    ],
  };
}

/** A variable at an address. */
export function variable(name: string, type: string, address: number): EntrySpec {
  return {
    tag: tag.variable,
    attributes: [
      [at.name, form.string, name],
      [at.type, form.ref4, { to: type }],
      [at.location, form.exprloc, addressOf(address)],
    ],
  };
}
