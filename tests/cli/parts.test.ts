import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { runHere } from './in_process.js';
import { type Ended, Workplace } from './workplace.js';

/** Few plants, on the image that breaks two requirements, so that searching, shrinking and reach have work to do. */
const image = ['--image', 'firmware/azimuth-regressed.elf'];
const parts = ['parts/part-1-of-3.json', 'parts/part-2-of-3.json', 'parts/part-3-of-3.json'];

describe('a run in three parts', () => {
  let place: Workplace;
  let joined: Ended;
  beforeAll(async () => {
    place = new Workplace((text) =>
      text
        .replace(/^ {2}- \{ name: AZ-[23467].*\n/gm, '')
        .replace('../../reference/latched/heliostat.json', 'latched/axis.json'),
    );
    const latched = await place.pawl('latch', place.spec, '--skip-build', '--reason', 'first release');
    expect(latched).toMatchObject({ status: 0, errors: '' });
    for (const part of ['1', '2', '3']) {
      const ended = await place.pawl(
        'check',
        place.spec,
        ...image,
        '--out',
        'parts',
        '--part',
        part,
        '--of',
        '3',
      );
      expect(ended).toMatchObject({ status: 0, errors: '' });
      expect(ended.output).toContain('nothing judged yet');
    }
    joined = await place.pawl('join', ...parts, '--out', 'joined');
  }, 120_000);
  afterAll(() => place.remove());

  const changed = (name: string, change: (part: Record<string, never>) => void): string => {
    const part = JSON.parse(place.read(parts[1]));
    change(part);
    place.write(name, JSON.stringify(part));
    return name;
  };

  it('gives the same bytes as one machine', async () => {
    const whole = await place.pawl('check', place.spec, ...image, '--out', 'whole');
    expect(joined.status).toBe(whole.status);
    expect(joined.status).toBe(1);
    expect(place.read('joined/run.json')).toBe(place.read('whole/run.json'));
    expect(readdirSync(join(place.folder, 'joined')).sort()).toEqual(
      readdirSync(join(place.folder, 'whole')).sort(),
    );
  });

  it('compares with the latched coefficients, as one machine does', () => {
    const { requirements } = JSON.parse(place.read('joined/run.json')).specs[0];
    expect(requirements[0].since_latched.lost).toBeGreaterThan(0);
    expect(requirements[0].since_latched.rerun).not.toEqual(requirements[0].since_latched.today);
  });

  it.each(['rounds', 'latchedRounds'])(
    'shares the plants: no part has measured more than a third of them and a few: %s',
    (rounds) => {
      const counts = parts.map((path) =>
        JSON.parse(place.read(path)).targets[0][rounds].map(
          ({ plants, answers }: { plants: number; answers: unknown[] }) => ({ plants, own: answers.length }),
        ),
      );
      counts[0].forEach(({ plants }: { plants: number }, round: number) => {
        const own = counts.map((rounds) => rounds[round].own);
        expect(own.reduce((sum, one) => sum + one)).toBe(plants);
        for (const one of own) expect(one).toBeLessThanOrEqual(Math.ceil(plants / 3));
      });
    },
  );

  it('does not depend on the order in which the parts are named', async () => {
    await place.pawl('join', ...parts.toReversed(), '--out', 'turned');
    expect(place.read('turned/run.json')).toBe(place.read('joined/run.json'));
  });

  it('is refused where a part is missing or there twice', async () => {
    const { status, output, errors } = await runHere(place.folder, ['join', parts[0], parts[0]]);
    expect({ status, output }).toEqual({ status: 2, output: '' });
    expect(errors.split('\n')).toEqual([
      'part 1 of 3 is there 2 times',
      'part 2 of 3 is missing',
      'part 3 of 3 is missing',
    ]);
  });

  // biome-ignore lint/suspicious/noExplicitAny: what is changed in the JSON of a part.
  const others: [string, (part: any) => void, RegExp][] = [
    [
      'another version',
      (part) => {
        part.pawl = '9.9.9';
      },
      /part 2 was made by pawl 9\.9\.9, but this is/,
    ],
    [
      'another image',
      (part) => {
        part.targets[0].read.provenance.sha256 = '00';
      },
      /part 2 was tried with another image/,
    ],
    [
      'another spec',
      (part) => {
        part.targets[0].specDigest = '00';
      },
      /part 2 was tried with another spec/,
    ],
    [
      'another number of parts',
      (part) => {
        part.of = 4;
      },
      /one of 4, but part \d one of 3/,
    ],
    [
      'plants that are left out',
      (part) => {
        part.targets[0].rounds[1].answers.pop();
      },
      /lacks plants/,
    ],
    [
      'plants of the latched coefficients that are left out',
      (part) => {
        part.targets[0].latchedRounds[1].answers.pop();
      },
      /lacks plants/,
    ],
  ];
  it.each(others)('is refused for %s', async (_, change, line) => {
    const { status, errors } = await runHere(place.folder, [
      'join',
      parts[0],
      changed('other.json', change),
      parts[2],
    ]);
    expect(status).toBe(2);
    expect(errors).toMatch(line);
  });

  it('is refused when the spec has changed since, and for files that are no parts', async () => {
    const text = place.read(place.spec);
    place.write(place.spec, text.replace('at_most: 25 %', 'at_most: 26 %'));
    const moved = await runHere(place.folder, ['join', ...parts]);
    expect(moved.status).toBe(2);
    expect(moved.errors).toMatch(/not the spec that the parts were tried with/);
    place.write(place.spec, text);
    for (const [file, line] of [
      ['joined/run.json', /is no part/],
      [place.spec, /is no part/],
      ['none.json', /no such file/],
    ] as const) {
      const { status, errors } = await runHere(place.folder, ['join', file]);
      expect(status).toBe(2);
      expect(errors).toMatch(line);
    }
  });
});

describe('a part', () => {
  it('must be a part of so many, and needs a folder', async () => {
    const place = new Workplace();
    for (const [words, line] of [
      [['--part', '4', '--of', '3', '--out', 'x'], /'--part 4 --of 3' is no part/],
      [['--part', '1', '--out', 'x'], /is no part/],
      [['--part', 'one', '--of', '3', '--out', 'x'], /is no part/],
      [['--part', '1', '--of', '3'], /needs '--out DIR'/],
    ] as const) {
      const { status, errors } = await runHere(place.folder, ['check', place.spec, '--skip-build', ...words]);
      expect(status).toBe(2);
      expect(errors).toMatch(line);
    }
    place.remove();
  });
});
