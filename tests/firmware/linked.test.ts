import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import {
  describeImage,
  type FirmwareError,
  type FirmwareImage,
  openImage,
  openImageFile,
  readCoefficient,
  readCoefficients,
} from '../../src/firmware/index.js';
import { freshFolder, leaveOut, run } from './toolchain.js';

/**
 * What linkers and strippers do to values, on images of fixtures/first.c and second.c: an exact value, or an error that says what
 * happened and how to cure it; never a plausible zero.
 */
const arm = ['-mcpu=cortex-m4', '-mthumb', '-ffreestanding', '-nostdlib', '-Os'];
const script = ['-Wl,-T,flash.ld'];
const sections = ['-ffunction-sections', '-fdata-sections', '-Wl,--gc-sections'];

function errorOf(image: FirmwareImage, at: string, format?: string): FirmwareError {
  const { errors } = readCoefficients(image, [{ name: 'gain', at, format }]);
  expect(errors, at).toHaveLength(1);
  expect(errors[0].requestName).toBe('gain');
  expect(errors[0].message).not.toContain('\n');
  return errors[0];
}

function read(image: FirmwareImage, at: string, format?: string): number {
  return readCoefficient(image, { name: 'gain', at, format }).elements[0].value;
}

describe.skipIf(
  leaveOut(
    'arm-none-eabi-gcc',
    'arm-none-eabi-g++',
    'arm-none-eabi-objcopy',
    'clang',
    'ld.lld',
    'arm-none-eabi-readelf',
  ),
)('linked images', () => {
  const folder = freshFolder();
  const path = (name: string) => join(folder, name);
  const open = (name: string) => openImage(readFileSync(path(name)), name);
  let whole: FirmwareImage;
  let collected: FirmwareImage;

  beforeAll(async () => {
    const build = (name: string, ...flags: string[]) =>
      run('arm-none-eabi-gcc', [...arm, ...flags, '-o', path(name), 'first.c', 'second.c']);
    await build('whole.elf', '-g', ...script, '-Wl,--build-id');
    await build('collected.elf', '-g', ...script, ...sections);
    await build('bare.elf', '-g0', ...script);
    await run('arm-none-eabi-objcopy', ['--strip-all', path('whole.elf'), path('stripped.elf')]);
    await run('arm-none-eabi-objcopy', ['--only-keep-debug', path('whole.elf'), path('split.debug')]);
    await run('arm-none-eabi-objcopy', ['--strip-all', path('whole.elf'), path('plain.elf')]);
    await run(
      'arm-none-eabi-objcopy',
      ['--strip-all', '--add-gnu-debuglink=split.debug', path('whole.elf'), path('split.elf')],
      folder,
    );
    await run('clang', [
      '--target=armv7em-none-eabi',
      '-ffreestanding',
      '-Os',
      '-g',
      '-fdata-sections',
      '-c',
      '-o',
      path('first.o'),
      'first.c',
    ]);
    await run('clang', [
      '--target=armv7em-none-eabi',
      '-ffreestanding',
      '-Os',
      '-g',
      '-fdata-sections',
      '-c',
      '-o',
      path('second.o'),
      'second.c',
    ]);
    await run('ld.lld', [
      '--gc-sections',
      '-e',
      '_start',
      '-o',
      path('lld.elf'),
      path('first.o'),
      path('second.o'),
    ]);
    whole = open('whole.elf');
    collected = open('collected.elf');
  });

  describe('names', () => {
    test('one that two files share is refused with both places named, and told apart by the file', () => {
      const error = errorOf(whole, 'limit');
      expect(error.code).toBe('ambiguous_name');
      expect(error.message).toMatch(
        /“first\.c:limit” \(first\.c:4\) or “second\.c:limit” \(second\.c:4\): write one of these/,
      );
      expect(read(whole, 'first.c:limit')).toBe(2.5);
      expect(read(whole, 'second.c:limit')).toBe(-3.5);
    });

    test('the same without debug information, by the file symbols', () => {
      const bare = open('bare.elf');
      expect(errorOf(bare, 'limit', 'float32').message).toMatch(
        /“first\.c:limit” \(0x[0-9a-f]+\) or “second\.c:limit”/,
      );
      expect(read(bare, 'second.c:limit', 'float32')).toBe(-3.5);
    });

    test('copies of a constant from a header are one as long as they agree', () => {
      expect(read(whole, 'SHARED_GAIN')).toBe(0.75);
      expect(readCoefficient(whole, { name: 'g', at: 'SHARED_GAIN' }).declaredAt).toEqual({
        file: 'shared.h',
        line: 5,
      });
    });

    test('copies which differ are an error', async () => {
      await run('arm-none-eabi-gcc', [
        ...arm,
        '-g',
        '-DDIFFERENT=2.0f',
        '-c',
        '-o',
        path('other.o'),
        'second.c',
      ]);
      await run('arm-none-eabi-gcc', [...arm, '-g', '-O0', '-c', '-o', path('same.o'), 'first.c']);
      await run('arm-none-eabi-gcc', [
        ...arm,
        ...script,
        '-o',
        path('copies.elf'),
        path('same.o'),
        path('other.o'),
      ]);
      const error = errorOf(open('copies.elf'), 'SHARED_OTHER');
      expect(error.code).toBe('sources_disagree');
      expect(error.message).toMatch(/stands in “copies\.elf” 2 times with different values/);
      expect(read(open('copies.elf'), 'second.c:SHARED_OTHER')).toBe(2);
    });

    test('one that is only declared gets its value where it is defined', () => {
      expect(read(whole, 'defined_elsewhere')).toBe(8.25);
    });

    test('a struct that one file only declares is completed from the other', () => {
      expect(read(whole, 'opaque.inner')).toBe(0.125);
    });

    test('a wrong one gets the nearest offered', () => {
      expect(errorOf(whole, 'kept_gian').message).toMatch(
        /has no variable “kept_gian”; nearest: “kept_gain”/,
      );
      expect(errorOf(whole, 'opaque.iner').message).toMatch(/has no member “iner”; nearest: inner/);
      expect(errorOf(whole, 'third.c:limit').message).toMatch(/has no variable “limit” of “third\.c”/);
    });
  });

  describe('what the linker dropped', () => {
    test('is said to be dropped, although flash begins at address 0', () => {
      expect(read(collected, 'in_fast_ram')).toBe(0.5);
      expect(readCoefficient(collected, { name: 'g', at: 'in_fast_ram' }).elements[0].address).toBe(0);
      const error = errorOf(collected, 'dropped_gain');
      expect(error.code).toBe('garbage_collected');
      expect(error.message).toMatch(
        /declared in first\.c:6, is not in “collected\.elf”: the linker dropped it.*--gc-sections.*KEEP/,
      );
      expect(read(whole, 'dropped_gain')).toBe(7);
    });

    test('also where another linker marks it differently', () => {
      const lld = open('lld.elf');
      expect(read(lld, 'kept_gain')).toBe(1.5);
      expect(errorOf(lld, 'dropped_gain').code).toBe('garbage_collected');
    });

    test('what the compiler removed is no zero either: its value is in the debug information, or an error', () => {
      expect(readCoefficient(whole, { name: 'g', at: 'unused_local' }).elements).toMatchObject([
        { value: 9, address: undefined },
      ]);
      expect(['garbage_collected', 'no_such_symbol']).toContain(errorOf(whole, 'nowhere').code);
    });
  });

  describe('memory', () => {
    test('initialised RAM has the value of the file, at the address of the running program', () => {
      const [element] = readCoefficient(whole, { name: 'g', at: 'started' }).elements;
      expect(element.value).toBe(4.5);
      expect(element.address).toBeGreaterThanOrEqual(0x20000000);
    });

    test('cleared memory has none, unless the spec says that it stays zero', () => {
      expect(errorOf(whole, 'cleared').code).toBe('no_contents');
      expect(readCoefficient(whole, { name: 'g', at: 'cleared', startsAtZero: true }).elements[0].value).toBe(
        0,
      );
    });

    test('a thread-local variable has no one value', () => {
      expect(['no_fixed_place', 'garbage_collected', 'no_such_symbol']).toContain(
        errorOf(whole, 'per_thread').code,
      );
    });

    test('a null pointer is not followed', () => {
      expect(errorOf(whole, 'opaque_pointer->inner').code).toBe('no_contents');
    });

    test('what is no number says what to do', () => {
      expect(errorOf(whole, 'opaque').message).toMatch(
        /struct hidden: name one of its members, as in opaque\.inner/,
      );
      expect(errorOf(whole, 'opaque_pointer').message).toMatch(/a pointer is no coefficient/);
      expect(errorOf(whole, 'kept_gain.x').message).toMatch(/is of type float and has no member “x”/);
      expect(errorOf(whole, 'kept_gain[0]').code).toBe('index_out_of_range');
      expect(errorOf(whole, 'kept_gain[0]').message).toMatch(/not an array: leave out \[0\]/);
      expect(errorOf(whole, 'kept_gain->x').message).toMatch(/is no pointer: write kept_gain\.x/);
    });

    test('a format must fit what is stored', () => {
      expect(errorOf(whole, 'kept_gain', 'Q2.14').message).toMatch(
        /is float: format Q2\.14 cannot be meant for a float; leave it out/,
      );
      expect(errorOf(whole, 'kept_gain', 'float64').code).toBe('format_mismatch');
      expect(errorOf(whole, 'kept_gain', 'float64').message).toMatch(
        /64 bits wide, stored are 32; nearest is float32/,
      );
      expect(readCoefficient(whole, { name: 'g', at: 'kept_gain', format: 'float32' }).type).toBe(
        'float as float32',
      );
    });
  });

  describe('images without debug information', () => {
    test('a plain symbol with a format is read, with its size as the length', () => {
      const bare = open('bare.elf');
      expect(read(bare, 'kept_gain', 'float32')).toBe(1.5);
      expect(errorOf(bare, 'kept_gain').message).toMatch(
        /the type of “kept_gain” is not known.*build with -g, or give a format such as float32/,
      );
      expect(errorOf(bare, 'opaque.inner', 'float32').code).toBe('no_debug_information');
      expect(errorOf(bare, 'kept_gain', 'int64').message).toMatch(
        /4 bytes long, which is no multiple of the 8 bytes of int64/,
      );
      expect(readCoefficient(bare, { name: 'g', at: 'kept_gain', format: 'Q2.14' }).shape).toEqual([2]);
    });

    test('a stripped one says that it is stripped', () => {
      expect(errorOf(open('stripped.elf'), 'kept_gain').message).toMatch(
        /neither symbols nor debug information; build with -g and do not strip/,
      );
    });
  });

  describe('split debug information', () => {
    test('is found by its debug link beside the image', async () => {
      const image = await openImageFile(path('split.elf'));
      expect(read(image, 'kept_gain')).toBe(1.5);
      expect(read(image, 'first.c:limit')).toBe(2.5);
      expect(readCoefficient(image, { name: 'g', at: 'kept_gain' }).declaredAt).toEqual({
        file: 'first.c',
        line: 5,
      });
    });

    test('is found by the build id', async () => {
      const id = describeImage(whole).buildId!;
      const debugFolder = freshFolder();
      const { mkdirSync } = await import('node:fs');
      mkdirSync(join(debugFolder, '.build-id', id.slice(0, 2)), { recursive: true });
      writeFileSync(
        join(debugFolder, '.build-id', id.slice(0, 2), `${id.slice(2)}.debug`),
        readFileSync(path('split.debug')),
      );
      const image = await openImageFile(path('plain.elf'), { debugFolders: [debugFolder] });
      expect(read(image, 'opaque.inner')).toBe(0.125);
    });

    test('is taken where it is given, and must be of the same build', async () => {
      const image = await openImageFile(path('plain.elf'), { debugFile: path('split.debug') });
      expect(read(image, 'started')).toBe(4.5);
      await run('arm-none-eabi-gcc', [
        ...arm,
        '-g',
        '-O0',
        ...script,
        '-Wl,--build-id',
        '-o',
        path('other.elf'),
        'first.c',
        'second.c',
      ]);
      await expect(openImageFile(path('plain.elf'), { debugFile: path('other.elf') })).rejects.toThrow(
        /does not belong to/,
      );
    });

    test('a file of this name from another build is refused by its checksum', async () => {
      const alien = freshFolder();
      writeFileSync(join(alien, 'split.elf'), readFileSync(path('split.elf')));
      writeFileSync(
        join(alien, 'split.debug'),
        Buffer.concat([readFileSync(path('split.debug')), Buffer.from([0])]),
      );
      await expect(openImageFile(join(alien, 'split.elf'))).rejects.toThrow(
        /its CRC-32 differs; rebuild both/,
      );
    });

    test('where it is missing, its name is told', async () => {
      const lonely = freshFolder();
      writeFileSync(join(lonely, 'split.elf'), readFileSync(path('split.elf')));
      const image = await openImageFile(join(lonely, 'split.elf'), { name: 'split.elf' });
      expect(errorOf(image, 'kept_gain').message).toMatch(
        /was split off into “split\.debug”, which was not found; put that beside the image/,
      );
    });

    test('information kept in .dwo files is refused with the cure', async () => {
      await run('clang', [
        '--target=x86_64-none-elf',
        '-ffreestanding',
        '-g',
        '-gsplit-dwarf',
        '-c',
        '-o',
        path('dwo.o'),
        'second.c',
      ]);
      expect(errorOf(open('dwo.o'), 'missing_gain').message).toMatch(
        /kept in \.dwo files; build without -gsplit-dwarf/,
      );
    });
  });

  describe('what the image is', () => {
    test('agrees with readelf and sha256sum', async () => {
      const description = describeImage(whole);
      const notes = await run('arm-none-eabi-readelf', ['--notes', path('whole.elf')]);
      expect(notes).toContain(`Build ID: ${description.buildId}`);
      expect(await run('sha256sum', [path('whole.elf')])).toContain(description.sha256);
      expect(description).toMatchObject({
        kind: 'elf',
        machine: 'Arm',
        bits: 32,
        byteOrder: 'little',
        name: 'whole.elf',
      });
      expect(description.producers).toEqual([expect.stringMatching(/^GNU C\d+ .* -mcpu=cortex-m4/)]);
    });

    test('without debug information the compiler is known from its comment', () => {
      expect(describeImage(open('bare.elf')).producers[0]).toMatch(/^GCC: /);
    });
  });

  test('all errors come at once, and the values that can be read with them', () => {
    const { coefficients, errors } = readCoefficients(whole, [
      { name: 'a', at: 'kept_gain' },
      { name: 'b', at: 'limit' },
      { name: 'c', at: 'cleared' },
      { name: 'd', at: 'started' },
      { name: 'e', at: 'a..b' },
    ]);
    expect([...coefficients.keys()]).toEqual(['a', 'd']);
    expect(errors.map((error) => [error.requestName, error.code])).toEqual([
      ['b', 'ambiguous_name'],
      ['c', 'no_contents'],
      ['e', 'bad_request'],
    ]);
  });

  test('debug information of another build than the symbols is an error', () => {
    const bytes = Buffer.from(readFileSync(path('whole.elf')));
    const image = openImage(bytes, 'patched.elf');
    // Move the symbol of a global variable, as a stale object file would.
    const place = readCoefficient(image, { name: 'g', at: 'kept_gain' }).elements[0].address!;
    const row = findSymbolRow(bytes, place, 4);
    bytes.writeUInt32LE(place + 4, row + 4);
    const error = errorOf(openImage(bytes, 'patched.elf'), 'kept_gain');
    expect(error.code).toBe('sources_disagree');
    expect(error.message).toMatch(
      /places it at 0x[0-9a-f]+, the symbol table at 0x[0-9a-f]+; rebuild from clean/,
    );
    bytes.writeUInt32LE(place, row + 4);
    bytes.writeUInt32LE(2, row + 8);
    expect(errorOf(openImage(bytes, 'patched.elf'), 'kept_gain').message).toMatch(
      /its type has 4 bytes.*its symbol 2/,
    );
  });
});

/** The row of a 32-bit symbol table with this address and size. */
function findSymbolRow(bytes: Buffer, address: number, size: number): number {
  const sought = Buffer.alloc(8);
  sought.writeUInt32LE(address, 0);
  sought.writeUInt32LE(size, 4);
  const at = bytes.lastIndexOf(sought);
  expect(at).toBeGreaterThan(0);
  return at - 4;
}
