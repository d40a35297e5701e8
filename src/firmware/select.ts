import {
  type BitField,
  type DataType,
  incomplete,
  type Member,
  membersOf,
  type RecordType,
  sizeOf,
  typeName,
  typeOf,
} from './dwarf/data_type.js';
import { FirmwareError, quoted } from './failure.js';
import { nearestNames } from './nearest.js';
import type { PathStep } from './path.js';

/** A part of a variable: its type and where it begins, in bytes. */
export interface Part {
  type: DataType;
  offset: number;
  bitField: BitField | undefined;
  /** How it is written, for messages. */
  text: string;
}

/** Anonymous structs within each other, and bases of bases, deeper than this are damage. */
const deepestAnonymous = 16;

/** The part which a step leads to. @throws FirmwareError naming the nearest members or the valid indices */
export function partAt(part: Part, step: PathStep, complete: (type: RecordType) => RecordType): Part {
  return step.kind === 'index' ? elementOf(part, step.index) : memberOf(part, step.name, complete);
}

function memberOf(part: Part, name: string, complete: (type: RecordType) => RecordType): Part {
  const { type } = part;
  if (type.kind === 'array' && type.element.kind === 'record') {
    throw new FirmwareError(
      'no_such_member',
      `${quoted(part.text)} is an array of ${type.element.name}: write ${part.text}[0].${name}`,
    );
  }
  if (type.kind === 'pointer') {
    throw new FirmwareError(
      'no_such_member',
      `${quoted(part.text)} is a pointer: write ${part.text}->${name} to follow it`,
    );
  }
  if (type.kind !== 'record') {
    throw new FirmwareError(
      'no_such_member',
      `${quoted(part.text)} is of type ${typeName(type)} and has no member ${quoted(name)}`,
    );
  }
  const record = type.size === undefined ? complete(type) : type;
  if (record.size === undefined) throw incomplete(record);
  const found = searchMember(record, name, 0, complete);
  if (!found) throw noSuchMember(part, record, name, complete);
  const { member, offset } = found;
  const memberType = typeOf(member.entry);
  const shift = offset - member.offset;
  const bitField = member.bitField && {
    ...member.bitField,
    fromStart: member.bitField.fromStart + 8 * (part.offset + shift),
  };
  return { type: memberType, offset: part.offset + offset, bitField, text: `${part.text}.${name}` };
}

/** Finds a member, also in anonymous members and bases; offsets are from the record's beginning. */
function searchMember(
  record: RecordType,
  name: string,
  depth: number,
  complete: (type: RecordType) => RecordType,
): { member: Member; offset: number } | undefined {
  const members = membersOf(record);
  const direct = members.find((member) => member.name === name && !member.isBase);
  if (direct) return { member: direct, offset: direct.offset };
  if (depth >= deepestAnonymous) return undefined;
  for (const member of members) {
    const inner = openMember(member, complete);
    const found = inner && searchMember(inner, name, depth + 1, complete);
    if (found) return { member: found.member, offset: member.offset + found.offset };
  }
  return undefined;
}

/** The record whose members are written as the outer one's. */
function openMember(member: Member, complete: (type: RecordType) => RecordType): RecordType | undefined {
  if (member.name !== undefined && !member.isBase) return undefined;
  const type = typeOf(member.entry);
  if (type.kind !== 'record') return undefined;
  return type.size === undefined ? complete(type) : type;
}

function noSuchMember(
  part: Part,
  record: RecordType,
  name: string,
  complete: (type: RecordType) => RecordType,
): FirmwareError {
  const names = memberNames(record, 0, complete);
  const near = nearestNames(name, names);
  const offered = near.length > 0 ? `nearest: ${near.join(', ')}` : `it has ${names.slice(0, 8).join(', ')}`;
  return new FirmwareError(
    'no_such_member',
    `${quoted(part.text)} (${record.name}) has no member ${quoted(name)}; ${names.length > 0 ? offered : 'it has none'}`,
  );
}

function memberNames(
  record: RecordType,
  depth: number,
  complete: (type: RecordType) => RecordType,
): string[] {
  return membersOf(record).flatMap((member) => {
    const inner = depth < deepestAnonymous ? openMember(member, complete) : undefined;
    if (inner) return memberNames(inner, depth + 1, complete);
    return member.name === undefined ? [] : [member.name];
  });
}

function elementOf(part: Part, index: number): Part {
  const { type } = part;
  if (type.kind !== 'array') {
    throw new FirmwareError(
      'index_out_of_range',
      `${quoted(part.text)} is of type ${typeName(type)}, not an array: leave out [${index}]`,
    );
  }
  const [length, ...inner] = type.lengths;
  if (length !== undefined && index >= length) {
    throw new FirmwareError(
      'index_out_of_range',
      `${quoted(part.text)} has ${length} elements: [${index}] must be at most [${length - 1}]`,
    );
  }
  const element: DataType = inner.length === 0 ? type.element : { ...type, lengths: inner };
  const size = inner.length === 0 ? type.stride : sizeOf(element);
  return {
    type: element,
    offset: part.offset + index * size,
    bitField: undefined,
    text: `${part.text}[${index}]`,
  };
}
