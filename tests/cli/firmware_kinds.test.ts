import { readFileSync } from 'node:fs';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { intelHex, sRecords } from './flash_files.js';
import { Workplace } from './workplace.js';

/**
 * The flash of the demo image: its first segment, 0xb10 bytes from 0x1000 of the file on, at 0x08000000 on the target, as
 * `readelf --segments` says; `nm` says that azimuth_notch stands at 0x08000af0 and azimuth, with kp first, at 0x08000afc.
 */
const elf = readFileSync('specs/heliostat/firmware/azimuth.elf');
const flash = elf.subarray(0x1000, 0x1000 + 0xb10);
const kpOffset = 0xafc;
/** What azimuth_settings.c says; 2.7f is 0x402ccccd (IEEE 754-2019, binary32). */
const kpRow = /^kp +\S+ +2\.7 +\S+ +0x402ccccd/m;

/** The flash with another float32 in the place of kp, as if it had been changed after the build. */
function withKp(value: number): Uint8Array {
  const bytes = Uint8Array.from(flash);
  new DataView(bytes.buffer).setFloat32(kpOffset, value, true);
  return bytes;
}

const imageLine = 'image: firmware/azimuth.elf               # paths are relative to this file';
const buildLine =
  "  build: [make, -s, -C, firmware]           # optional; an argument list, run without a shell in this file's folder\n";

/** The demo spec without its build, with other lines in the place of its image, and other coefficients where they are given. */
function withOrigin(lines: string, coefficients: Record<string, string> = {}): (text: string) => string {
  return (text) => {
    const changed = Object.entries(coefficients).reduce(
      (spec, [name, what]) => spec.replace(new RegExp(`^    ${name}: .*$`, 'm'), `    ${name}: ${what}`),
      text.replace(buildLine, '').replace(imageLine, lines),
    );
    if (!changed.includes(lines)) throw new Error('the demo spec has changed; this test must follow it');
    return changed;
  };
}

let place: Workplace;
afterEach(() => place.remove());

/** Reads the spec as a user does; what it printed, or its complaint with status 2 and nothing on standard output. */
async function table(): Promise<string> {
  const { status, output, errors } = await place.here('read', place.spec);
  expect({ status, errors }).toEqual({ status: 0, errors: '' });
  return output;
}

async function complaint(): Promise<string> {
  const { status, output, errors } = await place.here('read', place.spec);
  expect({ status, output }).toEqual({ status: 2, output: '' });
  expect(errors).not.toMatch(/^ {4}at /m);
  expect(errors).not.toContain(place.folder);
  return errors;
}

/** Coefficients by address, for images that have no names. */
const byAddress = {
  kp: '{ address: 0x08000afc, format: float32 }',
  ki: '{ address: 0x08000b00, format: float32, unit: 1/s }',
  kd: '{ address: 0x08000b04, format: float32, unit: s }',
  rate_corner: '{ address: 0x08000b08, format: float32, unit: Hz }',
  period: '{ address: 0x08000b0c, format: uint32, unit: us }',
  notch: '{ address: 0x08000af0, count: 5, format: Q2.14 }',
};

describe('an image without names', () => {
  const files: [kind: string, lines: string, file: string, contents: string | Uint8Array][] = [
    ['Intel HEX', 'image: firmware/azimuth.hex', 'firmware/azimuth.hex', intelHex(flash)],
    ['S-records', 'image: firmware/azimuth.s37', 'firmware/azimuth.s37', sRecords(flash)],
    [
      'a raw binary',
      'image: firmware/azimuth.bin\n  base_address: 0x08000000',
      'firmware/azimuth.bin',
      flash,
    ],
  ];

  it.each(files)('gives the numbers at addresses: %s', async (_, lines, file, contents) => {
    place = new Workplace(withOrigin(lines, byAddress));
    place.write(file, contents);
    const output = await table();
    expect(output).toMatch(/^kp +0x8000afc +2\.7 +float32 +0x402ccccd +0x08000afc/m);
    expect(output).toMatch(/^period +0x8000b0c +2000 us +uint32 +0x000007d0/m);
    expect(output).toMatch(/^notch\[1\] +\S+ +-1\.72625732421875 +0x9185 +0x08000af2/m);
  });

  it.each(files)('gives the numbers by name with the ELF file: %s', async (_, lines, file, contents) => {
    place = new Workplace(withOrigin(`${lines}\n  symbols: firmware/azimuth.elf`));
    place.write(file, contents);
    const output = await table();
    expect(output).toMatch(
      /^kp +azimuth\.gains\.kp +2\.7 +float +0x402ccccd +0x08000afc +azimuth_settings\.c:\d+/m,
    );
    expect(output).toMatch(/^notch\[1\] +azimuth_notch\[1\] +-1\.72625732421875/m);
  });

  it('needs names or addresses: both cures are said, at the coefficient', async () => {
    place = new Workplace(withOrigin('image: firmware/azimuth.hex'));
    place.write('firmware/azimuth.hex', intelHex(flash));
    const [first, ...others] = (await complaint()).split('\n');
    expect(first).toBe(
      `${place.placeOf('azimuth.gains.kp')}: “firmware/azimuth.hex” has no names: give the ELF file of the same build as symbols, or address and format of “azimuth.gains.kp”`,
    );
    expect(others).toHaveLength(5);
  });

  it('has no bytes at an address outside it', async () => {
    place = new Workplace(
      withOrigin('image: firmware/azimuth.hex', {
        ...byAddress,
        kp: '{ address: 0x20000000, format: float32 }',
      }),
    );
    place.write('firmware/azimuth.hex', intelHex(flash));
    expect(await complaint()).toMatch(
      new RegExp(`^${place.placeOf('0x20000000')}: .*azimuth\\.hex.* has no 4 bytes at 0x20000000`),
    );
  });

  it('with a wrong checksum is refused, with the line', async () => {
    place = new Workplace(withOrigin('image: firmware/azimuth.hex', byAddress));
    place.write(
      'firmware/azimuth.hex',
      intelHex(flash).replace(/(.)\n:00000001FF/, (_, digit) => `${digit === '0' ? '1' : '0'}\n:00000001FF`),
    );
    expect(await complaint()).toMatch(
      new RegExp(
        `^${place.placeOf('firmware/azimuth.hex')}: .*azimuth\\.hex.* line 178: the checksum is wrong`,
      ),
    );
  });

  it('that is raw needs its base address', async () => {
    place = new Workplace(withOrigin('image: firmware/azimuth.bin', byAddress));
    place.write('firmware/azimuth.bin', flash);
    expect(await complaint()).toMatch(
      new RegExp(`^${place.placeOf('firmware/azimuth.bin')}: .*needs its base address`),
    );
  });

  it('has the byte order that is stated', async () => {
    const bigEndian = Uint8Array.from([0x40, 0x2c, 0xcc, 0xcd]);
    const only = '{ address: 0, format: float32 }';
    place = new Workplace(
      withOrigin('image: gain.bin\n  base_address: 0\n  byte_order: big', { ...byAddress, kp: only }),
    );
    place.write('gain.bin', bigEndian);
    const errors = await complaint();
    // The other five lie beyond these four bytes; kp is read.
    expect(errors.split('\n')).toHaveLength(5);
    expect(errors).not.toContain(place.placeOf(only));
  });
});

describe('a flashed file that differs from the ELF file of the same build', () => {
  beforeEach(() => {
    place = new Workplace(withOrigin('image: firmware/azimuth.hex\n  symbols: firmware/azimuth.elf'));
  });

  it('is an error at the coefficient which differs, and at no other', async () => {
    place.write('firmware/azimuth.hex', intelHex(withKp(3.5)));
    const errors = await complaint();
    expect(errors.split('\n')).toHaveLength(1);
    expect(errors).toMatch(
      new RegExp(
        `^${place.placeOf('azimuth.gains.kp')}: .*azimuth\\.gains\\.kp.*firmware/azimuth\\.(elf|hex)`,
      ),
    );
  });

  it('does not matter where no coefficient stands', async () => {
    const bytes = Uint8Array.from(flash);
    bytes[0x100] ^= 0xff;
    place.write('firmware/azimuth.hex', intelHex(bytes));
    expect(await table()).toMatch(kpRow);
  });

  it('is not compared with a file that is not there: the error is at its path', async () => {
    place.write('firmware/azimuth.hex', intelHex(flash));
    place.write(
      place.spec,
      place.read(place.spec).replace('symbols: firmware/azimuth.elf', 'symbols: firmware/lost.elf'),
    );
    expect(await complaint()).toBe(
      `${place.placeOf('firmware/lost.elf')}: image “firmware/lost.elf”: there is no such file; build it first, or correct the path`,
    );
  });
});

describe('keys that are for another kind of image are refused, not passed over', () => {
  // The image stands in line 5 of the spec, the key in line 6.
  const misfits: [image: string, key: string, error: string][] = [
    [
      'azimuth.elf',
      'base_address: 0x0',
      "17: `base_address` is for images without names, but 'firmware/azimuth.elf' is an ELF file; leave it out",
    ],
    [
      'azimuth.elf',
      'byte_order: big',
      "15: `byte_order` is for images without names, but 'firmware/azimuth.elf' is an ELF file; leave it out",
    ],
    [
      'azimuth.elf',
      'symbols: firmware/azimuth.elf',
      "12: `symbols` is for images without names, but 'firmware/azimuth.elf' is an ELF file; leave it out",
    ],
    [
      'azimuth.hex',
      'debug_file: firmware/azimuth.elf',
      "15: `debug_file` is for ELF files, but 'firmware/azimuth.hex' is none; give the ELF file of the same build as `symbols`",
    ],
  ];
  it.each(misfits)('%s with %s', async (image, key, error) => {
    place = new Workplace(withOrigin(`image: firmware/${image}\n  ${key}`));
    place.write('firmware/azimuth.hex', intelHex(flash));
    expect(await complaint()).toBe(`${place.spec}:6:${error}`);
  });

  it('but not where another image is named on the command line: it is read as what it is', async () => {
    place = new Workplace(withOrigin('image: firmware/azimuth.bin\n  base_address: 0x08000000'));
    const { status, output } = await place.pawl('read', place.spec, '--image', 'firmware/azimuth.elf');
    expect(status).toBe(0);
    expect(output).toMatch(kpRow);
  });
});
