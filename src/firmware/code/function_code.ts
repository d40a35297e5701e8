import { createHash } from 'node:crypto';
import { readMemory } from '../elf/memory.js';
import { allSymbols, type ElfSymbol, symbolsNamed, symbolType, undefinedSection } from '../elf/symbols.js';
import { FirmwareError, quoted } from '../failure.js';
import { checkFlashed } from '../flash/flash_image.js';
import type { ElfImage, FirmwareImage } from '../image.js';
import { nearestNames } from '../nearest.js';
import { type AddressPlace, armPlaces } from './arm_places.js';
import { armMachine, Landmarks } from './landmarks.js';

/** The machine code of one function, as far as it tells what the function does. */
export interface FunctionCode {
  name: string;
  /** Bytes, the constants between its instructions included. */
  size: number;
  /**
   * SHA-256 of its bytes, in lower-case hexadecimal digits. In 32-bit Arm code an address of a function or variable counts by
   * that one's name: so the digest stays when the linker merely moves things, and changes when another function is called.
   * On other processors every byte counts as it is.
   */
  digest: string;
  /**
   * Names of the functions that it calls or jumps to directly, in alphabetical order; empty on processors other than 32-bit Arm.
   * Their code is no part of the digest.
   */
  calls: string[];
}

/** Larger than any function of a control law. */
const largest = 1 << 20;

/**
 * The machine code of a function. Where the image has no names, it must stand in what is flashed as it does in the ELF file that
 * gives them: what ships is what counts.
 * @param name its name in the symbol table.
 * @throws FirmwareError `no_such_symbol`, `ambiguous_name`, `no_contents`, `sources_disagree`, `unsupported` or `needs_relocation`
 */
export function functionCode(image: FirmwareImage, name: string): FunctionCode {
  const elf = elfOf(image, name);
  const symbol = functionSymbol(elf, name);
  const isArm = elf.elf.machine === armMachine;
  const mark = isArm ? symbol.address & 1 : 0;
  const address = symbol.address - mark;
  const what = `the function ${quoted(name)}`;
  const bytes = readMemory(elf.elf, address, symbol.size, { what });
  if (elf.flash) checkFlashed(elf.flash, elf.elf, address, bytes, what);
  const places = isArm ? armPlaces(elf.elf, bytes, address, mark === 1) : [];
  const landmarks = new Landmarks(elf.symbolTable);
  const leaving = outside(places, address, bytes.length);
  const calls = new Set(leaving.filter(isCall).flatMap((place) => landmarks.nameOf(place.address) ?? []));
  return {
    ...{ name, size: symbol.size, digest: digestOf(bytes, leaving, landmarks) },
    calls: [...calls].sort(),
  };
}

function isCall({ kind }: AddressPlace): boolean {
  return kind.startsWith('call') || kind === 'jump' || kind.startsWith('branch');
}

function elfOf(image: FirmwareImage, name: string): ElfImage {
  const elf = image.kind === 'elf' ? image : 'symbols' in image ? image.symbols : undefined;
  if (!elf) {
    throw new FirmwareError(
      'unsupported',
      `the machine code of ${quoted(name)} cannot be found in ${quoted(image.name)}, which has no symbol table; give the ELF file of the same build`,
    );
  }
  if (elf.elf.relocatable) {
    throw new FirmwareError(
      'needs_relocation',
      `the machine code of ${quoted(name)} in ${quoted(image.name)} is finished by the linker only; give the linked image`,
    );
  }
  return elf;
}

function functionSymbol(image: ElfImage, name: string): ElfSymbol {
  const found = symbolsNamed(image.symbolTable, name).filter(isFunction);
  const places = new Set(found.map(({ address }) => address));
  if (places.size > 1) {
    throw new FirmwareError(
      'ambiguous_name',
      `${quoted(image.name)} has ${places.size} functions ${quoted(name)}, at different addresses; give the one of the control law a name of its own`,
    );
  }
  const [symbol] = found;
  if (!symbol) throw noSuchFunction(image, name);
  if (symbol.size > 0 && symbol.size <= largest) return symbol;
  throw new FirmwareError(
    'no_contents',
    `the symbol table of ${quoted(image.name)} says that the function ${quoted(name)} has ${symbol.size} bytes; in assembly code give its size (.size)`,
  );
}

function isFunction({ type, section }: ElfSymbol): boolean {
  return type === symbolType.function && section !== undefinedSection;
}

function noSuchFunction(image: ElfImage, name: string): FirmwareError {
  const names = allSymbols(image.symbolTable)
    .filter(isFunction)
    .map((symbol) => symbol.name);
  const near = nearestNames(name, names);
  const offered = near.length > 0 ? `; nearest: ${near.map(quoted).join(', ')}` : '';
  return new FirmwareError(
    'no_such_symbol',
    `${quoted(image.name)} has no function ${quoted(name)}${offered}; if the compiler put it into its caller, name that one`,
  );
}

/** Places that point out of the function: those within it do not move against one another. */
function outside(places: readonly AddressPlace[], start: number, size: number): AddressPlace[] {
  return places.filter(({ kind, address }) => kind === 'word' || address < start || address >= start + size);
}

function digestOf(bytes: Uint8Array, places: readonly AddressPlace[], landmarks: Landmarks): string {
  const hash = createHash('sha256');
  let done = 0;
  for (const { at, size, kind, address } of places) {
    const name = landmarks.nameOf(address);
    if (name === undefined) continue;
    hash.update(bytes.subarray(done, at)).update(`<${kind} ${name}>`);
    done = at + size;
  }
  return hash.update(bytes.subarray(done)).digest('hex');
}
