import type { Coefficient, NumberFormat } from './coefficient.js';
import { type DataType, sizeOf } from './dwarf/data_type.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import { navigate } from './navigate.js';
import { formatText } from './number_format.js';
import type { CoefficientPath } from './path.js';
import { readPart } from './read_part.js';
import type { CoefficientRequest } from './request.js';
import { type Root, rootsOf } from './root.js';
import type { Part } from './select.js';
import { storageAt } from './storage.js';

/**
 * Reads what a path leads to out of an ELF image.
 * @throws FirmwareError when there is no value, or not one value
 */
export function readElf(
  image: ElfImage,
  path: CoefficientPath,
  format: NumberFormat | undefined,
  request: CoefficientRequest,
): Coefficient {
  const roots = rootsOf(image, path);
  const [first, ...copies] = roots.map((root) =>
    readRoot(image, path, root, format, request.startsAtZero ?? false),
  );
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
  image: ElfImage,
  path: CoefficientPath,
  root: Root,
  format: NumberFormat | undefined,
  startsAtZero: boolean,
): Coefficient {
  const type = root.type ?? typeFromFormat(image, path, root, format);
  const part: Part = { type, offset: 0, bitField: undefined, text: path.root };
  const size = root.place.kind === 'number' ? sizeOf(type) : 0;
  const storage = storageAt(image, root.place, size, { what: quoted(path.text), startsAtZero });
  const found = navigate(image, { part, storage, room: root.symbolSize }, root.steps, startsAtZero);
  return readPart(image, found, format, { path: path.text, declaredAt: root.declaredAt });
}

/** Without debug information the format and the symbol's size make the type. */
function typeFromFormat(
  image: ElfImage,
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
