import { Cursor } from '../cursor.js';
import { quoted } from '../failure.js';
import { contentsOf, sectionNamed } from './contents.js';
import { type ElfFile, fileRange, sectionType } from './elf_file.js';

const buildIdNote = 3;

/** The GNU build id as lower-case hexadecimal digits; undefined when the linker wrote none (`--build-id`). */
export function buildIdOf(elf: ElfFile): string | undefined {
  for (const section of elf.sections) {
    if (section.type !== sectionType.note) continue;
    const cursor = new Cursor(
      fileRange(elf, section),
      elf.littleEndian,
      `the note ${quoted(section.name)} of ${quoted(elf.name)}`,
    );
    while (cursor.end - cursor.position >= 12) {
      const [nameSize, size, type] = [cursor.u32(), cursor.u32(), cursor.u32()];
      const owner = cursor.slice(nameSize);
      cursor.skip(padding(nameSize));
      const description = cursor.slice(size);
      if (type === buildIdNote && Buffer.from(owner).toString('latin1') === 'GNU\0') {
        return Buffer.from(description).toString('hex');
      }
      cursor.skip(Math.min(padding(size), cursor.end - cursor.position));
    }
  }
  return undefined;
}

/** The texts which the compilers left in `.comment`, each once. */
export function compilerComments(elf: ElfFile): string[] {
  const section = sectionNamed(elf, '.comment');
  if (!section) return [];
  const texts = Buffer.from(contentsOf(elf, section)).toString('latin1').split('\0');
  return [...new Set(texts.filter((text) => text !== ''))];
}

function padding(size: number): number {
  return -size & 3;
}
