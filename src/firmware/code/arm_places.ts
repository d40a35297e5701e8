import type { ElfFile } from '../elf/elf_file.js';
import { allSymbols } from '../elf/symbols.js';

/** Some bytes of a function that hold the address of something: they change when the linker moves it. */
export interface AddressPlace {
  /** Offset in the function, and how many bytes. */
  at: number;
  size: number;
  /** What the bytes mean apart from the address. */
  kind: string;
  address: number;
}

type Region = 'thumb' | 'arm' | 'data';

const regionMarks: Readonly<Record<string, Region>> = { $t: 'thumb', $a: 'arm', $d: 'data' };

/**
 * Where 32-bit Arm code holds addresses: words between the instructions, calls and far jumps, and pairs that build an
 * address from two halves. Encodings: Arm Architecture Reference Manual (DDI 0406C), A8.8.18, A8.8.25, A8.8.102, A8.8.106;
 * which bytes are instructions: mapping symbols (AAELF32, 5.5.5).
 */
export function armPlaces(
  elf: ElfFile,
  bytes: Uint8Array,
  address: number,
  isThumb: boolean,
): AddressPlace[] {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  const places: AddressPlace[] = [];
  const halves = new Map<number, { at: number; low: number }>();
  const regions = regionsOf(elf, address, bytes.length, isThumb ? 'thumb' : 'arm');
  for (const { from, to, region } of regions) {
    const step = region === 'thumb' ? 2 : 4;
    for (let at = region === 'data' ? from + (-(address + from) & 3) : from; at + step <= to; ) {
      if (region !== 'thumb') {
        const word = view.getUint32(at, elf.littleEndian);
        const found = region === 'data' ? dataWord(word) : armBranch(word, address + at);
        if (found) places.push({ at, size: 4, ...found });
        at += 4;
        continue;
      }
      const first = view.getUint16(at, elf.littleEndian);
      if (!isLong(first) || at + 4 > to) {
        at += 2;
        continue;
      }
      const second = view.getUint16(at + 2, elf.littleEndian);
      const found = thumbBranch(first, second, address + at);
      if (found) places.push({ at, size: 4, ...found });
      else places.push(...pairOfHalves(first, second, at, halves));
      at += 4;
    }
  }
  return places.sort((a, b) => a.at - b.at);
}

interface RegionPart {
  from: number;
  to: number;
  region: Region;
}

/** Instructions and data in a function, as the mapping symbols tell; offsets from its start. */
function regionsOf(elf: ElfFile, address: number, size: number, first: Region): RegionPart[] {
  const marks = allSymbols(elf)
    .map(({ name, address: where }) => ({ region: regionMarks[name.slice(0, 2)], at: where - address, name }))
    .filter(({ name, at, region }) => /^\$[tad](\.|$)/.test(name) && region && at >= 0 && at < size)
    .sort((a, b) => a.at - b.at);
  const starts = marks[0]?.at === 0 ? marks : [{ region: first, at: 0 }, ...marks];
  return starts.map(({ region, at }, i) => ({ from: at, to: starts[i + 1]?.at ?? size, region }));
}

function dataWord(word: number): Pick<AddressPlace, 'kind' | 'address'> {
  return { kind: 'word', address: word };
}

function armBranch(word: number, pc: number): Pick<AddressPlace, 'kind' | 'address'> | undefined {
  if ((word & 0x0e000000) !== 0x0a000000) return undefined;
  const distance = ((word & 0xffffff) << 8) >> 6;
  return { kind: `branch ${word >>> 24}`, address: pc + 8 + distance };
}

/** Whether a Thumb half-word begins an instruction of two (DDI 0406C, A6.1). */
function isLong(first: number): boolean {
  return first >> 11 >= 0b11101;
}

function thumbBranch(
  first: number,
  second: number,
  pc: number,
): Pick<AddressPlace, 'kind' | 'address'> | undefined {
  if (first >> 11 !== 0b11110) return undefined;
  const form = second & 0xd000;
  const kind =
    form === 0xd000 ? 'call' : form === 0xc000 ? 'call of Arm code' : form === 0x9000 ? 'jump' : undefined;
  if (kind === undefined) return undefined;
  const sign = (first >> 10) & 1;
  const bit = (place: number): number => 1 ^ ((second >> place) & 1) ^ sign;
  const high = (sign << 24) | (bit(13) << 23) | (bit(11) << 22);
  const distance = ((high | ((first & 0x3ff) << 12) | ((second & 0x7ff) << 1)) << 7) >> 7;
  const from = pc + 4;
  return { kind, address: (form === 0xc000 ? from - (from & 3) : from) + distance };
}

/** The lower half of an address is remembered by its register; with the upper half both make two places. */
function pairOfHalves(
  first: number,
  second: number,
  at: number,
  halves: Map<number, { at: number; low: number }>,
): AddressPlace[] {
  const isLower = (first & 0xfbf0) === 0xf240;
  const isUpper = (first & 0xfbf0) === 0xf2c0;
  if ((!isLower && !isUpper) || second & 0x8000) return [];
  const register = (second >> 8) & 15;
  const half =
    ((first & 15) << 12) | (((first >> 10) & 1) << 11) | (((second >> 12) & 7) << 8) | (second & 255);
  if (isLower) {
    halves.set(register, { at, low: half });
    return [];
  }
  const lower = halves.get(register);
  halves.delete(register);
  if (!lower) return [];
  const address = half * 0x10000 + lower.low;
  return [
    { at: lower.at, size: 4, kind: `lower half in r${register}`, address },
    { at, size: 4, kind: `upper half in r${register}`, address },
  ];
}
