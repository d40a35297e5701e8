import { textAttribute } from './attributes.js';
import { at, tag } from './codes.js';
import { describeType, type RecordType } from './data_type.js';
import type { Unit } from './debug_information.js';
import { childrenOf, type Entry, rootOf } from './entry.js';
import { unitsMentioning } from './mentions.js';

const recordTags: number[] = [tag.structureType, tag.classType, tag.unionType];
const deepest = 32;

/** The same type as another unit defines it, where this unit only declares it; unchanged when none does. */
export function completeRecord(type: RecordType): RecordType {
  if (type.size !== undefined) return type;
  const name = textAttribute(type.entry, at.name);
  if (name === undefined) return type;
  for (const unit of unitsMentioning(type.entry.unit.debug, name)) {
    const found = definitionIn(unit, name, type.entry.tag);
    if (found) return found;
  }
  return type;
}

function definitionIn(unit: Unit, name: string, wanted: number): RecordType | undefined {
  const root = rootOf(unit);
  return root && search(root, name, wanted, 0);
}

function search(parent: Entry, name: string, wanted: number, depth: number): RecordType | undefined {
  for (const entry of childrenOf(parent, isScopeOrRecord)) {
    if (entry.tag === wanted && textAttribute(entry, at.name) === name) {
      const type = describeType(entry);
      if (type.kind === 'record' && type.size !== undefined) return type;
    }
    if (entry.hasChildren && depth < deepest) {
      const inner = search(entry, name, wanted, depth + 1);
      if (inner) return inner;
    }
  }
  return undefined;
}

function isScopeOrRecord(code: number): boolean {
  return code === tag.namespace || recordTags.includes(code);
}
