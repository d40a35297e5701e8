import { type ElfFile, sectionFlag } from './elf_file.js';
import { relocationAt } from './relocate.js';
import { dynamicSymbolAddress } from './symbols.js';

/** The relocation by which a loader adds only the load address, by `e_machine` (ELF supplements of the processors). */
const relativeTypes: Record<number, number> = { 3: 8, 40: 23, 62: 8, 183: 1027, 243: 3 };

/**
 * The address which the loader of a shared or position-independent file stores at a place, if it is loaded at 0; undefined
 * where it leaves the place alone.
 */
export function dynamicAddress(elf: ElfFile, place: number): number | undefined {
  if (elf.relocatable) return undefined;
  for (const section of elf.sections) {
    if (!(section.flags & sectionFlag.allocated)) continue;
    const row = relocationAt(elf, section, place);
    if (!row) continue;
    if (row.type === relativeTypes[elf.machine])
      return row.addend === undefined ? undefined : Number(row.addend);
    const address = dynamicSymbolAddress(elf, section.link, row.symbol);
    if (address !== undefined) return address + Number(row.addend ?? 0n);
  }
  return undefined;
}
