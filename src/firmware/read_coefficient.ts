import type { Coefficient, NumberFormat, StoredElement } from './coefficient.js';
import { bitsOf, numberOf, storedText } from './decode_number.js';
import { completeRecord } from './dwarf/complete_type.js';
import { type BitField, type DataType, sizeOf, typeName } from './dwarf/data_type.js';
import { enumeratorName } from './dwarf/enumeration.js';
import { FirmwareError, quoted } from './failure.js';
import { checkFormat, naturalFormat } from './fit_format.js';
import type { FirmwareImage } from './image.js';
import { formatText, parseFormat } from './number_format.js';
import { type CoefficientPath, parsePath } from './path.js';
import { type Root, rootsOf } from './root.js';
import { type Part, partAt } from './select.js';
import { type Storage, storageAt } from './storage.js';

/** What a spec asks for. */
export interface CoefficientRequest {
  /** Name in the spec, under which errors are reported. */
  name: string;
  /** Path into the image, e.g. `azimuth.gains.kp`, `notch[3]`, `file.c:limit`, `ns::type::member`. */
  at: string;
  /** Number format, e.g. `Q2.14`, `UQ8.8`, `float32`, `int16`; needed where the debug information gives no type. */
  format?: string;
}

/** More elements than this are no coefficient. */
const mostElements = 1 << 20;

/**
 * Reads one coefficient.
 * @throws FirmwareError with the request's name; there is never a value that was guessed
 */
export function readCoefficient(image: FirmwareImage, request: CoefficientRequest): Coefficient {
  try {
    const format = request.format === undefined ? undefined : parseFormat(request.format);
    return readPath(image, parsePath(request.at), format);
  } catch (error) {
    if (!(error instanceof FirmwareError)) throw error;
    const message = error.message.includes(request.at)
      ? error.message
      : `${quoted(request.at)}: ${error.message}`;
    throw new FirmwareError(error.code, message, request.name);
  }
}

/** Reads all coefficients and gathers all errors, so that one run shows them all. */
export function readCoefficients(
  image: FirmwareImage,
  requests: readonly CoefficientRequest[],
): { coefficients: Map<string, Coefficient>; errors: FirmwareError[] } {
  const coefficients = new Map<string, Coefficient>();
  const errors: FirmwareError[] = [];
  for (const request of requests) {
    try {
      coefficients.set(request.name, readCoefficient(image, request));
    } catch (error) {
      if (!(error instanceof FirmwareError)) throw error;
      errors.push(error);
    }
  }
  return { coefficients, errors };
}

function readPath(
  image: FirmwareImage,
  path: CoefficientPath,
  format: NumberFormat | undefined,
): Coefficient {
  const roots = rootsOf(image, path);
  const [first, ...copies] = roots.map((root) => readRoot(image, path, root, format));
  const differing = copies.find((copy) => storedBits(copy) !== storedBits(first));
  if (differing) {
    throw new FirmwareError(
      'sources_disagree',
      `${quoted(path.text)} stands in ${quoted(image.name)} ${roots.length} times with different values; write file.c:${path.name}`,
    );
  }
  return first;
}

function storedBits(coefficient: Coefficient): string {
  return coefficient.elements.map((element) => element.stored).join(' ');
}

function readRoot(
  image: FirmwareImage,
  path: CoefficientPath,
  root: Root,
  format: NumberFormat | undefined,
): Coefficient {
  const type = root.type ?? typeFromFormat(image, path, root, format);
  const whole: Part = { type, offset: 0, bitField: undefined, text: path.text.slice(0, rootLength(path)) };
  let part = whole;
  for (const step of root.steps) part = partAt(part, step, completeRecord);
  const storage = storageAt(image.elf, root.place, root.place.kind === 'number' ? sizeOf(type) : 0, {
    what: quoted(path.text),
  });
  return readPart(image, path, part, storage, root, format);
}

function rootLength(path: CoefficientPath): number {
  const step = /\.|\[|->/.exec(path.text.slice(path.text.indexOf(path.name)));
  return step ? path.text.indexOf(path.name) + step.index : path.text.length;
}

/** Without debug information the format and the symbol's size make the type. */
function typeFromFormat(
  image: FirmwareImage,
  path: CoefficientPath,
  root: Root,
  format: NumberFormat | undefined,
): DataType {
  const isMember = root.steps.some((step) => step.kind !== 'index');
  if (isMember || !format) {
    throw new FirmwareError(
      isMember ? 'no_debug_information' : 'needs_format',
      `the type of ${quoted(path.name)} is not known: the debug information of ${quoted(image.name)} does not have it; build with -g` +
        (isMember ? '' : ', or give a format such as float32 or Q2.14'),
    );
  }
  const size = format.bits / 8;
  const total = root.symbolSize ?? size;
  if (total % size !== 0) {
    throw new FirmwareError(
      'format_mismatch',
      `${quoted(path.name)} is ${total} bytes long, which is no multiple of the ${size} bytes of ${formatText(format)}`,
    );
  }
  const meaning = format.kind === 'float' ? 'float' : format.signed ? 'signed' : 'unsigned';
  const name =
    format.kind === 'float' ? formatText(format) : `${format.signed ? '' : 'u'}int${format.bits}_t`;
  const element: DataType = { kind: 'number', name, size, meaning, littleEndian: undefined };
  return total === size ? element : { kind: 'array', element, lengths: [total / size], stride: size };
}

function readPart(
  image: FirmwareImage,
  path: CoefficientPath,
  part: Part,
  storage: Storage,
  root: Root,
  asked: NumberFormat | undefined,
): Coefficient {
  const { type } = part;
  const element = type.kind === 'array' ? type.element : type;
  const shape = type.kind === 'array' ? shapeOf(type.lengths, type.stride, part, root) : [];
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
  const written = `${typeName(type)}${part.bitField ? ` : ${part.bitField.bits}` : ''}`;
  return {
    path: path.text,
    elements,
    shape,
    type: asked ? `${written} as ${formatText(asked)}` : written,
    format: chosen,
    declaredAt: root.declaredAt,
  };
}

/** The lengths of all dimensions; the outermost of a flexible array comes from the symbol's size. */
function shapeOf(lengths: (number | undefined)[], stride: number, part: Part, root: Root): number[] {
  const inner = lengths.slice(1).reduce((size: number, length) => size * (length ?? 0), stride);
  return lengths.map((length, dimension) => {
    if (length !== undefined) return length;
    const left = (root.symbolSize ?? 0) - part.offset;
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
