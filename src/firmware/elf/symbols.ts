import { Cursor, occurrences } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';
import { type ElfFile, type ElfSection, fileRange, sectionType } from './elf_file.js';

/** A row of the symbol table. */
export interface ElfSymbol {
  index: number;
  name: string;
  /** Where it is placed; in an unlinked object the made-up address of its section plus its offset. */
  address: number;
  /** Bytes, 0 when not stated. */
  size: number;
  type: number;
  local: boolean;
  /** Index of its section; 0 is undefined, 0xfff1 absolute, 0xfff2 common. */
  section: number;
}

/** Symbol types of the ELF specification. */
export const symbolType = {
  none: 0,
  object: 1,
  function: 2,
  section: 3,
  file: 4,
  common: 5,
  threadLocal: 6,
} as const;
export const undefinedSection = 0;
export const commonSection = 0xfff2;
const extendedIndex = 0xffff;
const extendedIndexTable = 18;

interface SymbolTable {
  section: ElfSection;
  rows: Cursor;
  texts: Cursor;
  rowSize: number;
  count: number;
  /** Section indices too large for the row itself. */
  extended: Cursor | undefined;
}

/** A table with what was made of it so far. */
interface Kept {
  table: SymbolTable | undefined;
  all?: ElfSymbol[];
  byName?: Map<string, ElfSymbol[]>;
  /** Data symbols with a size, by address. */
  byAddress?: ElfSymbol[];
}

const keptTables = new WeakMap<ElfFile, Kept>();

/** Whether the file has a symbol table at all: a stripped one has none. */
export function hasSymbols(elf: ElfFile): boolean {
  return (tableOf(elf).table?.count ?? 0) > 1;
}

/** All symbols in the order of the table; the dynamic table where it is the only one. */
export function allSymbols(elf: ElfFile): ElfSymbol[] {
  const kept = tableOf(elf);
  const { table } = kept;
  if (!table) return [];
  kept.all ??= Array.from({ length: table.count }, (_, index) => readSymbol(elf, table, index));
  return kept.all;
}

/** The symbol in one row; undefined outside of the table. */
export function symbolAt(elf: ElfFile, index: number): ElfSymbol | undefined {
  const { table } = tableOf(elf);
  return table && index < table.count ? readSymbol(elf, table, index) : undefined;
}

/** The address of a symbol in the table that a relocation table is linked to; undefined when it is not in this file. */
export function dynamicSymbolAddress(elf: ElfFile, tableIndex: number, index: number): number | undefined {
  const section = elf.sections[tableIndex];
  if (section?.type !== sectionType.dynamicSymbols && section?.type !== sectionType.symbols) return undefined;
  const table = tableFrom(elf, section);
  const symbol = index > 0 && index < table.count ? readSymbol(elf, table, index) : undefined;
  return symbol && symbol.section !== undefinedSection ? symbol.address : undefined;
}

/** All symbols of this exact name, found without decoding the other names. */
export function symbolsNamed(elf: ElfFile, name: string): ElfSymbol[] {
  const kept = tableOf(elf);
  const { table } = kept;
  if (!table) return [];
  if (kept.all) return namesOf(kept, kept.all).get(name) ?? [];
  const offsets = occurrences(table.texts.bytes, Buffer.from(`${name}\0`), 256);
  if (!offsets) return allSymbols(elf).filter((symbol) => symbol.name === name);
  if (offsets.length === 0) return [];
  const wanted = new Set(offsets);
  const found: ElfSymbol[] = [];
  for (let index = 0; index < table.count; index++) {
    const nameOffset = table.rows.moveTo(index * table.rowSize).u32();
    if (wanted.has(nameOffset)) found.push(readSymbol(elf, table, index));
  }
  return found;
}

function namesOf(kept: Kept, all: ElfSymbol[]): Map<string, ElfSymbol[]> {
  if (!kept.byName) {
    kept.byName = new Map();
    for (const symbol of all) {
      const same = kept.byName.get(symbol.name);
      if (same) same.push(symbol);
      else kept.byName.set(symbol.name, [symbol]);
    }
  }
  return kept.byName;
}

/** Aliases and parts which may lie before the symbol that covers an address. */
const mostNested = 64;

/** The data symbols whose bytes an address lies in. */
export function dataSymbolsAt(elf: ElfFile, address: number): ElfSymbol[] {
  const kept = tableOf(elf);
  kept.byAddress ??= allSymbols(elf)
    .filter((symbol) => isData(symbol) && symbol.name !== '' && symbol.size > 0)
    .sort((a, b) => a.address - b.address);
  const sorted = kept.byAddress;
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle].address <= address) low = middle + 1;
    else high = middle;
  }
  return sorted
    .slice(Math.max(0, low - mostNested), low)
    .filter((symbol) => address < symbol.address + symbol.size);
}

/** Whether the symbol stands for data: an object, or a label that assembly gave no type. */
export function isData(symbol: ElfSymbol): boolean {
  return (
    symbol.section !== undefinedSection &&
    (symbol.type === symbolType.object ||
      symbol.type === symbolType.none ||
      symbol.type === symbolType.common)
  );
}

/** The source file of a local symbol, from the file row before it; undefined for a global one. */
export function fileOfSymbol(elf: ElfFile, symbol: ElfSymbol): string | undefined {
  if (!symbol.local) return undefined;
  for (let index = symbol.index - 1; index > 0; index--) {
    const before = symbolAt(elf, index);
    if (before?.type === symbolType.file) return before.name || undefined;
  }
  return undefined;
}

function tableOf(elf: ElfFile): Kept {
  let kept = keptTables.get(elf);
  if (!kept) {
    kept = { table: openTable(elf) };
    keptTables.set(elf, kept);
  }
  return kept;
}

function openTable(elf: ElfFile): SymbolTable | undefined {
  const section =
    elf.sections.find((s) => s.type === sectionType.symbols && s.size > 0) ??
    elf.sections.find((s) => s.type === sectionType.dynamicSymbols && s.size > 0);
  return section && tableFrom(elf, section);
}

function tableFrom(elf: ElfFile, section: ElfSection): SymbolTable {
  const strings = elf.sections[section.link];
  if (!strings || strings.type !== sectionType.strings) {
    throw new FirmwareError(
      'malformed_image',
      `${quoted(elf.name)}: symbol table ${quoted(section.name)} has no names (link ${section.link})`,
    );
  }
  const cursorOf = (s: ElfSection, what: string) =>
    new Cursor(fileRange(elf, s), elf.littleEndian, `${what} ${quoted(s.name)} of ${quoted(elf.name)}`);
  const rowSize = elf.bits === 64 ? 24 : 16;
  const extended = elf.sections.find((s) => s.type === extendedIndexTable && s.link === section.index);
  return {
    section,
    rows: cursorOf(section, 'the symbol table'),
    texts: cursorOf(strings, 'the symbol names'),
    rowSize,
    count: Math.floor(section.size / rowSize),
    extended: extended && cursorOf(extended, 'the section indices'),
  };
}

function readSymbol(elf: ElfFile, table: SymbolTable, index: number): ElfSymbol {
  const { rows } = table;
  rows.moveTo(index * table.rowSize);
  const nameOffset = rows.u32();
  let value = 0;
  let size = 0;
  if (elf.bits === 32) {
    value = rows.u32();
    size = rows.u32();
  }
  const info = rows.u8();
  rows.skip(1);
  let section = rows.u16();
  if (elf.bits === 64) {
    value = rows.unsigned(8);
    size = rows.unsigned(8);
  }
  if (section === extendedIndex && table.extended) section = table.extended.moveTo(4 * index).u32();
  const type = info & 15;
  const name = nameOffset === 0 ? '' : table.texts.moveTo(nameOffset).text();
  const base = elf.relocatable && section !== commonSection ? (elf.sections[section]?.address ?? 0) : 0;
  // Bit 0 of a Thumb function's value is not part of its address; data has no such mark.
  return { index, name, address: base + value, size, type, local: info >> 4 === 0, section };
}
