import { Cursor } from './cursor.js';
import { completeRecord } from './dwarf/complete_type.js';
import { type DataType, type PointerType, sizeOf, typeOf } from './dwarf/data_type.js';
import { dynamicAddress } from './elf/dynamic.js';
import { dataSymbolsAt } from './elf/symbols.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import type { PathStep } from './path.js';
import { type Part, partAt } from './select.js';
import { type Storage, storageAt } from './storage.js';

/** A part of a variable together with the bytes that it lies in. */
export interface Located {
  part: Part;
  storage: Storage;
  /** Bytes from the beginning of the storage to the end of its symbol, where the symbol table states them. */
  room: number | undefined;
}

/** Longest chain of pointers and references that is followed. */
const mostFollowed = 16;

/**
 * Goes along a path; references stand for what they refer to, pointers are followed where the path says so (`->`, `[i]`).
 * @throws FirmwareError where a step leads nowhere
 */
export function navigate(
  image: ElfImage,
  start: Located,
  steps: readonly PathStep[],
  startsAtZero: boolean,
): Located {
  let at = start;
  for (const step of steps)
    at = stepInto(image, throughReferences(image, at, startsAtZero), step, startsAtZero);
  return throughReferences(image, at, startsAtZero);
}

function stepInto(image: ElfImage, at: Located, step: PathStep, startsAtZero: boolean): Located {
  const { type } = at.part;
  if (type.kind === 'pointer' && step.kind === 'follow') {
    const target = follow(image, at, type, 0, startsAtZero);
    return { ...target, part: partAt(target.part, { kind: 'member', name: step.name }, completeRecord) };
  }
  if (type.kind === 'pointer' && step.kind === 'index')
    return follow(image, at, type, step.index, startsAtZero);
  if (step.kind === 'follow') {
    throw new FirmwareError(
      'no_such_member',
      `${quoted(at.part.text)} is no pointer: write ${at.part.text}.${step.name}`,
    );
  }
  return { ...at, part: partAt(at.part, step, completeRecord) };
}

function throughReferences(image: ElfImage, start: Located, startsAtZero: boolean): Located {
  let at = start;
  for (let i = 0; i < mostFollowed; i++) {
    const { type } = at.part;
    if (type.kind !== 'pointer' || !type.isReference) return at;
    const target = follow(image, at, type, 0, startsAtZero);
    at = { ...target, part: { ...target.part, text: at.part.text } };
  }
  throw new FirmwareError(
    'malformed_image',
    `${quoted(start.part.text)} is a reference to a reference, ${mostFollowed} times`,
  );
}

/** What an address stored in the image points to, as a variable of its own. */
function follow(
  image: ElfImage,
  at: Located,
  pointer: PointerType,
  index: number,
  startsAtZero: boolean,
): Located {
  const { elf } = image;
  const type = typeOf(pointer.entry);
  const text = pointer.isReference ? at.part.text : `${at.part.text}[${index}]`;
  const stored = at.storage.readAddress(at.part.offset, pointer.size);
  const holder = at.storage.address(at.part.offset);
  const moved = holder === undefined ? undefined : dynamicAddress(elf, holder);
  const address =
    moved ??
    new Cursor(stored, elf.littleEndian, `the pointer ${quoted(at.part.text)}`).unsigned(stored.length);
  if (address === 0) {
    throw new FirmwareError(
      'no_fixed_place',
      `${quoted(at.part.text)} is a null pointer in ${quoted(image.name)}: the running program sets it`,
    );
  }
  const size = fixedSizeOf(type);
  const start = address + index * size;
  const tableEnd = endOfTable(image, at.part.text, index, address, start + size);
  const storage = storageAt(image, { kind: 'memory', address: start }, size, {
    what: quoted(text),
    startsAtZero,
  });
  return {
    part: { type, offset: 0, bitField: undefined, text },
    storage,
    room: tableEnd && tableEnd - start,
  };
}

function fixedSizeOf(type: DataType): number {
  return type.kind === 'record' ? sizeOf(completeRecord(type)) : sizeOf(type);
}

/** A pointer states no length; the symbol of the table that it points into does. */
function endOfTable(
  image: ElfImage,
  text: string,
  index: number,
  address: number,
  end: number,
): number | undefined {
  const [table] = dataSymbolsAt(image.symbolTable, address);
  const tableEnd = table && table.address + table.size;
  if (table && tableEnd !== undefined && end > tableEnd) {
    throw new FirmwareError(
      'index_out_of_range',
      `${quoted(`${text}[${index}]`)} lies behind the end of ${quoted(table.name)}, which ${quoted(text)} points into`,
    );
  }
  return tableEnd;
}
