/** `e_machine` numbers of the ELF registry for processors which firmware runs on. */
const machines: Record<number, string> = {
  2: 'SPARC',
  3: 'x86',
  4: 'm68k',
  8: 'MIPS',
  20: 'PowerPC',
  21: 'PowerPC64',
  22: 'S/390',
  40: 'Arm',
  42: 'SuperH',
  44: 'TriCore',
  62: 'x86-64',
  83: 'AVR',
  87: 'V850',
  93: 'ARC',
  94: 'Xtensa',
  105: 'MSP430',
  106: 'Blackfin',
  140: 'TMS320C6000',
  173: 'RX',
  183: 'AArch64',
  195: 'ARCv2',
  243: 'RISC-V',
};

/** The processor's name for people; its number where it has none here. */
export function machineName(machine: number): string {
  return machines[machine] ?? `machine ${machine}`;
}
