import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Ended, Workplace } from './workplace.js';

describe('pawl check on the shipped image', () => {
  let place: Workplace;
  let ended: Ended;
  beforeAll(async () => {
    place = new Workplace();
    ended = await place.pawl('check', place.spec, '--skip-build', '--out', 'reports');
  });
  afterAll(() => place.remove());

  it('lets the merge through: status 0, every requirement met, the caution at the foot', () => {
    expect(ended).toMatchObject({ status: 0, errors: '' });
    for (const name of ['AZ-1', 'AZ-2', 'AZ-3', 'AZ-4', 'AZ-5', 'AZ-6', 'AZ-7']) {
      expect(ended.output).toMatch(new RegExp(`met +${name} `));
    }
    expect(ended.output).toContain('A pass is evidence about a model');
  });

  it('writes a run.json with the promised shape, in SI, with no times and no absolute paths', () => {
    const text = place.read('reports/run.json');
    const { specs } = JSON.parse(text);
    expect(specs).toHaveLength(1);
    expect(specs[0]).toMatchObject({ file: place.spec, loop: 'Heliostat azimuth drive', seed: 11 });
    const [overshoot, , , , phase, gain] = specs[0].requirements;
    expect(overshoot).toMatchObject({
      name: 'AZ-1',
      measure: 'overshoot',
      verdict: 'met',
      limit: { at_most: 0.25 },
    });
    expect(overshoot.nominal).toBeGreaterThan(0);
    expect(overshoot.worst).toBeGreaterThan(overshoot.nominal);
    expect(overshoot.headroom).toBeCloseTo((0.25 - overshoot.worst) / 0.25, 12);
    expect(Object.keys(overshoot.plant)).toEqual(['drive', 'drive_lag', 'friction', 'inertia', 'stiction']);
    expect(phase.limit.at_least).toBeCloseTo((40 * Math.PI) / 180, 12);
    expect(gain.limit.at_least).toBeCloseTo(10 ** (6 / 20), 12);
    expect(text).not.toContain(place.folder);
    expect(text).not.toMatch(/second|duration/);
  });

  it('writes JUnit with one suite and a case for each requirement', () => {
    const xml = place.read('reports/junit.xml');
    expect(xml.match(/<testcase /g)).toHaveLength(7);
    expect(xml.match(/<testsuite /g)).toHaveLength(1);
    expect(xml).not.toMatch(/<failure|<error/);
  });

  it('says that there is no latched reference to compare with', () => {
    expect(ended.output).toMatch(/there is no latched reference .*heliostat\.json yet/);
  });

  it('gives the same bytes again', async () => {
    const first = place.read('reports/run.json');
    await place.pawl('check', place.spec, '--skip-build', '--out', 'again');
    expect(place.read('again/run.json')).toBe(first);
  });

  it('takes every spec below the folder when none is named', async () => {
    const all = await place.pawl('check', '--skip-build');
    expect(all.status).toBe(0);
    expect(all.output).toContain('Heliostat azimuth drive');
  });
});

describe('pawl check on an image whose integral gain slipped a decimal point', () => {
  it('blocks the merge: status 1, the two broken requirements first, with plant and place', async () => {
    const place = new Workplace();
    const image = 'firmware/azimuth-regressed.elf';
    const ended = await place.pawl('check', place.spec, '--image', image, '--out', 'reports');
    expect(ended.status).toBe(1);
    expect(ended.output).toMatch(/broken +AZ-1 +overshoot of angle/);
    expect(ended.output).toMatch(/broken +AZ-2 +settling time of angle/);
    expect(ended.output).toContain('inertia at its upper bound');
    expect(ended.output).toContain(`${place.spec}:57:13`);
    const xml = place.read('reports/junit.xml');
    expect(xml.match(/<failure /g)).toHaveLength(2);
    const verdicts = JSON.parse(place.read('reports/run.json')).specs[0].requirements;
    expect(verdicts.map(({ verdict }: { verdict: string }) => verdict)).toEqual([
      'broken',
      'broken',
      'met',
      'met',
      'met',
      'met',
      'met',
    ]);
    place.remove();
  });
});

describe('bad input ends with status 2 and one clear line at its place', () => {
  const cases: { name: string; change: (text: string) => string; at: string; line: RegExp }[] = [
    {
      name: 'a missing symbol',
      change: (text) => text.replace('azimuth.gains.kp', 'azimuth.gains.kpp'),
      at: 'azimuth.gains.kpp',
      line: /kpp.*kp/,
    },
    {
      name: 'a wrong unit',
      change: (text) => text.replace('drive_lag: { nominal: 40 ms', 'drive_lag: { nominal: 40 mm'),
      at: 'drive_lag, of: duty',
      line: /`lag` must be a time.* m$/,
    },
    {
      name: 'a limit without a number',
      change: (text) => text.replace('at_most: 30 mrad', 'at_most: '),
      at: 'at_most:  }',
      line: /limit|number|quantity/,
    },
    {
      name: 'a spec with a tab',
      change: (text) => text.replace('\n  inertia:', '\n\tinertia:'),
      at: '\tinertia',
      line: /tab/,
    },
    {
      name: 'an unknown measure',
      change: (text) => text.replace('measure: overshoot', 'measure: overshot'),
      at: 'overshot',
      line: /overshot.*overshoot/,
    },
    {
      name: 'a controller that never gets a signal',
      change: (text) => text.replace('value: target - encoder', 'value: 0 rad'),
      at: 'azimuth:\n    every',
      line: /never gets a signal|no sensor/,
    },
  ];

  for (const { name, change, at, line } of cases) {
    it(name, async () => {
      const place = new Workplace(change);
      const ended = await place.here('check', place.spec, '--skip-build', '--out', 'reports');
      expect(ended.status).toBe(2);
      expect(ended.output).toBe('');
      const lines = ended.errors.split('\n').filter((text) => text.startsWith(place.placeOf(at)));
      expect(lines, ended.errors).toHaveLength(1);
      expect(lines[0]).toMatch(line);
      expect(ended.errors).not.toContain('    at ');
      expect(place.read('reports/junit.xml')).toMatch(/<error /);
      place.remove();
    });
  }

  it('an image that is not ELF', async () => {
    const place = new Workplace();
    place.write('firmware/azimuth.elf', 'not an image');
    const ended = await place.here('check', place.spec, '--skip-build');
    expect(ended.status).toBe(2);
    expect(ended.errors).toMatch(new RegExp(`^${place.placeOf('firmware/azimuth.elf')}: .*azimuth\\.elf`));
    expect(ended.errors.split('\n')).toHaveLength(1);
    place.remove();
  });

  it('an image that is not there, and a build that fails', async () => {
    const place = new Workplace();
    const missing = await place.here('check', place.spec, '--image', 'nowhere.elf');
    expect(missing).toMatchObject({
      status: 2,
      errors: 'image “nowhere.elf”: there is no such file; build it first, or correct the path',
    });
    const failing = new Workplace((text) =>
      text.replace('[make, -s, -C, firmware]', '[node, --eval, process.exit(3)]'),
    );
    const ended = await failing.here('check', failing.spec);
    expect(ended.status).toBe(2);
    expect(ended.errors).toMatch(/^axis\.pawl\.yaml:\d+:\d+: the build .* ended with status 3/);
    place.remove();
    failing.remove();
  });

  it('no spec, an unknown command, an unknown option', async () => {
    const place = new Workplace();
    expect(await place.pawl('check', 'nowhere.pawl.yaml')).toMatchObject({
      status: 2,
      errors: 'nowhere.pawl.yaml: there is no such file',
    });
    expect((await place.pawl('chekc')).errors).toBe("there is no command 'chekc'; did you mean 'check'?");
    const option = await place.pawl('check', '--ouch', 'x');
    expect(option).toMatchObject({ status: 2 });
    expect(option.errors).toMatch(/no option '--ouch'.*--out/);
    place.remove();
  });
});

describe('pawl read', () => {
  it('shows value, type, stored bits, address and source line of each coefficient', async () => {
    const place = new Workplace();
    const ended = await place.pawl('read', place.spec, '--skip-build');
    expect(ended.status).toBe(0);
    expect(ended.output).toMatch(
      /kp +azimuth\.gains\.kp +2\.7 +float +0x402ccccd +0x08000\w+ +azimuth_settings\.c:\d+/,
    );
    expect(ended.output).toMatch(/notch\[1\] +azimuth_notch\[1\] +-1\.72625732421875 +0x9185/);
    place.remove();
  });
});

describe('help and version', () => {
  it('are printed with status 0', async () => {
    const place = new Workplace();
    expect((await place.pawl('--help')).output).toContain('pawl check');
    expect((await place.pawl('check', '--help')).output).toContain('--image PATH');
    expect((await place.pawl('--version')).output).toMatch(/^\d+\.\d+\.\d+$/);
    place.remove();
  });
});
