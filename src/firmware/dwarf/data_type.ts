import { FirmwareError, quoted } from '../failure.js';
import { attribute, hasFlag, numberAttribute, referredEntry, textAttribute } from './attributes.js';
import { at, encoding, tag } from './codes.js';
import { childrenOf, type Entry } from './entry.js';
import { evaluate } from './location.js';

/** A type as far as reading numbers out of it needs. Sizes and offsets are bytes. */
export type DataType = NumberType | EnumerationType | RecordType | ArrayType | PointerType | OtherType;

export interface NumberType {
  kind: 'number';
  name: string;
  size: number;
  meaning: 'float' | 'signed' | 'unsigned';
  /** Set where the type itself states its byte order. */
  littleEndian: boolean | undefined;
}

export interface EnumerationType {
  kind: 'enumeration';
  name: string;
  size: number;
  signed: boolean;
  entry: Entry;
}

export interface RecordType {
  kind: 'record';
  name: string;
  /** Undefined when the type is only declared here. */
  size: number | undefined;
  entry: Entry;
}

export interface ArrayType {
  kind: 'array';
  element: DataType;
  /** Outermost first; undefined for a flexible array. */
  lengths: (number | undefined)[];
  /** Bytes from one element to the next of the innermost dimension. */
  stride: number;
}

export interface PointerType {
  kind: 'pointer';
  size: number;
  /** A C++ reference: it stands for what it refers to. */
  isReference: boolean;
  entry: Entry;
}

export interface OtherType {
  kind: 'other';
  name: string;
  why: string;
}

/** A longer chain of typedefs, qualifiers and arrays is a cycle. */
const deepest = 64;

/** The type that an entry names by its `type` attribute. @throws FirmwareError `malformed_image` for a cyclic type */
export function typeOf(entry: Entry, depth = 0): DataType {
  const type = referredEntry(entry, at.type);
  return type ? describeType(type, depth) : { kind: 'other', name: 'void', why: 'it has no type' };
}

/** The type which an entry describes. */
export function describeType(entry: Entry, depth = 0): DataType {
  if (depth > deepest) {
    throw new FirmwareError(
      'malformed_image',
      `the debug information of ${quoted(entry.unit.debug.elf.name)} is damaged: the type at 0x${entry.offset.toString(16)} refers to itself`,
    );
  }
  switch (entry.tag) {
    case tag.baseType:
      return baseType(entry);
    case tag.typedef:
      return renamed(typeOf(entry, depth + 1), textAttribute(entry, at.name));
    case tag.constType:
    case tag.volatileType:
    case tag.restrictType:
    case tag.atomicType:
    case tag.packedType:
    case tag.immutableType:
      return typeOf(entry, depth + 1);
    case tag.enumerationType:
      return enumerationType(entry, depth);
    case tag.structureType:
    case tag.classType:
    case tag.unionType:
      return recordType(entry, depth);
    case tag.arrayType:
      return arrayType(entry, depth);
    case tag.pointerType:
    case tag.referenceType:
    case tag.rvalueReferenceType:
      return {
        kind: 'pointer',
        size: numberAttribute(entry, at.byteSize) ?? entry.unit.addressSize,
        isReference: entry.tag !== tag.pointerType,
        entry,
      };
    default:
      return {
        kind: 'other',
        name: `type 0x${entry.tag.toString(16)}`,
        why: 'it is no number, array or struct',
      };
  }
}

/** How the type is written in C. */
export function typeName(type: DataType): string {
  switch (type.kind) {
    case 'array':
      return `${typeName(type.element)}${type.lengths.map((length) => `[${length ?? ''}]`).join('')}`;
    case 'pointer':
      return `${typeName(typeOf(type.entry))} ${type.isReference ? '&' : '*'}`;
    default:
      return type.name;
  }
}

/** Bytes of a value of this type. @throws FirmwareError for a type without a known size */
export function sizeOf(type: DataType): number {
  switch (type.kind) {
    case 'array':
      return type.lengths.reduce((size: number, length) => size * (length ?? 0), type.stride);
    case 'other':
      throw new FirmwareError('not_a_number', `${type.name} cannot be read: ${type.why}`);
    case 'record':
      if (type.size === undefined) throw incomplete(type);
      return type.size;
    default:
      return type.size;
  }
}

/** The error for a type of which only the name is known. */
export function incomplete(type: RecordType): FirmwareError {
  return new FirmwareError(
    'incomplete_type',
    `${type.name} is only declared in the debug information, its members are not known: build the file that defines it with -g`,
  );
}

function baseType(entry: Entry): DataType {
  const name = textAttribute(entry, at.name) ?? 'unnamed type';
  const size = numberAttribute(entry, at.byteSize);
  const meaning = meaningOf(numberAttribute(entry, at.encoding));
  if (meaning === undefined || size === undefined) {
    return { kind: 'other', name, why: 'it is not a plain float, integer or character type' };
  }
  if (![1, 2, 4, 8].includes(size) || (meaning === 'float' && size === 1)) {
    return { kind: 'other', name, why: `a ${meaning} type of ${size} bytes is not supported` };
  }
  const order = numberAttribute(entry, at.endianity);
  return {
    kind: 'number',
    name,
    size,
    meaning,
    littleEndian: order === 1 ? false : order === 2 ? true : undefined,
  };
}

function meaningOf(code: number | undefined): NumberType['meaning'] | undefined {
  switch (code) {
    case encoding.float:
      return 'float';
    case encoding.signed:
    case encoding.signedCharacter:
      return 'signed';
    case encoding.unsigned:
    case encoding.unsignedCharacter:
    case encoding.boolean:
    case encoding.utf:
      return 'unsigned';
    default:
      return undefined;
  }
}

function renamed(type: DataType, name: string | undefined): DataType {
  if (name === undefined || type.kind === 'array' || type.kind === 'pointer') return type;
  return { ...type, name };
}

function enumerationType(entry: Entry, depth: number): DataType {
  const name = `enum ${textAttribute(entry, at.name) ?? '(unnamed)'}`;
  const under = attribute(entry, at.type) && typeOf(entry, depth + 1);
  const size = numberAttribute(entry, at.byteSize) ?? (under?.kind === 'number' ? under.size : undefined);
  if (size === undefined || ![1, 2, 4, 8].includes(size))
    return { kind: 'other', name, why: `its size of ${size} bytes is odd` };
  const signed = under?.kind === 'number' ? under.meaning === 'signed' : hasNegative(entry);
  return { kind: 'enumeration', name, size, signed, entry };
}

function hasNegative(entry: Entry): boolean {
  for (const child of childrenOf(entry)) if ((numberAttribute(child, at.constValue) ?? 0) < 0) return true;
  return false;
}

function recordType(entry: Entry, depth: number): DataType {
  const signature = attribute(entry, at.signature) && referredEntry(entry, at.signature);
  if (signature) return describeType(signature, depth + 1);
  const word = entry.tag === tag.unionType ? 'union' : entry.tag === tag.classType ? 'class' : 'struct';
  const name = `${word} ${textAttribute(entry, at.name) ?? '(unnamed)'}`;
  return {
    kind: 'record',
    name,
    size: hasFlag(entry, at.declaration) ? undefined : numberAttribute(entry, at.byteSize),
    entry,
  };
}

function arrayType(entry: Entry, depth: number): DataType {
  const element = typeOf(entry, depth + 1);
  const lengths: (number | undefined)[] = [];
  for (const child of childrenOf(entry)) if (child.tag === tag.subrangeType) lengths.push(lengthOf(child));
  if (lengths.length === 0) lengths.push(undefined);
  if (element.kind === 'other') return { ...element, name: `${element.name}[]` };
  if (element.kind === 'array') {
    return {
      kind: 'array',
      element: element.element,
      lengths: [...lengths, ...element.lengths],
      stride: element.stride,
    };
  }
  return {
    kind: 'array',
    element,
    lengths,
    stride: numberAttribute(entry, at.byteStride) ?? sizeOf(element),
  };
}

function lengthOf(range: Entry): number | undefined {
  const count = numberAttribute(range, at.count);
  if (count !== undefined) return count;
  const upper = numberAttribute(range, at.upperBound);
  // Some compilers write −1, in one width or another, for a flexible array.
  if (upper === undefined || upper === 0xffffffff || upper >= 2 ** 63) return undefined;
  const length = upper - (numberAttribute(range, at.lowerBound) ?? 0) + 1;
  return length > 0 ? length : undefined;
}

/** A member of a struct, union or class; bits count from the least significant one of its storage unit. */
export interface Member {
  /** Undefined for an anonymous struct or union, whose members are written as the outer one's. */
  name: string | undefined;
  offset: number;
  bitField: BitField | undefined;
  isBase: boolean;
  entry: Entry;
}

/** Where the bits of a bit-field begin, counted as the DWARF producer does it. */
export interface BitField {
  bits: number;
  /** Bits from the beginning of the record, in the order of the target's memory. */
  fromStart: number;
}

/** The members in the order of the declaration, bases included. */
export function membersOf(type: RecordType): Member[] {
  const members: Member[] = [];
  for (const entry of childrenOf(type.entry)) {
    const isBase = entry.tag === tag.inheritance;
    if (
      !isBase &&
      (entry.tag !== tag.member || hasFlag(entry, at.external) || hasFlag(entry, at.declaration))
    )
      continue;
    const offset = offsetOf(entry);
    if (offset === undefined) continue;
    members.push({
      name: textAttribute(entry, at.name),
      offset,
      bitField: bitFieldOf(entry, offset),
      isBase,
      entry,
    });
  }
  return members;
}

function offsetOf(entry: Entry): number | undefined {
  const location = attribute(entry, at.memberLocation);
  if (!location) return 0;
  if (!(location.value instanceof Uint8Array)) return Number(location.value);
  // Version 2 writes the offset as an expression on the record's address.
  const start = new Uint8Array([0x30, ...location.value]);
  const place = evaluate(entry.unit, start);
  return place.kind === 'memory' ? place.address : undefined;
}

function bitFieldOf(entry: Entry, offset: number): BitField | undefined {
  const bits = numberAttribute(entry, at.bitSize);
  if (bits === undefined) return undefined;
  const fromStart = numberAttribute(entry, at.dataBitOffset);
  if (fromStart !== undefined) return { bits, fromStart };
  const fromTop = numberAttribute(entry, at.bitOffset);
  if (fromTop === undefined) return { bits, fromStart: 8 * offset };
  const unitSize = numberAttribute(entry, at.byteSize) ?? sizeOf(typeOf(entry));
  const inUnit = entry.unit.debug.elf.littleEndian ? 8 * unitSize - fromTop - bits : fromTop;
  return { bits, fromStart: 8 * offset + inUnit };
}
