/** A reproducible stream of numbers: the 32-bit generator `mulberry32` (Tommy Ettinger, 2017; common practice). */
export function seeded(seed) {
  let state = seed >>> 0;
  return (below) => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) % below;
  };
}

const telling = [0, 1, 0x7f, 0x80, 0xff, 0xfe, 0x3a, 0x53];

/** A damaged copy of an image: bytes changed, moved, cut off, or made telling; the same for the same seed. */
export function mutated(image, seed) {
  const random = seeded(seed);
  let bytes = Uint8Array.from(image);
  for (let left = 1 + random(6); left > 0; left--) {
    const at = random(bytes.length);
    switch (random(8)) {
      case 0:
        bytes[at] ^= 1 << random(8);
        break;
      case 1:
      case 2:
        bytes[at] = telling[random(telling.length)];
        break;
      case 3:
        bytes[at] = random(256);
        break;
      case 4:
        bytes.fill(telling[random(telling.length)], at, at + 1 + random(8));
        break;
      case 5:
        bytes.copyWithin(random(bytes.length), at, at + 1 + random(64));
        break;
      case 6:
        // The tables at the beginning and the end matter most.
        bytes[random(Math.min(bytes.length, 128))] = random(256);
        break;
      default:
        if (random(4) === 0 && bytes.length > 64)
          bytes = bytes.slice(0, bytes.length - random(bytes.length >> 1));
        else bytes[bytes.length - 1 - random(Math.min(bytes.length, 2048))] = random(256);
    }
  }
  return bytes;
}

/**
 * Reads everything that can be asked for out of a damaged image; counts the values and errors.
 * @param library the firmware reader's exports: the source under vitest, the build in the long run
 * @throws anything but a FirmwareError with a message: that would be a fault of the reader
 */
export function tryImage(library, bytes, paths, format) {
  const { candidates, describeImage, FirmwareError, openImage, readCoefficient } = library;
  const started = performance.now();
  const outcome = { values: 0, errors: 0, seconds: 0 };
  const attempt = (work) => {
    try {
      work();
      outcome.values++;
    } catch (error) {
      if (!(error instanceof FirmwareError) || error.message === '') throw error;
      outcome.errors++;
    }
  };
  attempt(() => {
    const image = openImage(bytes, 'mutant');
    for (const at of paths) attempt(() => readCoefficient(image, { name: at, at }));
    attempt(() => readCoefficient(image, { name: 'raw', at: 'azimuth_notch', format: 'Q2.14' }));
    attempt(() => readCoefficient(image, { name: 'there', at: 'there', address: 0x8100, format }));
    attempt(() => describeImage(image));
    if (bytes[bytes.length - 1] % 16 === 0) attempt(() => candidates(image));
  });
  outcome.seconds = (performance.now() - started) / 1000;
  return outcome;
}

/** The same, tried once more where it took long: other work on the machine is no fault of the reader. */
export function tryImageInTime(library, bytes, paths, format, seconds) {
  const outcome = tryImage(library, bytes, paths, format);
  return outcome.seconds <= seconds ? outcome : tryImage(library, bytes, paths, format);
}
