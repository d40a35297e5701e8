import { beforeAll, describe, expect, test } from 'vitest';
import * as library from '../../src/firmware/index.js';
import { mutated, seeded, tryImage, tryImageInTime } from './mutation.mjs';
import { askedPaths, soundImages } from './mutation_images.mjs';
import { freshFolder, leaveOut } from './toolchain.js';

/** A damaged image gives a value or a clear error, soon: the short form of what CI does with 100,000 of them. */
describe.skipIf(leaveOut('arm-none-eabi-gcc', 'arm-none-eabi-g++', 'clang'))('damaged images', () => {
  let images: [string, Uint8Array][];

  beforeAll(() => {
    images = [...soundImages(freshFolder())];
  });

  test('the sound images give values', () => {
    for (const [name, bytes] of images) {
      expect(tryImage(library, bytes, askedPaths, 'int8').values, name).toBeGreaterThan(1);
    }
  });

  test('1,500 damaged ones give a value or a FirmwareError, none takes a second', () => {
    for (let seed = 1; seed <= 1500; seed++) {
      const [name, bytes] = images[seed % images.length];
      const { values, errors, seconds } = tryImageInTime(
        library,
        mutated(bytes, seed),
        askedPaths,
        'int8',
        1,
      );
      expect(values + errors, `${name}, seed ${seed}`).toBeGreaterThan(0);
      expect(seconds, `${name}, seed ${seed}`).toBeLessThan(1);
    }
  });

  test('the same seed makes the same damage', () => {
    const [[, bytes]] = images;
    expect(mutated(bytes, 77)).toEqual(mutated(bytes, 77));
    expect(mutated(bytes, 77)).not.toEqual(bytes);
    expect(Array.from({ length: 4 }, () => seeded(5)(1000))).toEqual(Array(4).fill(seeded(5)(1000)));
  });
});
