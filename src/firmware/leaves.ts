import { completeRecord } from './dwarf/complete_type.js';
import { type DataType, type Member, membersOf, typeOf } from './dwarf/data_type.js';

/** A number, or a table of numbers, within a variable: what one coefficient can be. */
export interface Leaf {
  path: string;
  /** Lengths of a table's dimensions, outermost first; empty for a single number. */
  lengths: (number | undefined)[];
  type: DataType;
}

const deepest = 24;
/** A table of structs longer than this is data, not coefficients: only its beginning is listed. */
const mostStructs = 4096;

/** All numbers in a variable, members of anonymous and base records under the outer name; pointers are left alone. */
export function* leavesOf(type: DataType, path: string, depth = 0): Generator<Leaf> {
  if (depth > deepest) return;
  switch (type.kind) {
    case 'number':
    case 'enumeration':
      yield { path, lengths: [], type };
      break;
    case 'array':
      if (type.element.kind !== 'record') {
        if (type.element.kind !== 'pointer') yield { path, lengths: type.lengths, type };
      } else if (type.lengths.every((length) => length !== undefined)) {
        for (const index of indicesOf(type.lengths as number[]))
          yield* leavesOf(type.element, path + index, depth + 1);
      }
      break;
    case 'record':
      for (const member of membersOf(completeRecord(type))) yield* leavesOfMember(member, path, depth);
      break;
    case 'pointer':
      if (type.isReference) yield* leavesOf(typeOf(type.entry), path, depth + 1);
      break;
    default:
      break;
  }
}

function* leavesOfMember(member: Member, path: string, depth: number): Generator<Leaf> {
  const isInlined = member.name === undefined || member.isBase;
  // An unnamed bit-field is padding.
  if (member.name === undefined && member.bitField) return;
  yield* leavesOf(typeOf(member.entry), isInlined ? path : `${path}.${member.name}`, depth + 1);
}

/** All index texts of a table, last index fastest: `[0][0]`, `[0][1]` … */
export function* indicesOf(lengths: readonly number[]): Generator<string> {
  const count = Math.min(
    mostStructs,
    lengths.reduce((product, length) => product * length, 1),
  );
  for (let i = 0; i < count; i++) {
    const digits: number[] = [];
    let rest = i;
    for (let dimension = lengths.length - 1; dimension >= 0; dimension--) {
      digits.unshift(rest % lengths[dimension]);
      rest = Math.floor(rest / lengths[dimension]);
    }
    yield digits.map((digit) => `[${digit}]`).join('');
  }
}
