import { bytesOfU32, occurrences } from '../cursor.js';
import { attribute } from './attributes.js';
import { at } from './codes.js';
import type { DebugInformation, Unit } from './debug_information.js';
import { rootOf } from './entry.js';

/** More places than this to look for: reading every unit is then no slower. */
const mostPlaces = 128;

/**
 * The units which can hold an entry of this name, found by searching bytes instead of reading entries: the name itself,
 * or an offset to it in the text section. A unit is listed without need at times, but none is left out.
 */
export function unitsMentioning(debug: DebugInformation, name: string): Unit[] {
  const all = debug.units();
  if (all.length < 3) return all;
  const pattern = Buffer.from(`${name}\0`);
  const found = new Set<Unit>();
  for (const section of ['.debug_info', '.debug_types'] as const) {
    const inline = occurrences(debug.section(section), pattern, mostPlaces);
    if (!inline) return all;
    addUnits(debug, section, inline, found);
  }
  const texts = occurrences(debug.section('.debug_str'), pattern, mostPlaces);
  if (!texts || !addByOffsets(debug, texts, found)) return all;
  return all.filter((unit) => found.has(unit));
}

/** The units which can refer to an entry of `.debug_info` by its offset in the section. */
export function unitsReferringTo(debug: DebugInformation, offset: number): Unit[] {
  const places = occurrences(
    debug.section('.debug_info'),
    bytesOfU32(offset, debug.elf.littleEndian),
    mostPlaces,
  );
  const found = new Set<Unit>();
  if (!places) return debug.units();
  addUnits(debug, '.debug_info', places, found);
  return [...found];
}

function addByOffsets(debug: DebugInformation, texts: number[], found: Set<Unit>): boolean {
  const { littleEndian } = debug.elf;
  for (const text of texts) {
    const pattern = bytesOfU32(text, littleEndian);
    for (const section of ['.debug_info', '.debug_types'] as const) {
      const places = occurrences(debug.section(section), pattern, mostPlaces * 8);
      if (!places) return false;
      addUnits(debug, section, places, found);
    }
    const indexed = occurrences(debug.section('.debug_str_offsets'), pattern, mostPlaces);
    if (!indexed) return false;
    if (indexed.length > 0) addByIndices(debug, indexed, found);
  }
  return true;
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
      byBase.set(key, [...(byBase.get(key) ?? []), unit]);
    }
    keptBases.set(debug, byBase);
  }
  return byBase;
}

function addUnits(
  debug: DebugInformation,
  section: Unit['section'],
  places: number[],
  found: Set<Unit>,
): void {
  for (const place of places) {
    const unit =
      section === '.debug_info'
        ? debug.unitAt(place)
        : debug.units().find((u) => u.section === section && place >= u.offset && place < u.end);
    if (unit) found.add(unit);
  }
}
