import type { NumberFormat } from './coefficient.js';
import { type DataType, membersOf, type RecordType, typeName } from './dwarf/data_type.js';
import { FirmwareError, quoted } from './failure.js';
import { formatText } from './number_format.js';
import type { Part } from './select.js';

/** The format which a type has by itself. @throws FirmwareError `not_a_number` for what is no number or array of numbers */
export function naturalFormat(type: DataType, text: string): NumberFormat {
  if (type.kind === 'number' && type.meaning === 'float')
    return { kind: 'float', bits: bitsOfType(type.size) as 16 | 32 | 64 };
  if (type.kind === 'number')
    return { kind: 'integer', bits: bitsOfType(type.size), signed: type.meaning === 'signed' };
  if (type.kind === 'enumeration')
    return { kind: 'integer', bits: bitsOfType(type.size), signed: type.signed };
  throw new FirmwareError(
    'not_a_number',
    `${quoted(text)} is of type ${typeName(type)}: ${whyNot(type, text)}`,
  );
}

/**
 * The format that was asked for, if the stored type can be read so: it must be as wide, and a type that is a float already
 * cannot be taken for something else.
 * @throws FirmwareError `format_mismatch` with a format of the right width
 */
export function checkFormat(
  asked: NumberFormat,
  natural: NumberFormat,
  part: Part,
  written: string,
): NumberFormat {
  const trouble = (why: string, cure: string) =>
    new FirmwareError(
      'format_mismatch',
      `${quoted(part.text)} is ${written}: format ${formatText(asked)} ${why}; ${cure}`,
    );
  if (part.bitField) throw trouble('cannot be given for a bit-field', 'leave it out');
  if (natural.kind === 'float' && asked.kind !== 'float')
    throw trouble('cannot be meant for a float', 'leave it out');
  if (asked.bits !== natural.bits) {
    throw trouble(
      `is ${asked.bits} bits wide, stored are ${natural.bits}`,
      `nearest is ${formatText(widened(asked, natural.bits))}`,
    );
  }
  return asked;
}

function widened(format: NumberFormat, bits: 8 | 16 | 32 | 64): NumberFormat {
  if (format.kind === 'fixed')
    return { ...format, bits, fractionalBits: Math.min(format.fractionalBits, bits - 1) };
  if (format.kind === 'integer') return { ...format, bits };
  return bits === 8 ? { kind: 'integer', bits, signed: true } : { kind: 'float', bits };
}

function bitsOfType(size: number): 8 | 16 | 32 | 64 {
  return (8 * size) as 8 | 16 | 32 | 64;
}

function firstMember(type: RecordType): string {
  return membersOf(type).find((member) => member.name !== undefined)?.name ?? 'member';
}

function whyNot(type: DataType, text: string): string {
  switch (type.kind) {
    case 'record':
      return `name one of its members, as in ${text}.${firstMember(type)}`;
    case 'pointer':
      return `a pointer is no coefficient; follow it with ${text}[0] or ${text}->member`;
    case 'other':
      return type.why;
    default:
      return 'it is no number';
  }
}
