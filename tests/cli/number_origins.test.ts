import { copyFileSync, mkdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { intelHex } from './flash_files.js';
import { Workplace } from './workplace.js';

/** A lag under a proportional law whose gain is read from the build: judged at once. The origin begins in line 4. */
function small(origin: string, k: string): string {
  return `pawl: 1
loop: A small axis
firmware:
${origin.replaceAll(/^/gm, '  ')}
  coefficients: { k: ${k} }
inputs: { target: {} }
plant:
  speed: { lag: 1 s, of: drive }
sensors: { seen: { of: speed } }
controllers:
  law: { every: 50 ms, signals: { output: { value: k * (target - seen) } } }
actuators: { drive: { of: output } }
scenarios:
  step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } }
requirements:
  - { name: R1, measure: largest_value, of: speed, in: step, at_most: 0.7 }
`;
}

let place: Workplace;
beforeEach(() => {
  place = new Workplace();
});
afterEach(() => place.remove());

async function table(origin: string, k: string): Promise<string> {
  place.write(place.spec, small(origin, k));
  const { status, output, errors } = await place.here('read', place.spec);
  expect({ status, errors }).toEqual({ status: 0, errors: '' });
  return output.split('\n').slice(1).join('\n');
}

/** What a spec that cannot be read complains of: one line, nothing on standard output, no folder of this machine. */
async function complaint(origin: string, k: string): Promise<string> {
  place.write(place.spec, small(origin, k));
  const { status, output, errors } = await place.here('read', place.spec);
  expect({ status, output }).toEqual({ status: 2, output: '' });
  expect(errors.split('\n')).toHaveLength(1);
  expect(errors).not.toContain(place.folder);
  return errors;
}

const elf = 'image: firmware/azimuth.elf';

describe('numbers of a C header', () => {
  const source =
    'source: { file: gains.h, include_paths: [firmware/include], defines: { BOARD: 2 }, compiler: cc }';
  beforeEach(() => {
    place.write(
      'gains.h',
      [
        '#include "board.h"',
        '#define KP (GAIN * 1.25f)',
        'static const float taps[] = { 0.5f, BOARD };',
        '',
      ].join('\n'),
    );
    mkdirSync(join(place.folder, 'firmware/include'));
    place.write(
      'firmware/include/board.h',
      '#if BOARD == 2\n#define GAIN 2\n#else\n#define GAIN 1\n#endif\n',
    );
  });

  // 2.5f is 0x40200000 and 2.0f is 0x40000000 (IEEE 754-2019, binary32).
  it('are what the compiler makes of them, with include paths and macros, and their line', async () => {
    expect(await table(source, 'KP')).toMatch(/^k +KP +2\.5 +float +0x40200000 +gains\.h:2$/m);
    const other = source.replace('BOARD: 2', 'BOARD: 3');
    expect(await table(other, 'KP')).toMatch(/^k +KP +1\.25 +float +0x3fa00000/m);
    expect(await table(source, '{ at: "taps[1]" }')).toMatch(
      /^k +taps\[1\] +2 +float +0x40000000 +gains\.h:3$/m,
    );
  });

  it('have a nearest name where one is wrong', async () => {
    const line = await complaint(source, 'KPP');
    expect(line).toMatch(new RegExp(`^${place.placeOf('KPP')}: “gains\\.h” has no “KPP”; nearest: .*“KP”`));
  });

  it('are missed at the place of the file, and of what it includes', async () => {
    expect(await complaint(source.replace('gains.h', 'lost.h'), 'KP')).toBe(
      `${place.spec}:4:19: there is no source 'lost.h' that could be read`,
    );
    const without = source.replace('include_paths: [firmware/include], ', '');
    expect(await complaint(without, 'KP')).toMatch(
      /^axis\.pawl\.yaml:4:19: .*cc -E.*gains\.h:1:10: .*board\.h/,
    );
  });

  it('may come from another file named on the command line', async () => {
    place.write(place.spec, small(source, 'KP'));
    place.write('other.h', '#define KP 7.0f\n');
    const { output } = await place.here('read', place.spec, '--image', 'other.h');
    expect(output).toMatch(/^k +KP +7 +float +0x40e00000 +other\.h:1$/m);
  });
});

describe('numbers that a command prints', () => {
  const command = 'command: [node, print-gains.mjs, "2"]';
  const printing = (expression: string) =>
    place.write('print-gains.mjs', `const n = Number(process.argv[2]);\nconsole.log(${expression});\n`);

  it('are read from its JSON, with the format that the target stores them in', async () => {
    printing('JSON.stringify({ gains: { kp: 1.25 * n, taps: [0.5, 0.1] } })');
    expect(await table(command, 'gains.kp')).toMatch(/^k +gains\.kp +2\.5 +number +0x4004000000000000/m);
    // 0.1f is 0x3dcccccd (IEEE 754-2019, binary32).
    expect(await table(command, '{ at: "gains.taps[1]", format: float32 }')).toMatch(
      /^k +gains\.taps\[1\] +0\.1 +number as float32 +0x3dcccccd/m,
    );
  });

  it('are an error of the command where it fails, or prints something else', async () => {
    printing('"kp is 1.25"');
    expect(await complaint(command, 'kp')).toMatch(
      /^axis\.pawl\.yaml:4:3: the output of “node print-gains\.mjs 2” is not JSON/,
    );
    printing('process.exit(3)');
    expect(await complaint(command, 'kp')).toMatch(
      /^axis\.pawl\.yaml:4:3: .*print-gains\.mjs.* ended with status 3/,
    );
  });

  it('are no numbers that an image could stand for', async () => {
    printing('JSON.stringify({ kp: 1 })');
    place.write(place.spec, small(command, 'kp'));
    const { status, errors } = await place.pawl('read', place.spec, '--image', 'firmware/azimuth.elf');
    expect(status).toBe(2);
    expect(errors).toBe('axis.pawl.yaml: has its numbers from a command, so --image means nothing');
  });

  it('are judged as any others, and the command is in the report', async () => {
    printing('JSON.stringify({ kp: n })');
    place.write(place.spec, small(command, 'kp'));
    const met = await place.pawl('check', place.spec, '--out', 'out');
    expect(met).toMatchObject({ status: 0, errors: '' });
    expect(met.output).toContain('output of node print-gains.mjs 2 (SHA-256 ');
    const { provenance, coefficients } = JSON.parse(place.read('out/run.json')).specs[0];
    expect(provenance).toMatchObject({ kind: 'command', image: 'node print-gains.mjs 2', build: null });
    expect(coefficients[0]).toMatchObject({ value: 2, declared_at: null });
    // The largest value tends to k/(k + 1): 2/3 is met and 5/6 is not.
    place.write(place.spec, small(command.replace('"2"', '"5"'), 'kp'));
    expect(await place.here('check', place.spec)).toMatchObject({ status: 1 });
  });
});

describe('a coefficient with a scale and an offset', () => {
  // azimuth_notch[0] is 14903 (azimuth_settings.c).
  it('has the value stored × scale + offset, says so, and shows the stored bits as they are', async () => {
    expect(await table(elf, '{ at: "azimuth_notch[0]", scale: 0.01, offset: -40 }')).toMatch(
      /^k +azimuth_notch\[0\] +109\.03 +int16_t, scaled +0x3a37/m,
    );
    expect(await table(elf, '{ at: "azimuth_notch[0]", scale: 1/256 }')).toMatch(
      / 58\.2148438 +int16_t, scaled +0x3a37/,
    );
  });

  it('is judged with that value', async () => {
    place.write(place.spec, small(elf, '{ at: azimuth.gains.kp, scale: 2, offset: 3.4 }'));
    const { output } = await place.here('check', place.spec, '--out', 'out');
    // k is 2·2.7 + 3.4 = 8.8, so the largest value is near 8.8/9.8, above the 0.7 of the limit.
    expect(output).toMatch(/broken +R1/);
    const [{ coefficients, requirements }] = JSON.parse(place.read('out/run.json')).specs;
    expect(coefficients[0].value).toBeCloseTo(8.8, 6);
    expect(requirements[0].nominal).toBeCloseTo(8.8 / 9.8, 2);
  });

  it('has one entry for each element, or none', async () => {
    const line = await complaint(elf, '{ at: azimuth_notch, scale: [1, 2] }');
    expect(line).toBe(
      `${place.placeOf('azimuth_notch')}: “azimuth_notch” has 5 elements, but 2 numbers in scale: give one, or as many`,
    );
  });
});

describe('memory that is cleared at start-up', () => {
  it('is read as 0 where the spec says that it starts so', async () => {
    expect(await table(elf, '{ at: azimuth_duty, starts_at_zero: true }')).toMatch(
      /^k +azimuth_duty +0 +(volatile )?float +0x00000000 +0x20000020/m,
    );
  });

  it('is an error elsewhere, with that cure', async () => {
    for (const k of ['azimuth_duty', '{ at: azimuth_duty, starts_at_zero: false }']) {
      const line = await complaint(elf, k);
      expect(line).toMatch(
        new RegExp(`^${place.placeOf('azimuth_duty')}: .*no value.*starts_at_zero: true$`),
      );
    }
  });
});

describe('debug information in a file of its own', () => {
  it('is found where the spec says it is; that of another build is refused', async () => {
    copyFileSync('specs/heliostat/firmware/azimuth.elf', join(place.folder, 'names.debug'));
    expect(await table(`${elf}\ndebug_file: names.debug`, 'azimuth.gains.kp')).toMatch(
      / 2\.7 +float +0x402ccccd/,
    );
    const line = await complaint(`${elf}\ndebug_file: firmware/azimuth-regressed.elf`, 'azimuth.gains.kp');
    expect(line).toMatch(
      /^axis\.pawl\.yaml:4:10: the debug file “firmware\/azimuth-regressed\.elf” .* does not belong/,
    );
  });
});

describe('several builds', () => {
  it('each have their numbers from elsewhere', async () => {
    place.write(
      'gains.h',
      '#define KP 5.0f\nconst struct { struct { float kp; } gains; } azimuth = { { 5.0f } };\n',
    );
    const builds =
      'builds:\n  shipped: firmware/azimuth.elf\n  next: { source: { file: gains.h } }\n  board: { image: a.hex, symbols: firmware/azimuth.elf }\n';
    const flash = readFileSync('specs/heliostat/firmware/azimuth.elf').subarray(0x1000, 0x1b10);
    place.write('a.hex', intelHex(flash));
    place.write(
      place.spec,
      small('# none', 'azimuth.gains.kp').replace('inputs:', `${builds}inputs:`).replace('0.7 }', '0.75 }'),
    );
    const { status, output } = await place.here('check', place.spec, '--out', 'out');
    expect(status).toBe(1);
    const { specs } = JSON.parse(place.read('out/run.json'));
    const told = specs.map(
      (one: { build: string; provenance: { kind: string }; requirements: { verdict: string }[] }) => [
        one.build,
        one.provenance.kind,
        one.requirements[0].verdict,
      ],
    );
    // k/(k + 1) is 0.73 for 2.7 and 0.83 for 5.
    expect(told, output).toEqual([
      ['shipped', 'elf', 'met'],
      ['next', 'source', 'broken'],
      ['board', 'intel_hex', 'met'],
    ]);
  });
});

describe('a number that is hardly meant', () => {
  it('is pointed out by pawl read, and warned of by pawl check', async () => {
    place.write('blank.bin', new Uint8Array(8).fill(0xff));
    const origin = 'image: blank.bin\nbase_address: 0x1000';
    const k = '{ address: 0x1004, format: int32 }';
    expect(await table(origin, k)).toMatch(/^k +0x1004 +-1 \(erased\) +int32 +0xffffffff/m);
    const { output } = await place.here('check', place.spec);
    expect(output).toContain('warning: k is the pattern of erased flash, all ones (stored 0xffffffff)');
  });

  it('never lets a merge through where it is no number', async () => {
    place.write('gains.bin', Uint8Array.from([0, 0, 0xc0, 0x7f]));
    place.write(place.spec, small('image: gains.bin\nbase_address: 0', '{ address: 0, format: float32 }'));
    const { status, output } = await place.here('check', place.spec);
    expect(status).not.toBe(0);
    expect(output).toContain('warning: k is not a number (stored 0x7fc00000)');
  });
});
