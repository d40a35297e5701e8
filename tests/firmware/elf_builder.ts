import { ByteWriter } from './byte_writer.js';

/** A section to be written; fields may lie. */
export interface SectionSpec {
  name: string;
  type?: number;
  flags?: number;
  address?: number;
  bytes?: Uint8Array;
  /** A size that is claimed instead of the true one. */
  size?: number;
  /** An offset that is claimed instead of the true one. */
  offset?: number;
  link?: number;
  info?: number;
}

/** A symbol to be written. */
export interface SymbolSpec {
  name: string;
  address: number;
  size?: number;
  type?: number;
  local?: boolean;
  section?: number;
}

export interface ElfSpec {
  bits?: 32 | 64;
  littleEndian?: boolean;
  machine?: number;
  type?: number;
  sections: SectionSpec[];
  symbols?: SymbolSpec[];
  segments?: { address: number; physical: number; bytes: Uint8Array; memorySize?: number }[];
}

export const progBits = 1;
export const noBits = 8;
export const allocated = 2;

/** An ELF file of sections, symbols and segments; section 1 is the first of the list. */
export function elfOf(spec: ElfSpec): Uint8Array {
  const { bits = 64, littleEndian = true, machine = 62, type = 2 } = spec;
  const wide = bits === 64;
  const word = wide ? 8 : 4;
  const segments = spec.segments ?? [];
  const headerSize = wide ? 64 : 52;
  const segmentSize = wide ? 56 : 32;
  const sections = [...spec.sections, ...symbolSections(spec)];
  const names = new ByteWriter().u8(0);
  const nameOffsets = [...sections.map((s) => s.name), '.shstrtab'].map((name) => {
    const at = names.length;
    names.text(name);
    return at;
  });
  const all: SectionSpec[] = [...sections, { name: '.shstrtab', type: 3, bytes: names.result }];
  const body = new ByteWriter(littleEndian);
  const start = headerSize + segments.length * segmentSize;
  const offsets = all.map((section) => {
    const at = start + body.length;
    body.raw(section.bytes ?? []);
    return at;
  });
  const segmentOffsets = segments.map((segment) => {
    const at = start + body.length;
    body.raw(segment.bytes);
    return at;
  });
  const file = new ByteWriter(littleEndian);
  file.raw([0x7f, 0x45, 0x4c, 0x46, wide ? 2 : 1, littleEndian ? 1 : 2, 1, 0, 0, 0, 0, 0, 0, 0, 0, 0]);
  file.u16(type).u16(machine).u32(1).number(0, word);
  file
    .number(segments.length > 0 ? headerSize : 0, word)
    .number(start + body.length, word)
    .u32(0);
  file.u16(headerSize).u16(segmentSize).u16(segments.length);
  file
    .u16(wide ? 64 : 40)
    .u16(all.length + 1)
    .u16(all.length);
  for (const [i, segment] of segments.entries()) {
    file.u32(1);
    if (wide) file.u32(5);
    file.number(segmentOffsets[i], word).number(segment.address, word).number(segment.physical, word);
    file.number(segment.bytes.length, word).number(segment.memorySize ?? segment.bytes.length, word);
    if (!wide) file.u32(5);
    file.number(4, word);
  }
  file.raw(body.result);
  file.raw(new Uint8Array(wide ? 64 : 40));
  for (const [i, section] of all.entries()) {
    file
      .u32(nameOffsets[i])
      .u32(section.type ?? progBits)
      .number(section.flags ?? 0, word)
      .number(section.address ?? 0, word);
    file.number(section.offset ?? offsets[i], word).number(section.size ?? section.bytes?.length ?? 0, word);
    file
      .u32(section.link ?? 0)
      .u32(section.info ?? 0)
      .number(1, word)
      .number(0, word);
  }
  return file.result;
}

function symbolSections(spec: ElfSpec): SectionSpec[] {
  if (!spec.symbols) return [];
  const { bits = 64, littleEndian = true } = spec;
  const texts = new ByteWriter().u8(0);
  const rows = new ByteWriter(littleEndian).raw(new Uint8Array(bits === 64 ? 24 : 16));
  for (const symbol of spec.symbols) {
    const info = ((symbol.local ? 0 : 1) << 4) | (symbol.type ?? 1);
    const name = texts.length;
    texts.text(symbol.name);
    if (bits === 64)
      rows
        .u32(name)
        .u8(info)
        .u8(0)
        .u16(symbol.section ?? 1)
        .u64(symbol.address)
        .u64(symbol.size ?? 0);
    else
      rows
        .u32(name)
        .u32(symbol.address)
        .u32(symbol.size ?? 0)
        .u8(info)
        .u8(0)
        .u16(symbol.section ?? 1);
  }
  const stringsIndex = spec.sections.length + 2;
  return [
    { name: '.symtab', type: 2, bytes: rows.result, link: stringsIndex },
    { name: '.strtab', type: 3, bytes: texts.result },
  ];
}
