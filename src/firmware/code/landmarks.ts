import type { ElfFile } from '../elf/elf_file.js';
import { allSymbols, type ElfSymbol, symbolType, undefinedSection } from '../elf/symbols.js';

/** Numbers that a compiler gives to copies and statics of one name; they change when unrelated code does. */
const copyNumber = /(?:\.\d+)+$/;

/** Finds what stands at an address by name, so that code can be compared wherever the linker put things. */
export class Landmarks {
  private readonly sorted: ElfSymbol[];
  private readonly widest: number;

  constructor(elf: ElfFile) {
    this.sorted = allSymbols(elf)
      .filter(isLandmark)
      .map((symbol) => (symbol.type === symbolType.function ? withoutMark(elf, symbol) : symbol))
      .sort((a, b) => a.address - b.address || (a.name < b.name ? -1 : 1));
    this.widest = Math.max(0, ...this.sorted.map(({ size }) => size));
  }

  /**
   * The address as name and distance, such as `state+12`: from the smallest function or variable that it lies in, and of
   * those at one place from the first by name. Undefined where nothing with a name is there.
   */
  nameOf(address: number): string | undefined {
    let best: ElfSymbol | undefined;
    for (let at = this.lastAtOrBefore(address); at >= 0; at--) {
      const symbol = this.sorted[at];
      if (symbol.address < address - this.widest) break;
      if (address >= symbol.address + Math.max(1, symbol.size)) continue;
      if (best === undefined || symbol.size <= best.size) best = symbol;
    }
    if (best === undefined) return undefined;
    const distance = address - best.address;
    return best.name.replace(copyNumber, '') + (distance === 0 ? '' : `+${distance}`);
  }

  private lastAtOrBefore(address: number): number {
    let [low, high] = [0, this.sorted.length];
    while (low < high) {
      const middle = (low + high) >> 1;
      if (this.sorted[middle].address <= address) low = middle + 1;
      else high = middle;
    }
    return low - 1;
  }
}

function isLandmark({ name, type, section }: ElfSymbol): boolean {
  return (
    name !== '' &&
    section !== undefinedSection &&
    (type === symbolType.object || type === symbolType.function)
  );
}

/** EM_ARM of the ELF registry. */
export const armMachine = 40;

/** On Arm bit 0 of a function's address says that it is Thumb code, and is no part of it (AAELF32, 5.5.3). */
function withoutMark(elf: ElfFile, symbol: ElfSymbol): ElfSymbol {
  return elf.machine === armMachine ? { ...symbol, address: symbol.address - (symbol.address & 1) } : symbol;
}
