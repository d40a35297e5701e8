import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, test } from 'vitest';
import { FirmwareError, type FirmwareImage, openImage, readCoefficient } from '../../src/firmware/index.js';
import { askDebugger } from './debugger.js';
import { type Build, builds, makeImage } from './matrix_builds.js';
import { freshFolder, inPairs, leaveOut } from './toolchain.js';

/**
 * Each value read out of each image equals what gdb-multiarch reads from it, to the bit (a float64 in 17 digits is exact), and
 * what the source says. The literals are those of fixtures/gains.c and fixtures/filters.cpp.
 */
const f = Math.fround;
const inC: [path: string, literal: number][] = [
  ['azimuth.gains.kp', 1.25],
  ['azimuth.gains.ki', f(0.4)],
  ['azimuth.gains.kd', -0.0625],
  ['azimuth.gains.corner', 12.5],
  ['azimuth.period_us', 1000],
  ['azimuth.trim.raw', 0x3f99999a],
  ['azimuth.trim.real', f(1.2)],
  ['azimuth.low', -700],
  ['azimuth.high', 701],
  ['azimuth.mode', 5],
  ['azimuth.bias', -3],
  ['azimuth.wide', 0xabcde],
  ['azimuth.drive', -2],
  ['azimuth.small[2]', 255],
  ['azimuth_notch[0]', 16384],
  ['azimuth_notch[1]', -29491],
  ['azimuth_notch[4]', 13107],
  ['grid[0][2]', f(0.3)],
  ['grid[1][0]', f(-1e-40)],
  ['grid[1][1]', f(3.4028235e38)],
  ['grid[1][2]', -0],
  ['channels[1].id', 2],
  ['channels[1].slope', -0.25],
  ['channels[2].slope', f(1e-7)],
  ['channels[2].zero', -32768],
  ['flexible.count', 3],
  ['flexible.taps[1]', -22],
  ['ratio', 0.1],
  ['far_away', -9007199254740991],
  ['wide_count', 1234567890123],
  ['signs[3]', -128],
  ['enabled', 1],
  ['ram_gain', 3.5],
  ['ram_table[1][0]', 3],
  ['calibrated', 2.6875],
  ['active_blend[1]', 0.25],
  ['active_gains->ki', f(0.4)],
  ['update::taps[1]', -0.125],
];
const inCpp: [path: string, literal: number, asked?: string][] = [
  ['drive::Limits::slope', 0.875, "*(float *)&'drive::Limits::slope'"],
  ['drive::limits.rate', 2.5, "'drive::limits'.rate"],
  ['drive::limits.low', -20, "'drive::limits'.low"],
  ['drive::limits.high', 20, "'drive::limits'.high"],
  ['drive::revision', 42, "'drive::version2::revision'"],
  ['drive::version2::revision', 42, "'drive::version2::revision'"],
  ['drive::hidden[1]', f(-0.6), "'drive::(anonymous namespace)::hidden'[1]"],
  ['Filter<float, 3>::taps[2]', 3, "'Filter<float, 3>::taps'[2]"],
  ['shape', 7],
  ['gain_reference', 6.25],
];

function valueOrCode(image: FirmwareImage, at: string): number | string {
  try {
    return readCoefficient(image, { name: at, at }).elements[0].value;
  } catch (error) {
    if (error instanceof FirmwareError) return error.code;
    throw error;
  }
}

/** Whether the build stops before the linker. */
function isUnlinked(build: Build): boolean {
  return build.commands.length === 1 && build.commands[0].includes('-c');
}

/** Variables of gains.c as gdb writes their declaration, for the lines. */
const declarations: [path: string, written: RegExp][] = [
  ['azimuth.period_us', /^const struct axis azimuth;$/],
  ['azimuth_notch[0]', /^static const int16_t azimuth_notch\[5\];$/],
  ['grid[0][2]', /^const volatile float grid\[2\]\[3\];$/],
  ['ratio', /^const double ratio;$/],
  ['enabled', /^_Bool enabled;$/],
  ['ram_table[1][0]', /^int16_t ram_table\[2\]\[2\];$/],
];

interface Compared {
  lines: Map<string, number>;
  declared: Map<string, number | undefined>;
  /** Values of constants that the optimiser may have left no place for; a text is the code of an error. */
  folded: (number | string)[];
  read: Map<string, number>;
  asked: Map<string, number | 'none'>;
}

describe.skipIf(leaveOut('arm-none-eabi-gcc', 'arm-none-eabi-g++', 'clang', 'ld.lld', 'gdb-multiarch'))(
  'compiler matrix',
  () => {
    const compared = new Map<Build, Compared>();

    beforeAll(async () => {
      const folder = freshFolder();
      await inPairs([...builds.entries()], async ([index, build]) => {
        const path = await makeImage(build, folder, index);
        const image = openImage(readFileSync(path), build.name);
        const rows = build.source === 'gains.c' ? inC : inCpp;
        const read = new Map(
          rows.map(([at]) => [at, readCoefficient(image, { name: at, at }).elements[0].value]),
        );
        const { values, lines } = await askDebugger(
          path,
          rows.map(([at, , asked]) => asked ?? at),
        );
        compared.set(build, {
          read,
          asked: new Map(rows.map(([at, , asked]) => [at, values.get(asked ?? at) ?? 'none'])),
          lines,
          declared: new Map(
            rows.map(([at]) => [at, readCoefficient(image, { name: at, at }).declaredAt?.line]),
          ),
          folded:
            build.source === 'gains.c' ? ['folded', 'folded_count'].map((at) => valueOrCode(image, at)) : [],
        });
      });
    });

    test('a constant that is left in no memory gives its value or says that it has none', () => {
      const outcomes = [...compared.values()].flatMap(({ folded }) => folded);
      const read = outcomes.filter((outcome) => typeof outcome === 'number');
      expect([...new Set(read)].sort()).toEqual([-12, 0.375]);
      expect(read.length).toBeGreaterThan(outcomes.length / 2);
      const codes = new Set(outcomes.filter((outcome) => typeof outcome === 'string'));
      for (const code of codes)
        expect(['no_fixed_place', 'garbage_collected', 'no_such_symbol']).toContain(code);
    });

    test('holds at least 40 images', () => {
      expect(builds.length).toBeGreaterThanOrEqual(40);
    });

    test.each(builds.map((build) => [build.name, build] as const))('%s', (_, build) => {
      const { read, asked, lines, declared } = compared.get(build)!;
      for (const [at, literal] of build.source === 'gains.c' ? inC : inCpp) {
        expect(read.get(at), `${at} against the source`).toBe(literal);
        const answer = asked.get(at)!;
        // gdb does not relocate the data of an unlinked object, so there it cannot follow a pointer.
        if (answer === 'none' || (isUnlinked(build) && at.startsWith('active_'))) continue;
        // Its conversion to double drops the sign of a big-endian zero.
        if (answer === 0 && literal === 0) continue;
        expect(read.get(at), `${at} against gdb`).toBe(answer);
      }
      const placed = (build.source === 'gains.c' ? declarations : []).map(([at, written]) => {
        const line = [...lines].find(([text]) => written.test(text))?.[1];
        if (line !== undefined) expect(declared.get(at), `line of ${at}`).toBe(line);
        return line;
      });
      expect(placed.filter((line) => line !== undefined).length).toBeGreaterThanOrEqual(placed.length - 1);
      // What gdb has no words for is covered by the literals; it must be little.
      const unanswered = [...asked].filter(([, answer]) => answer === 'none').map(([at]) => at);
      // It finds none of the file-local names which link-time optimisation moved to another unit.
      const most = build.name.includes('-flto') ? 5 : 1;
      expect(unanswered.length, unanswered.join(', ')).toBeLessThanOrEqual(most);
    });
  },
);
