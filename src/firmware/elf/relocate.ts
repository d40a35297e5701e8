import { Cursor, hex } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';
import { type ElfFile, type ElfSection, fileRange, sectionFlag, sectionType } from './elf_file.js';
import { machineName } from './machine.js';
import { symbolAt } from './symbols.js';

/** What a relocation does to the bytes at its offset: set, add to or subtract from what stands there. */
interface Action {
  /** 0 stands for a LEB128 number of the length which is there. */
  size: 0 | 1 | 2 | 4 | 8;
  does: 'set' | 'set_relative' | 'add' | 'subtract' | 'nothing';
}

const set = (size: Action['size']): Action => ({ size, does: 'set' });
const relative = (size: Action['size']): Action => ({ size, does: 'set_relative' });
const add = (size: Action['size']): Action => ({ size, does: 'add' });
const subtract = (size: Action['size']): Action => ({ size, does: 'subtract' });
const nothing: Action = { size: 1, does: 'nothing' };

/** The relocations which occur in data and debug sections, by `e_machine`; numbers of each processor's ELF supplement. */
const actions: Record<number, Record<number, Action>> = {
  2: { 3: set(4), 23: set(4), 32: set(8), 54: set(8) }, // SPARC
  3: { 1: set(4), 2: relative(4) }, // x86
  8: { 2: set(4), 18: set(8) }, // MIPS
  20: { 1: set(4), 26: relative(4) }, // PowerPC
  21: { 1: set(4), 26: relative(4), 38: set(8), 44: relative(8) }, // 64-bit PowerPC
  40: { 0: nothing, 2: set(4), 3: relative(4), 38: set(4) }, // Arm
  62: { 1: set(8), 2: relative(4), 10: set(4), 11: set(4), 24: relative(8) }, // x86-64
  83: { 1: set(4), 4: set(2) }, // AVR
  94: { 0: nothing, 1: set(4) }, // Xtensa
  183: {
    0: nothing,
    256: nothing,
    257: set(8),
    258: set(4),
    259: set(2),
    260: relative(8),
    261: relative(4),
  }, // AArch64
  243: {
    0: nothing,
    1: set(4),
    2: set(8),
    33: add(1),
    34: add(2),
    35: add(4),
    36: add(8),
    37: subtract(1),
    38: subtract(2),
    39: subtract(4),
    40: subtract(8),
    51: nothing,
    54: set(1),
    55: set(2),
    56: set(4),
    57: relative(4),
    60: set(0),
    61: subtract(0),
  }, // RISC-V; 52 and 53 (six bits) occur in call frame information only
};

/** One row of a relocation table. */
export interface Relocation {
  offset: number;
  type: number;
  symbol: number;
  /** Undefined when it stands in the bytes that are relocated. */
  addend: bigint | undefined;
}

/** The contents with the section's relocations applied, for debug and data sections of an unlinked object. */
export function relocated(elf: ElfFile, section: ElfSection, contents: Uint8Array): Uint8Array {
  const isDebug = section.name.startsWith('.debug_') || section.name.startsWith('.zdebug_');
  const isData = (section.flags & sectionFlag.allocated) !== 0 && (section.flags & executable) === 0;
  if (!isDebug && !isData) return contents;
  const rows = relocationsOf(elf, section);
  if (rows.length === 0) return contents;
  const copy = contents.slice();
  for (const row of rows) {
    const action = actions[elf.machine]?.[row.type];
    if (action) apply(elf, section, copy, row, action);
    else if (isDebug) {
      throw new FirmwareError(
        'unsupported',
        `${quoted(elf.name)}: relocation type ${row.type} of ${machineName(elf.machine)} in ${quoted(section.name)} is not known; give the linked image instead`,
      );
    }
  }
  return copy;
}

const executable = 0x4;

/** Whether the linker will still change one of these bytes of the section. */
export function isRelocated(elf: ElfFile, section: ElfSection, offset: number, size: number): boolean {
  const word = elf.bits / 8;
  return relocationsOf(elf, section).some((row) => {
    const width = actions[elf.machine]?.[row.type]?.size || word;
    return row.offset < offset + size && row.offset + width > offset;
  });
}

/** The row of a relocation table which changes this place, as a loader does it. */
export function relocationAt(elf: ElfFile, table: ElfSection, place: number): Relocation | undefined {
  if (table.type !== sectionType.rela && table.type !== sectionType.rel) return undefined;
  let rows = keptRows.get(table);
  if (!rows) {
    rows = readTable(elf, table);
    keptRows.set(table, rows);
  }
  return rows.find((row) => row.offset === place);
}

const keptRows = new WeakMap<ElfSection, Relocation[]>();

function relocationsOf(elf: ElfFile, section: ElfSection): Relocation[] {
  let rows = keptRows.get(section);
  if (!rows) {
    rows = elf.sections
      .filter((s) => (s.type === sectionType.rela || s.type === sectionType.rel) && s.info === section.index)
      .flatMap((table) => readTable(elf, table));
    keptRows.set(section, rows);
  }
  return rows;
}

function readTable(elf: ElfFile, table: ElfSection): Relocation[] {
  const wide = elf.bits === 64;
  const withAddend = table.type === sectionType.rela;
  const word = wide ? 8 : 4;
  const cursor = new Cursor(
    fileRange(elf, table),
    elf.littleEndian,
    `${quoted(table.name)} of ${quoted(elf.name)}`,
  );
  const rows: Relocation[] = [];
  while (cursor.end - cursor.position >= word * (withAddend ? 3 : 2)) {
    const offset = cursor.unsigned(word);
    const info = wide ? cursor.u64() : BigInt(cursor.u32());
    const addend = withAddend
      ? BigInt.asIntN(8 * word, wide ? cursor.u64() : BigInt(cursor.u32()))
      : undefined;
    const shift = wide ? 32n : 8n;
    rows.push({
      offset,
      type: Number(info & (wide ? 0xffffffffn : 0xffn)),
      symbol: Number(info >> shift),
      addend,
    });
  }
  return rows;
}

function apply(elf: ElfFile, section: ElfSection, bytes: Uint8Array, row: Relocation, action: Action): void {
  if (action.does === 'nothing') return;
  const { size } = action;
  if (size === 0) {
    applyLeb128(elf, section, bytes, row, action);
    return;
  }
  checkRange(elf, section, bytes, row.offset, size);
  const view = new DataView(bytes.buffer, bytes.byteOffset + row.offset, size);
  const stands = readWord(view, size, elf.littleEndian);
  const target =
    BigInt(symbolAt(elf, row.symbol)?.address ?? 0) + (row.addend ?? (action.does === 'set' ? stands : 0n));
  writeWord(view, size, elf.littleEndian, combined(action, stands, target, section.address + row.offset));
}

function combined(action: Action, stands: bigint, target: bigint, place: number): bigint {
  switch (action.does) {
    case 'set_relative':
      return target - BigInt(place);
    case 'add':
      return stands + target;
    case 'subtract':
      return stands - target;
    default:
      return target;
  }
}

/** RISC-V sets and subtracts LEB128 numbers in place, keeping their length. */
function applyLeb128(
  elf: ElfFile,
  section: ElfSection,
  bytes: Uint8Array,
  row: Relocation,
  action: Action,
): void {
  const cursor = new Cursor(bytes, elf.littleEndian, quoted(section.name), 0).moveTo(row.offset);
  const stands = cursor.uleb64();
  const target = BigInt(symbolAt(elf, row.symbol)?.address ?? 0) + (row.addend ?? 0n);
  let value = BigInt.asUintN(64, action.does === 'subtract' ? stands - target : target);
  for (let at = row.offset; at < cursor.position; at++, value >>= 7n) {
    bytes[at] = Number(value & 0x7fn) | (at + 1 < cursor.position ? 0x80 : 0);
  }
}

function checkRange(
  elf: ElfFile,
  section: ElfSection,
  bytes: Uint8Array,
  offset: number,
  size: number,
): void {
  if (offset + size <= bytes.length) return;
  throw new FirmwareError(
    'malformed_image',
    `${quoted(elf.name)}: a relocation at ${hex(offset)} lies outside section ${quoted(section.name)} of ${bytes.length} bytes`,
  );
}

function readWord(view: DataView, size: 1 | 2 | 4 | 8, littleEndian: boolean): bigint {
  if (size === 8) return view.getBigUint64(0, littleEndian);
  if (size === 4) return BigInt(view.getUint32(0, littleEndian));
  return BigInt(size === 2 ? view.getUint16(0, littleEndian) : view.getUint8(0));
}

function writeWord(view: DataView, size: 1 | 2 | 4 | 8, littleEndian: boolean, value: bigint): void {
  const word = BigInt.asUintN(8 * size, value);
  if (size === 8) view.setBigUint64(0, word, littleEndian);
  else if (size === 4) view.setUint32(0, Number(word), littleEndian);
  else if (size === 2) view.setUint16(0, Number(word), littleEndian);
  else view.setUint8(0, Number(word));
}
