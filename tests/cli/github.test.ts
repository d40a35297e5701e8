import { copyFileSync, mkdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { Folder } from './in_process.js';

/** A lag under a proportional law, without parameters and images: judged at once. */
const spec = `pawl: 1
loop: A small axis
inputs: { target: {} }
plant:
  speed: { lag: 1 s, of: drive }
sensors: { seen: { of: speed } }
controllers:
  law: { every: 50 ms, signals: { output: { value: 2 * (target - seen) } } }
actuators: { drive: { of: output } }
scenarios:
  step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } }
requirements:
  - { name: R1, measure: overshoot, of: speed, to: target, in: step, at_most: 20 % }
  - { name: R2, measure: largest_value, of: speed, in: step, at_most: 0.5 }
`;

describe('pawl check on GitHub Actions', () => {
  let folder: Folder;
  beforeEach(() => {
    folder = new Folder();
    mkdirSync(join(folder.path, 'axis'));
    folder.write('axis/small.pawl.yaml', spec);
  });
  afterEach(() => folder.remove());

  const run = (environment: Record<string, string>, ...words: string[]) =>
    folder.run(['check', 'small.pawl.yaml', ...words], { cwd: join(folder.path, 'axis'), environment });

  it('annotates the line of what is broken, with the path from the repository’s folder', async () => {
    const { status, output } = await run({ GITHUB_ACTIONS: 'true', GITHUB_WORKSPACE: folder.path });
    expect(status).toBe(1);
    const commands = output.split('\n').filter((line) => line.startsWith('::'));
    expect(commands).toHaveLength(1);
    const line = spec.split('\n').findIndex((text) => text.includes('R2')) + 1;
    expect(commands[0]).toContain(`::error file=axis/small.pawl.yaml,line=${line},`);
    expect(commands[0]).toContain('title=R2 broken::');
  });

  it('annotates the cause why a spec cannot be run', async () => {
    folder.write('axis/small.pawl.yaml', spec.replace('lag: 1 s', 'lag: 1 m'));
    const { status, output } = await run({ GITHUB_ACTIONS: 'true', GITHUB_WORKSPACE: folder.path });
    expect(status).toBe(2);
    expect(output).toMatch(
      /^::error file=axis\/small\.pawl\.yaml,line=5,col=\d+,title=pawl could not run::`lag`/,
    );
  });

  it('appends the summary to what the job has already', async () => {
    folder.write('summary', 'before\n');
    await run({ GITHUB_STEP_SUMMARY: join(folder.path, 'summary') });
    expect(folder.read('summary')).toMatch(/^before\n## pawl: merge blocked: 1 broken, 1 met/);
  });

  it('says nothing of it elsewhere, where the report goes to files alone', async () => {
    const { output } = await run({}, '--out', 'reports');
    expect(output).not.toMatch(/^::/m);
    const report = (name: string): string => readFileSync(join(folder.path, 'axis/reports', name), 'utf8');
    expect(report('summary.md')).toContain('| **R2**'.slice(2, 4));
    expect(report('report.html')).toMatch(/<svg class="drawing"/);
    expect(report('junit.xml').match(/<testcase /g)).toHaveLength(2);
    expect(JSON.parse(report('run.json')).specs[0].file).toBe('small.pawl.yaml');
  });
});

describe('several builds in one spec', () => {
  let folder: Folder;
  beforeEach(() => {
    folder = new Folder();
    for (const name of ['azimuth', 'azimuth-regressed'])
      copyFileSync(`specs/heliostat/firmware/${name}.elf`, join(folder.path, `${name}.elf`));
    folder.write(
      'axis.pawl.yaml',
      withBuilds('  shipped: azimuth.elf\n  regressed: { image: azimuth-regressed.elf }'),
    );
  });
  afterEach(() => folder.remove());

  // The loop gain of the plain lag is the integral gain: 0.34 of the one build, 3.4 of the other.
  const withBuilds = (builds: string): string =>
    spec
      .replace('inputs:', `firmware: { coefficients: { ki: azimuth.gains.ki } }\nbuilds:\n${builds}\ninputs:`)
      .replace('2 * (', 'ki * (')
      .replace('at_most: 0.5', 'at_most: 0.3');

  it('are judged one by one, each under its own name', async () => {
    const { status, output } = await folder.run(['check', '--out', 'reports']);
    expect(status).toBe(1);
    expect(output).toMatch(
      /A small axis, build shipped\n[\s\S]*met +R2[\s\S]*A small axis, build regressed\n[\s\S]*broken +R2/,
    );
    const { specs } = JSON.parse(folder.read('reports/run.json'));
    expect(specs.map(({ build }: { build: string }) => build)).toEqual(['shipped', 'regressed']);
    const xml = folder.read('reports/junit.xml');
    expect([...xml.matchAll(/<testsuite name="([^"]*)"/g)].map(([, name]) => name)).toEqual([
      'A small axis, build shipped',
      'A small axis, build regressed',
    ]);
    expect(new Set([...xml.matchAll(/classname="([^"]*)"/g)].map(([, name]) => name)).size).toBe(2);
  });

  it('may have requirements of their own: each is judged by those that are for it', async () => {
    const text = folder.read('axis.pawl.yaml').replace('{ name: R2,', '{ name: R2, builds: shipped,');
    folder.write(
      'axis.pawl.yaml',
      `${text}  - { name: R3, builds: [regressed], measure: largest_value, of: speed, in: step, at_most: 2 }\n`,
    );
    expect((await folder.run(['check', '--out', 'reports'])).status).toBe(0);
    const { specs } = JSON.parse(folder.read('reports/run.json'));
    const judged = (at: number): string[] => specs[at].requirements.map(({ name }: { name: string }) => name);
    expect(judged(0)).toContain('R2');
    expect(judged(0)).not.toContain('R3');
    expect(judged(1)).toContain('R3');
    expect(judged(1)).not.toContain('R2');
    for (const part of ['1', '2']) {
      await folder.run(['check', '--part', part, '--of', '2', '--out', 'parts']);
    }
    const joined = await folder.run([
      'join',
      'parts/part-1-of-2.json',
      'parts/part-2-of-2.json',
      '--out',
      'joined',
    ]);
    expect(joined.status).toBe(0);
    expect(folder.read('joined/run.json')).toBe(folder.read('reports/run.json'));
  });

  it('are replayed by their names', async () => {
    await folder.run(['check', '--out', 'reports']);
    const replay = (...more: string[]) => folder.run(['replay', 'reports', 'R2', ...more]);
    expect((await replay()).errors).toBe(
      "several builds have the requirement 'R2': shipped, regressed; name one with --build",
    );
    expect((await replay('--build', 'shiped')).errors).toContain(
      "no build 'shiped'; did you mean 'shipped'?",
    );
    expect(await replay('--build', 'shipped')).toMatchObject({ status: 0, output: /R2 met/ });
    const regressed = await replay('--build', 'regressed');
    expect(regressed).toMatchObject({ status: 1, output: /R2 broken/ });
    expect(regressed.output).not.toContain('another image');
    folder.write('axis.pawl.yaml', withBuilds('  shipped: azimuth.elf\n  other: azimuth-regressed.elf'));
    expect((await replay('--build', 'regressed')).errors).toContain(
      "axis.pawl.yaml: has no build 'regressed' any more; run 'pawl check' again",
    );
  });

  it('are named where one of them may not be latched', async () => {
    const text = withBuilds('  shipped: azimuth.elf\n  regressed: azimuth-regressed.elf');
    folder.write('axis.pawl.yaml', `${text}merge: { reference: kept.json, may_slip: 5 % }\n`);
    const { errors } = await folder.run(['latch', '--reason', 'r']);
    expect(errors).toMatch(/^nothing was latched:\naxis\.pawl\.yaml:\d+:1: build regressed: R2 is broken/);
  });

  it('go on where one of them cannot be read', async () => {
    folder.write('axis.pawl.yaml', withBuilds('  lost: lost.elf\n  shipped: azimuth.elf'));
    const { status, output, errors } = await folder.run(['check']);
    expect(status).toBe(2);
    expect(errors).toMatch(/axis\.pawl\.yaml:5:9: .*lost\.elf/);
    expect(output).toContain('build shipped');
  });

  it('leave no place for one image, on the command line or in `firmware`', async () => {
    const option = await folder.run(['check', '--image', 'azimuth.elf']);
    expect(option).toMatchObject({ status: 2, output: '' });
    expect(option.errors).toContain('has several builds (shipped, regressed)');
    const { status, errors } = await (async () => {
      folder.write(
        'axis.pawl.yaml',
        withBuilds('  one: azimuth.elf').replace('firmware: { ', 'firmware: { image: x.elf, '),
      );
      return folder.run(['check']);
    })();
    expect(status).toBe(2);
    expect(errors).toMatch(/:3:13: .*`builds`; leave `image` out here/);
  });

  it('need the coefficients of a firmware section', async () => {
    folder.write('axis.pawl.yaml', spec.replace('inputs:', 'builds: { one: azimuth.elf }\ninputs:'));
    expect((await folder.run(['check'])).errors).toMatch(/:3:1: `builds` needs the section `firmware`/);
  });
});
