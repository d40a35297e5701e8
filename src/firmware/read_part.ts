import type { Coefficient, NumberFormat, StoredElement } from './coefficient.js';
import { bitsOf, numberOf, storedText } from './decode_number.js';
import { type BitField, type DataType, typeName } from './dwarf/data_type.js';
import { enumeratorName } from './dwarf/enumeration.js';
import { FirmwareError, quoted } from './failure.js';
import { checkFormat, naturalFormat } from './fit_format.js';
import type { ElfImage } from './image.js';
import type { Located } from './navigate.js';
import { formatText } from './number_format.js';
import { remarked } from './remark.js';
import type { Part } from './select.js';
import type { Storage } from './storage.js';

/** More elements than this are no coefficient. */
const mostElements = 1 << 20;

/** Reads a number or an array of numbers which was found. @throws FirmwareError when it is anything else */
export function readPart(
  image: ElfImage,
  { part, storage, room }: Located,
  asked: NumberFormat | undefined,
  { path, declaredAt }: Pick<Coefficient, 'path' | 'declaredAt'>,
): Coefficient {
  const { type } = part;
  const element = type.kind === 'array' ? type.element : type;
  const shape = type.kind === 'array' ? shapeOf(type.lengths, type.stride, part, room) : [];
  const format = naturalFormat(element, part.text);
  const chosen = asked ? checkFormat(asked, format, part, typeName(element)) : format;
  const stride = type.kind === 'array' ? type.stride : 0;
  const count = shape.reduce((product, length) => product * length, 1);
  if (count > mostElements)
    throw new FirmwareError(
      'unsupported',
      `${quoted(part.text)} has ${count} elements, at most ${mostElements} can be read`,
    );
  const littleEndian =
    (element.kind === 'number' ? element.littleEndian : undefined) ?? image.elf.littleEndian;
  const elements = Array.from({ length: count }, (_, i) =>
    readElement(storage, part.offset + i * stride, element, chosen, littleEndian, part.bitField),
  );
  const dimensions = shape.map((length) => `[${length}]`).join('');
  const written = `${typeName(element)}${dimensions}${part.bitField ? ` : ${part.bitField.bits}` : ''}`;
  return {
    path,
    elements: remarked(elements, chosen),
    shape,
    type: asked ? `${written} as ${formatText(asked)}` : written,
    format: chosen,
    declaredAt,
  };
}

/** The lengths of all dimensions; the outermost of a flexible array comes from the symbol's size. */
function shapeOf(
  lengths: (number | undefined)[],
  stride: number,
  part: Part,
  room: number | undefined,
): number[] {
  const inner = lengths.slice(1).reduce((size: number, length) => size * (length ?? 0), stride);
  return lengths.map((length, dimension) => {
    if (length !== undefined) return length;
    const left = (room ?? 0) - part.offset;
    if (dimension > 0 || inner <= 0 || left < inner) {
      throw new FirmwareError(
        'incomplete_type',
        `${quoted(part.text)} is an array whose length is not known: name an element, as in ${part.text}[0]`,
      );
    }
    return Math.floor(left / inner);
  });
}

function readElement(
  storage: Storage,
  offset: number,
  type: DataType,
  format: NumberFormat,
  littleEndian: boolean,
  bitField: BitField | undefined,
): StoredElement {
  const width = bitField?.bits ?? format.bits;
  const start = bitField ? Math.floor(bitField.fromStart / 8) : offset;
  const bits = bitField
    ? bitsOfField(storage, bitField, littleEndian)
    : bitsOf(storage.read(offset, format.bits / 8), littleEndian);
  const signed = format.kind !== 'float' && format.signed;
  const widened = signed ? BigInt.asUintN(format.bits, BigInt.asIntN(width, bits)) : bits;
  const value = numberOf(widened, format);
  const element: StoredElement = { value, stored: storedText(bits, width), address: storage.address(start) };
  const enumerator = type.kind === 'enumeration' ? enumeratorName(type, value) : undefined;
  return enumerator === undefined ? element : { ...element, enumerator };
}

function bitsOfField(storage: Storage, field: BitField, littleEndian: boolean): bigint {
  const first = Math.floor(field.fromStart / 8);
  const inByte = field.fromStart - 8 * first;
  const size = Math.ceil((inByte + field.bits) / 8);
  const bits = bitsOf(storage.read(first, size), littleEndian);
  const shift = littleEndian ? inByte : 8 * size - inByte - field.bits;
  return BigInt.asUintN(field.bits, bits >> BigInt(shift));
}
