import { bytesOfU32, nextOccurrence, occurrences } from '../cursor.js';
import { attribute } from './attributes.js';
import { at } from './codes.js';
import type { DebugInformation, Unit } from './debug_information.js';
import { rootOf } from './entry.js';

/** More places than this to look for: reading every unit is then no slower. */
const mostPlaces = 128;

const unitSections = ['.debug_info', '.debug_types'] as const;

/**
 * The units which can hold an entry of this name, found by searching bytes instead of reading entries: the name itself,
 * or an offset to it in the text section. A unit is listed without need at times, but none is left out.
 */
export function unitsMentioning(debug: DebugInformation, name: string): Unit[] {
  const all = debug.units();
  if (all.length < 3) return all;
  const pattern = Buffer.from(`${name}\0`);
  const found = new Set<Unit>();
  addUnitsWith(debug, pattern, found);
  const texts = occurrences(debug.section('.debug_str'), pattern, mostPlaces);
  if (!texts?.every((text) => addByOffset(debug, text, found))) return all;
  return all.filter((unit) => found.has(unit));
}

/** The units which can refer to an entry of `.debug_info` by its offset in the section. */
export function unitsReferringTo(debug: DebugInformation, offset: number): Unit[] {
  const found = new Set<Unit>();
  addUnitsWith(debug, bytesOfU32(offset, debug.elf.littleEndian), found);
  return [...found];
}

/** Adds the units which use a text by its offset; false when there are too many places to tell. */
function addByOffset(debug: DebugInformation, text: number, found: Set<Unit>): boolean {
  const pattern = bytesOfU32(text, debug.elf.littleEndian);
  addUnitsWith(debug, pattern, found);
  const indexed = occurrences(debug.section('.debug_str_offsets'), pattern, mostPlaces);
  if (indexed && indexed.length > 0) addByIndices(debug, indexed, found);
  return indexed !== undefined;
}

/** Adds the units whose bytes have a pattern; the rest of a unit is passed over once it is found. */
function addUnitsWith(debug: DebugInformation, pattern: Uint8Array, found: Set<Unit>): void {
  for (const section of unitSections) {
    const bytes = debug.section(section);
    let place = nextOccurrence(bytes, pattern, 0);
    while (place >= 0) {
      const unit = debug.unitAt(place, section);
      if (unit) found.add(unit);
      place = nextOccurrence(bytes, pattern, Math.max(place + 1, unit ? unit.end - pattern.length + 1 : 0));
    }
  }
}

/** A place in `.debug_str_offsets` belongs to the units whose part of the section begins last before it. */
function addByIndices(debug: DebugInformation, places: number[], found: Set<Unit>): void {
  const unitsByBase = unitsByOffsetsBase(debug);
  const bases = [...unitsByBase.keys()].sort((a, b) => a - b);
  for (const place of places) {
    const base = bases.filter((candidate) => candidate <= place).at(-1);
    for (const unit of (base !== undefined && unitsByBase.get(base)) || []) found.add(unit);
  }
}

const keptBases = new WeakMap<DebugInformation, Map<number, Unit[]>>();

function unitsByOffsetsBase(debug: DebugInformation): Map<number, Unit[]> {
  let byBase = keptBases.get(debug);
  if (!byBase) {
    byBase = new Map();
    for (const unit of debug.units()) {
      const root = rootOf(unit);
      const base = root && attribute(root, at.stringOffsetsBase)?.value;
      const key = typeof base === 'number' ? base : 0;
      const same = byBase.get(key);
      if (same) same.push(unit);
      else byBase.set(key, [unit]);
    }
    keptBases.set(debug, byBase);
  }
  return byBase;
}
