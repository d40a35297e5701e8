import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { armPlaces } from '../../src/firmware/code/arm_places.js';
import { functionCode } from '../../src/firmware/code/function_code.js';
import { openElf } from '../../src/firmware/elf/elf_file.js';
import { openImage } from '../../src/firmware/image.js';
import { base, intelHex, sRecords } from '../cli/flash_files.js';
import { allocated, elfOf, progBits, type SymbolSpec } from './elf_builder.js';
import { leaveOut, run } from './toolchain.js';

// Protects the digests of control functions: they change with the law, and do not when the linker merely moves things.

const demo = fileURLToPath(new URL('../../specs/heliostat/firmware/', import.meta.url));
const imageOf = (file: string) => openImage(readFileSync(file), 'a.elf');

const functionType = 2;
const objectType = 1;
const code = 0x08000000;

/** A little-endian image for 32-bit Arm with one section of code and these symbols. */
function armImage(bytes: number[], symbols: SymbolSpec[]): Uint8Array {
  return elfOf({
    bits: 32,
    machine: 40,
    sections: [
      { name: '.text', type: progBits, flags: allocated, address: code, bytes: Uint8Array.from(bytes) },
      { name: '.data', type: progBits, flags: allocated, address: 0x20000000, bytes: new Uint8Array(64) },
    ],
    symbols,
  });
}

function digest(bytes: number[], symbols: SymbolSpec[]): string {
  return functionCode(openImage(armImage(bytes, symbols), 'a.elf'), 'step').digest;
}

const step = (size: number): SymbolSpec => ({
  name: 'step',
  address: code + 1,
  size,
  type: functionType,
  section: 1,
});
const helper = (at: number, name = 'helper'): SymbolSpec => ({
  ...{ name, address: code + at + 1, size: 2, type: functionType, section: 1 },
});
const mark = (name: string, at: number): SymbolSpec => ({
  name,
  address: code + at,
  local: true,
  section: 1,
});
const state = (at: number): SymbolSpec => ({
  name: 'state',
  address: at,
  size: 16,
  type: objectType,
  section: 2,
});

// As objdump of GNU binutils 2.40 prints them: `f000 f804  bl 800000c` at 8000000, `f000 b804  b.w 800000c`.
const call = [0x00, 0xf0, 0x04, 0xf8];
const jump = [0x00, 0xf0, 0x04, 0xb8];

describe('places of addresses in Arm code', () => {
  const elf = openElf(armImage([...call], [step(4)]), 'a.elf');

  it('finds where a Thumb call and a far jump lead', () => {
    expect(armPlaces(elf, Uint8Array.from(call), code, true)).toEqual([
      { at: 0, size: 4, kind: 'call', address: code + 12 },
    ]);
    expect(armPlaces(elf, Uint8Array.from(jump), code, true)).toEqual([
      { at: 0, size: 4, kind: 'jump', address: code + 12 },
    ]);
  });

  it('agrees with the compiler’s disassembly of the demo: calls of azimuth_init', () => {
    // arm-none-eabi-objdump 2.40: bl at 8000088 to 8000784, at 8000092 to 80002ac, at 8000096 to 8000878.
    const bytes = Buffer.from('00f07cfb04a3d3e9002300f00bf900f0effb', 'hex');
    const found = armPlaces(elf, bytes, 0x8000088, true).map(({ at, address }) => [at, address]);
    expect(found).toEqual([
      [0, 0x8000784],
      [10, 0x80002ac],
      [14, 0x8000878],
    ]);
  });

  it('finds backward calls: the distance is signed', () => {
    // `f7ff fffe  bl <self>`, the form of every call that is not linked yet.
    expect(armPlaces(elf, Uint8Array.from([0xff, 0xf7, 0xfe, 0xff]), code, true)[0].address).toBe(code);
  });

  it('finds branches of Arm code: eb000001 is bl to 12 bytes further on', () => {
    const found = armPlaces(elf, Uint8Array.from([0x01, 0x00, 0x00, 0xeb]), code, false);
    expect(found).toEqual([{ at: 0, size: 4, kind: 'branch 235', address: code + 12 }]);
  });

  it('puts an address together from its halves', () => {
    // f240 0304 movw r3, #4; f2c2 0300 movt r3, #0x2000.
    const pair = Uint8Array.from([0x40, 0xf2, 0x04, 0x03, 0xc2, 0xf2, 0x00, 0x03]);
    expect(armPlaces(elf, pair, code, true)).toEqual([
      { at: 0, size: 4, kind: 'lower half in r3', address: 0x20000004 },
      { at: 4, size: 4, kind: 'upper half in r3', address: 0x20000004 },
    ]);
  });

  it('never leaves the function, whatever the bytes are', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 64 }), fc.boolean(), (bytes, isThumb) => {
        for (const { at, size } of armPlaces(elf, bytes, code, isThumb)) {
          expect(at).toBeGreaterThanOrEqual(0);
          expect(at + size).toBeLessThanOrEqual(bytes.length);
        }
      }),
    );
  });
});

describe('the digest of a function', () => {
  const nop = [0x00, 0xbf];
  const far = [0x00, 0xf0, 0x06, 0xf8];

  it('stays when a called function moves, and changes when another one is called', () => {
    const here = digest([...call, ...nop, ...nop, ...nop, ...nop, ...nop], [step(4), helper(12)]);
    const moved = digest([...far, ...nop, ...nop, ...nop, ...nop, ...nop, ...nop], [step(4), helper(16)]);
    const other = digest([...call, ...nop, ...nop, ...nop, ...nop, ...nop], [step(4), helper(12, 'other')]);
    expect(moved).toBe(here);
    expect(other).not.toBe(here);
  });

  it('stays when a variable moves, and changes when another member of it is meant', () => {
    const literal = (address: number): number[] => [0, 8, 16, 24].map((shift) => (address >> shift) & 255);
    const marks = [mark('$t', 0), mark('$d', 4)];
    const of = (at: number, distance: number) =>
      digest([...nop, ...nop, ...literal(at + distance)], [step(8), ...marks, state(at)]);
    expect(of(0x20000010, 0)).toBe(of(0x20000000, 0));
    expect(of(0x20000010, 4)).not.toBe(of(0x20000000, 0));
  });

  it('comes with the functions that are called: of the demo drives those of the source and of the library', () => {
    const callsOf = (file: string, name: string) =>
      functionCode(imageOf(fileURLToPath(new URL(`../../specs/${file}`, import.meta.url))), name).calls;
    // arm-none-eabi-objdump 2.40: bl to 8000784, 80002ac and 8000878, whose names nm gives.
    expect(callsOf('heliostat/firmware/azimuth.elf', 'azimuth_init')).toEqual([
      '__aeabi_d2f',
      '__aeabi_dmul',
      '__aeabi_ui2d',
    ]);
    expect(callsOf('grain-conveyor/firmware/conveyor.elf', 'act')).toEqual(['saturated']);
    expect(callsOf('heliostat/firmware/azimuth.elf', 'azimuth_step')).toEqual([]);
  });

  it('counts every other byte', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 7 }), fc.integer({ min: 1, max: 255 }), (at, change) => {
        const plain = [0x70, 0x47, 0x70, 0x47, 0x70, 0x47, 0x70, 0x47];
        expect(digest(plain.with(at, plain[at] ^ change), [step(8)])).not.toBe(digest(plain, [step(8)]));
      }),
    );
  });

  it('is the same for both demo images, whose law is the same and whose gain is not', () => {
    for (const name of ['azimuth_init', 'azimuth_step']) {
      const shipped = functionCode(imageOf(`${demo}azimuth.elf`), name);
      const regressed = functionCode(imageOf(`${demo}azimuth-regressed.elf`), name);
      expect(regressed).toEqual(shipped);
    }
    // readelf -s: azimuth_step has 368 bytes.
    expect(functionCode(imageOf(`${demo}azimuth.elf`), 'azimuth_step').size).toBe(368);
  });
});

describe('the machine code of what is flashed', () => {
  // The first segment of the demo image, 0xb10 bytes from 0x1000 of the file on, stands at 0x08000000 (readelf --segments);
  // azimuth_step has the 368 bytes from 0x080000b0 on (nm --print-size).
  const elf = imageOf(`${demo}azimuth.elf`);
  const flash = readFileSync(`${demo}azimuth.elf`).subarray(0x1000, 0x1000 + 0xb10);
  const stepAt = 0xb0;
  const files: [string, (bytes: Uint8Array) => Uint8Array, number?][] = [
    ['Intel HEX', (bytes) => Buffer.from(intelHex(bytes))],
    ['S-records', (bytes) => Buffer.from(sRecords(bytes))],
    ['a raw binary', (bytes) => bytes, base],
  ];

  describe.each(files)('%s', (_, fileOf, baseAddress) => {
    const flashed = (bytes: Uint8Array) =>
      functionCode(openImage(fileOf(bytes), 'a.bin', { symbols: elf, baseAddress }), 'azimuth_step');

    it('is that of the ELF file, and does not depend on what stands elsewhere', () => {
      const linked = functionCode(elf, 'azimuth_step');
      expect(flashed(flash)).toEqual(linked);
      expect(flashed(flash.with(stepAt - 1, flash[stepAt - 1] ^ 1))).toEqual(linked);
    });

    it.each([0, 201, 367])('is refused where byte %i is another: it is not the law of these names', (at) => {
      const place = `0x${(base + stepAt + at - (at % 4)).toString(16)}`;
      expect(() => flashed(flash.with(stepAt + at, flash[stepAt + at] ^ 1))).toThrow(
        expect.objectContaining({
          code: 'sources_disagree',
          message: expect.stringMatching(
            new RegExp(
              `the function “azimuth_step”: “a.bin” holds the bytes [0-9a-f]+ at ${place}, “a.elf” `,
            ),
          ),
        }),
      );
    });

    it('is refused where it is not in the file', () => {
      expect(() => flashed(flash.subarray(0, stepAt + 367))).toThrow(
        expect.objectContaining({
          code: 'no_contents',
          message: expect.stringContaining(
            '“a.bin” has no 368 bytes at 0x80000b0; it holds 0x8000000 to 0x800021e',
          ),
        }),
      );
    });
  });
});

describe('a function that cannot be digested', () => {
  const image = openImage(armImage([0x70, 0x47], [step(2), helper(0)]), 'a.elf');

  it('is not there: the nearest names are offered', () => {
    expect(() => functionCode(image, 'stepp')).toThrow(/“a.elf” has no function “stepp”; nearest: “step”/);
    expect(() => functionCode(imageOf(`${demo}azimuth.elf`), 'azimuth')).toThrow(
      expect.objectContaining({ code: 'no_such_symbol' }),
    );
  });

  it('has a name that two functions have', () => {
    const twice = openImage(armImage([0, 0, 0, 0], [step(2), helper(2, 'step')]), 'a.elf');
    expect(() => functionCode(twice, 'step')).toThrow(/2 functions “step”/);
  });

  it('has no size', () => {
    const without = openImage(armImage([0, 0], [step(0)]), 'a.elf');
    expect(() => functionCode(without, 'step')).toThrow(/has 0 bytes; .*\.size/);
  });

  it('stands in a file of bytes without symbols', () => {
    const raw = openImage(new Uint8Array(8), 'a.bin', { baseAddress: 0 });
    expect(() => functionCode(raw, 'step')).toThrow(/“a.bin”, which has no symbol table; give the ELF file/);
  });

  it('is not linked yet', () => {
    const bytes = elfOf({ sections: [{ name: '.text', bytes: new Uint8Array(4) }], type: 1 });
    expect(() => functionCode(openImage(bytes, 'a.o'), 'step')).toThrow(/give the linked image/);
  });
});

const law = `
__attribute__((noinline)) float limited(float x) { return x > 1.0f ? 1.0f : x; }
#ifdef PADDING
__attribute__((section(".data.elsewhere"))) int unrelated_data[7] = {1, 2, 3};
__attribute__((noinline)) int unrelated(int x) { return x * unrelated_data[x & 3]; }
#endif
float other(float x);
static float state[4];
const volatile float gains[2] = {2.7f, GAIN};
float step(float x) { state[1] += gains[1] * x; return LAW(gains[0] * x + state[1]) * 0.5f; }
__attribute__((noinline)) float other(float x) { return x < 0 ? -x : x; }
#ifdef PADDING
int start(void) { return unrelated(3) + (int)step(1.0f); }
#else
int start(void) { return (int)step(1.0f); }
#endif
`;
const target = ['-mcpu=cortex-m4', '-mthumb', '-mfloat-abi=hard', '-mfpu=fpv4-sp-d16', '-std=c11'];
const compilers = {
  'arm-none-eabi-gcc': ['-ffreestanding'],
  'arm-none-eabi-gcc with addresses in halves': ['-mslow-flash-data', '-ffreestanding'],
  clang: ['--target=armv7em-none-eabihf', '-ffreestanding'],
};

describe.each(Object.entries(compilers))('%s', (title, flags) => {
  const compiler = title.split(' ')[0];
  const folder = mkdtempSync(join(tmpdir(), 'pawl-law-'));
  writeFileSync(join(folder, 'law.c'), law);

  async function build(name: string, ...more: string[]): Promise<string> {
    const object = join(folder, `${name}.o`);
    await run(compiler, ['-c', '-Os', ...flags, ...target, ...more, join(folder, 'law.c'), '-o', object]);
    const place = more.includes('-DPADDING') ? ['-Ttext=0x9000', '-Tdata=0x20000100'] : ['-Ttext=0x8000'];
    await run('arm-none-eabi-ld', ['-e', 'start', ...place, object, '-o', join(folder, name)]);
    return functionCode(imageOf(join(folder, name)), 'step').digest;
  }

  it.skipIf(leaveOut(compiler, 'arm-none-eabi-ld'))(
    'moves code and data, changes a gain, changes the law',
    async () => {
      const plain = await build('plain', '-DLAW=limited', '-DGAIN=0.3f');
      expect(await build('moved', '-DLAW=limited', '-DGAIN=0.3f', '-DPADDING')).toBe(plain);
      expect(await build('gain', '-DLAW=limited', '-DGAIN=0.4f')).toBe(plain);
      expect(await build('law', '-DLAW=other', '-DGAIN=0.3f')).not.toBe(plain);
      expect(await build('flags', '-DLAW=limited', '-DGAIN=0.3f', '-O0')).not.toBe(plain);
    },
  );
});
