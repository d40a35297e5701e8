import { Cursor } from '../cursor.js';
import { contentsOf, sectionNamed } from '../elf/contents.js';
import type { ElfFile } from '../elf/elf_file.js';
import { quoted } from '../failure.js';
import { type Abbreviation, readAbbreviations } from './abbreviations.js';
import { unitKind } from './codes.js';

/** One unit of debug information: mostly a translation unit. */
export interface Unit {
  debug: DebugInformation;
  /** The section it stands in: type units of DWARF 4 have their own. */
  section: '.debug_info' | '.debug_types';
  /** Offset of the header. */
  offset: number;
  /** Offset of the first entry. */
  first: number;
  /** Offset behind the last entry. */
  end: number;
  version: number;
  /** Width of an offset within the debug sections. */
  offsetSize: 4 | 8;
  addressSize: number;
  kind: number;
  abbreviationsAt: number;
  /** Filled in when the first entry is read. */
  abbreviations?: Map<number, Abbreviation>;
  /** Of a type unit: what refers to it, and the offset of the type within the unit. */
  signature?: bigint;
  typeOffset?: number;
}

/**
 * The debug information of one ELF file, read lazily: a section when something in it is wanted, unit headers by
 * hopping over their units, abbreviations once.
 */
export class DebugInformation {
  private readonly abbreviationsByOffset = new Map<string, Map<number, Abbreviation>>();
  private readonly cursors = new Map<string, Cursor>();
  private readonly unitsBySection = new Map<Unit['section'], Unit[]>();
  private unitList: Unit[] | undefined;

  constructor(readonly elf: ElfFile) {}

  /** Whether there is any. */
  get present(): boolean {
    return this.section('.debug_info').length > 0;
  }

  /** Contents of a section, empty when it is missing. */
  section(name: string): Uint8Array {
    return this.whole(name).bytes;
  }

  /** A cursor over a section. */
  cursor(name: string, position = 0): Cursor {
    return this.whole(name).at(position);
  }

  private whole(name: string): Cursor {
    let cursor = this.cursors.get(name);
    if (!cursor) {
      const section = sectionNamed(this.elf, name);
      const contents = section ? contentsOf(this.elf, section) : new Uint8Array();
      cursor = new Cursor(contents, this.elf.littleEndian, `${name} of ${quoted(this.elf.name)}`);
      this.cursors.set(name, cursor);
    }
    return cursor;
  }

  /** All units, in the order of the file. */
  units(): Unit[] {
    this.unitList ??= [...this.unitsIn('.debug_info'), ...this.unitsIn('.debug_types')];
    return this.unitList;
  }

  /** The unit which holds this offset of its section. */
  unitAt(offset: number, section: Unit['section'] = '.debug_info'): Unit | undefined {
    const units = this.unitsIn(section);
    let [low, high] = [0, units.length - 1];
    while (low <= high) {
      const middle = (low + high) >> 1;
      const unit = units[middle];
      if (offset < unit.offset) high = middle - 1;
      else if (offset >= unit.end) low = middle + 1;
      else return unit;
    }
    return undefined;
  }

  private unitsIn(section: Unit['section']): Unit[] {
    const units = this.unitsBySection.get(section) ?? this.readUnits(section);
    this.unitsBySection.set(section, units);
    return units;
  }

  /** The abbreviations of a unit, by code. */
  abbreviations(unit: Unit): Map<number, Abbreviation> {
    unit.abbreviations ??= this.abbreviationsFor(unit);
    return unit.abbreviations;
  }

  private abbreviationsFor(unit: Unit): Map<number, Abbreviation> {
    const key = `${unit.abbreviationsAt}/${unit.version}/${unit.offsetSize}/${unit.addressSize}`;
    let found = this.abbreviationsByOffset.get(key);
    if (!found) {
      found = readAbbreviations(this.cursor('.debug_abbrev', unit.abbreviationsAt), unit);
      this.abbreviationsByOffset.set(key, found);
    }
    return found;
  }

  private readUnits(section: Unit['section']): Unit[] {
    const cursor = this.cursor(section);
    const units: Unit[] = [];
    while (!cursor.atEnd) {
      const unit = readUnitHeader(this, cursor, section);
      units.push(unit);
      cursor.moveTo(unit.end);
    }
    return units;
  }
}

function readUnitHeader(debug: DebugInformation, cursor: Cursor, section: Unit['section']): Unit {
  const offset = cursor.position;
  const { length, offsetSize } = readInitialLength(cursor);
  const end = cursor.position + length;
  if (end > cursor.end)
    throw cursor.failure(`the unit claims ${length} bytes, available ${cursor.end - cursor.position}`);
  const version = cursor.u16();
  if (version < 2 || version > 5)
    throw cursor.failure(`DWARF version ${version}, versions 2 to 5 can be read`);
  let kind: number = section === '.debug_types' ? unitKind.type : unitKind.compile;
  let addressSize = 0;
  let abbreviationsAt = 0;
  if (version >= 5) {
    kind = cursor.u8();
    addressSize = cursor.u8();
    abbreviationsAt = cursor.length(offsetSize);
  } else {
    abbreviationsAt = cursor.length(offsetSize);
    addressSize = cursor.u8();
  }
  if (![2, 4, 8].includes(addressSize)) throw cursor.failure(`addresses of ${addressSize} bytes`);
  const unit: Unit = {
    debug,
    section,
    offset,
    first: 0,
    end,
    version,
    offsetSize,
    addressSize,
    kind,
    abbreviationsAt,
  };
  if (kind === unitKind.type || kind === unitKind.splitType) {
    unit.signature = cursor.u64();
    unit.typeOffset = cursor.length(offsetSize);
  } else if (version >= 5 && (kind === unitKind.skeleton || kind === unitKind.splitCompile)) cursor.skip(8);
  unit.first = cursor.position;
  if (unit.first > end) throw cursor.failure(`the unit ends within its header`);
  return unit;
}

/** The length field that begins every unit and table, and with it the width of offsets (DWARF 5, section 7.4). */
export function readInitialLength(cursor: Cursor): { length: number; offsetSize: 4 | 8 } {
  const short = cursor.u32();
  if (short < 0xfffffff0) return { length: short, offsetSize: 4 };
  if (short !== 0xffffffff) throw cursor.failure(`the reserved length 0x${short.toString(16)}`);
  return { length: cursor.length(8), offsetSize: 8 };
}
