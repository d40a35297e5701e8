import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import { type FirmwareImage, openImage, readCoefficient } from '../../src/firmware/index.js';
import { askDebugger } from './debugger.js';
import { freshFolder, leaveOut, run } from './toolchain.js';

/** Objects that are not linked yet, and files whose addresses a loader will still move: values, or a clear refusal. */
const source = `
  typedef struct { float kp, ki; const float *taps; } axis_t;
  const float taps[3] = {0.25f, 0.5f, 0.75f};
  const axis_t axis = {1.25f, 0.5f, taps};
  const axis_t *const active = &axis;
  extern const float elsewhere[2];
  const float *const outside = elsewhere;
  const unsigned long place = (unsigned long)&axis;
  static const short local[2] = {-7, 8};
  int common_gain;
  const void *volatile kept;
  void _start(void) { kept = &axis; kept = local; kept = &active; kept = &outside; kept = &place; for (;;) {} }
`;

describe.skipIf(leaveOut('clang', 'gcc', 'arm-none-eabi-gcc', 'gdb-multiarch'))(
  'objects and movable files',
  () => {
    const folder = freshFolder();
    const path = (name: string) => join(folder, name);
    const open = (name: string) => openImage(readFileSync(path(name)), name);
    const value = (image: FirmwareImage, at: string) =>
      readCoefficient(image, { name: 'gain', at }).elements[0].value;
    const targets = [
      'riscv32-unknown-elf',
      'riscv64-unknown-elf',
      'aarch64-none-elf',
      'aarch64_be-none-elf',
      'x86_64-none-elf',
      'i386-none-elf',
      'powerpc-none-eabi',
      'mips-none-elf',
      'armv7em-none-eabi',
    ];

    beforeAll(async () => {
      writeFileSync(path('axis.c'), source);
      for (const target of targets) {
        await run('clang', [
          `--target=${target}`,
          '-ffreestanding',
          '-O1',
          '-g',
          '-c',
          '-o',
          path(`${target}.o`),
          path('axis.c'),
        ]);
      }
      await run('arm-none-eabi-gcc', [
        '-mcpu=cortex-m4',
        '-mthumb',
        '-ffreestanding',
        '-Os',
        '-g',
        '-fcommon',
        '-c',
        '-o',
        path('gcc.o'),
        path('axis.c'),
      ]);
      await run('gcc', [
        '-ffreestanding',
        '-nostdlib',
        '-O1',
        '-g',
        '-fpie',
        '-pie',
        '-Wl,--unresolved-symbols=ignore-all',
        '-o',
        path('pie.elf'),
        path('axis.c'),
      ]);
      await run('gcc', [
        '-ffreestanding',
        '-nostdlib',
        '-O1',
        '-g',
        '-fpic',
        '-shared',
        '-o',
        path('lib.so'),
        path('axis.c'),
      ]);
    });

    test.each([...targets.map((target) => `${target}.o`), 'gcc.o'])(
      '%s: values without addresses, pointers followed through the relocations',
      (name) => {
        const image = open(name);
        expect(readCoefficient(image, { name: 'gain', at: 'axis.kp' })).toMatchObject({
          elements: [{ value: 1.25, stored: '0x3fa00000', address: undefined }],
          declaredAt: { line: 4 },
        });
        expect(value(image, 'active->ki')).toBe(0.5);
        expect(value(image, 'active->taps[2]')).toBe(0.75);
        expect(value(image, 'local[0]')).toBe(-7);
      },
    );

    test.each(['x86_64-none-elf.o', 'riscv64-unknown-elf.o', 'gcc.o'])(
      '%s: a number which only the linker knows is refused',
      (name) => {
        expect(() => value(open(name), 'place')).toThrow(
          expect.objectContaining({
            code: 'needs_relocation',
            message: expect.stringMatching(
              /“place”: its bytes in .* are set by the linker only; give the linked image/,
            ),
          }),
        );
      },
    );

    test('a pointer out of the object leads nowhere', () => {
      expect(() => value(open('x86_64-none-elf.o'), 'outside[1]')).toThrow(
        /“outside” is a null pointer|lies in no section/,
      );
    });

    test('common data has no value yet', () => {
      expect(() => value(open('gcc.o'), 'common_gain')).toThrow(/common data without a value/);
    });

    test.each(['pie.elf', 'lib.so'])(
      '%s: pointers which a loader sets are followed as gdb does without running it',
      async (name) => {
        const image = open(name);
        expect(value(image, 'active->ki')).toBe(0.5);
        expect(value(image, 'axis.taps[1]')).toBe(0.5);
        const { values: answers } = await askDebugger(path(name), ['axis.kp', 'local[1]']);
        expect(value(image, 'axis.kp')).toBe(answers.get('axis.kp'));
        expect(value(image, 'local[1]')).toBe(answers.get('local[1]'));
      },
    );

    test('a relocation that is not known is refused by its number', () => {
      const bytes = Buffer.from(readFileSync(path('x86_64-none-elf.o')));
      const image = openImage(bytes, 'odd.o');
      if (image.kind !== 'elf') throw new Error('an ELF file was expected');
      const table = image.elf.sections.find((section) => section.name === '.rela.debug_info')!;
      bytes.writeUInt32LE(200, table.offset + 8);
      expect(() => value(openImage(bytes, 'odd.o'), 'axis.kp')).toThrow(
        /relocation type 200 of x86-64 in “\.debug_info” is not known; give the linked image instead/,
      );
    });
  },
);
