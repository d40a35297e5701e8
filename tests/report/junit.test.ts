import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { parse as readByXml2js } from 'junit2json';
import { parse as readByFastXmlParser } from 'test-results-parser';
import { afterAll, describe, expect, it } from 'vitest';
import { caution } from '../../src/report/caution.js';
import { junitOf, junitOfFault } from '../../src/report/junit.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { hasTool } from './outside_tool.js';
import { metRun, sampleRun } from './sample_run.js';

const folder = mkdtempSync(join(tmpdir(), 'pawl-junit-'));
afterAll(() => rmSync(folder, { recursive: true }));

const schema = new URL('junit.xsd', import.meta.url).pathname;

/** What xmllint (libxml2) has to say against the schema; empty where the text is valid. */
function faultsBySchema(text: string): string {
  const { status, stderr } = spawnSync('xmllint', ['--noout', '--nonet', '--schema', schema, '-'], {
    input: text,
    encoding: 'utf8',
  });
  return status === 0 ? '' : stderr;
}

/** The first suite as the reader on xml2js gives it. */
async function suiteOf(text: string) {
  const read = (await readByXml2js(text)) as { testsuite: Awaited<ReturnType<typeof suites>> };
  return read.testsuite[0];
}

async function suites(text: string) {
  const read = await readByXml2js(text);
  if (!read || !('testsuite' in read)) throw new Error('no suites');
  return read.testsuite!;
}

const caseOf = async (name: string, text = junitOf(sampleRun())) =>
  (await suiteOf(text)).testcase!.find((one) => one.name?.startsWith(name))!;

describe('junitOf', () => {
  it('gives a suite for the spec and a case for each requirement', async () => {
    const suite = await suiteOf(junitOf(sampleRun()));
    expect(suite).toMatchObject({
      name: 'Heliostat azimuth drive',
      tests: 6,
      failures: 2,
      errors: 1,
      time: 1.206,
    });
    expect(suite.testcase!.map(({ name }) => name)).toEqual([
      'AZ-1 overshoot',
      'AZ-2 settling time',
      'AZ-3 peak deviation',
      'AZ-4 saturated share',
      'AZ-6 gain margin',
      'AZ-7 phase margin',
    ]);
    expect(suite.testcase![0]).toMatchObject({ classname: 'specs.heliostat.azimuth', time: 0.201 });
  });

  it('makes broken a failure with one line that says measured value, limit, headroom and plant', async () => {
    const broken = await caseOf('AZ-3');
    expect(broken.error).toBeUndefined();
    expect(broken.failure![0]).toMatchObject({
      type: 'broken',
      message:
        'AZ-3 is broken: peak deviation of angle to target in squall: 30.003 mrad; limit at most 30 mrad; headroom -0.01 %; plant: friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound (191.3 N*m); nothing else moved',
    });
    const body = broken.failure![0].inner!;
    expect(body).toContain('specs/heliostat/azimuth.pawl.yaml:61:5');
    expect(body).toMatch(/^drive +191\.34 +N\*m +180 +63 % of the way to its upper bound$/m);
    expect(body).toContain('run again: pawl check specs/heliostat/azimuth.pawl.yaml');
    expect(body).toContain('claim:    in 1,000 independent plants none failed');
  });

  it('makes unjudged an error that says why', async () => {
    const unjudged = await caseOf('AZ-4');
    expect(unjudged.failure).toBeUndefined();
    expect(unjudged.error![0].type).toBe('unjudged');
    expect(unjudged.error![0].message).toMatch(
      /^AZ-4 is unjudged: .* could not be formed: the signal has no range;/,
    );
  });

  it('says of a met requirement what it rests on', async () => {
    const met = await caseOf('AZ-1');
    expect(met.failure ?? met.error).toBeUndefined();
    expect(met['system-out']![0]).toContain('evidence: tried 1,108 plants');
  });

  it('says in properties where the numbers come from', async () => {
    const { properties } = await suiteOf(junitOf(sampleRun()));
    const values = Object.fromEntries(properties!.map(({ name, value }) => [name, String(value)]));
    expect(values).toMatchObject({
      'pawl version': '0.1.0',
      image: 'firmware/azimuth.elf',
      'build id': '5d0c1f2e',
      seed: '11',
      plants: '1108',
      caution,
    });
    expect(values['image SHA-256']).toHaveLength(64);
  });

  it('shares the time of a spec over its cases, and says nothing of time where nothing ran', async () => {
    const suite = await suiteOf(junitOf(sampleRun({ seconds: 3 })));
    expect(suite.testcase!.map(({ time }) => time)).toEqual(Array(6).fill(0.5));
    expect(junitOfFault('a', ['x'])).not.toContain('time=');
  });

  it('keeps names from run to run: nothing of a name comes from a measured number', async () => {
    const names = async (text: string) =>
      (await suiteOf(text)).testcase!.map(({ name, classname }) => [name, classname]);
    const other = sampleRun();
    other.specs[0].requirements = other.specs[0].requirements.map((one) => ({
      ...one,
      worst: { ...one.nominal, parameters: [] },
      verdict: { kind: 'unjudged', why: 'something else' },
    }));
    expect(await names(junitOf(other))).toEqual(await names(junitOf(sampleRun())));
  });

  it.each([
    ['specs/heliostat/azimuth.pawl.yaml', 'specs.heliostat.azimuth'],
    ['./azimuth.pawl.yml', 'azimuth'],
    ['/repo/specs/azimuth.pawl.yaml', 'repo.specs.azimuth'],
    ['specs\\azimuth.pawl.yaml', 'specs.azimuth'],
    ['azimuth.yaml', 'azimuth.yaml'],
  ])('groups the cases of %s under %s', async (file, className) => {
    expect((await suiteOf(junitOf(sampleRun({ file })))).testcase![0].classname).toBe(className);
  });

  it('says the line of the requirement, for servers that lead to it', () => {
    expect(junitOf(sampleRun())).toMatch(
      /name="AZ-3 peak deviation" file="specs\/heliostat\/azimuth\.pawl\.yaml">\s*<properties>\s*<property name="line" value="61"\/>/,
    );
  });

  it('says when the build was skipped', () => {
    const skipped = { ...sampleRun().specs[0].provenance!, buildSkipped: true };
    expect(junitOf(sampleRun({ provenance: skipped }))).toContain(
      '<property name="build skipped" value="yes"/>',
    );
    expect(junitOf(sampleRun())).not.toContain('build skipped');
    expect(junitOf(sampleRun({ provenance: undefined }))).not.toContain('SHA-256');
  });

  it('does not carry one run over into the next', async () => {
    expect(junitOf(metRun())).toBe(junitOf(metRun()));
    expect(await suites(junitOf(metRun()))).toHaveLength(1);
  });

  it('is read alike by a second reader that shares no code with the first', () => {
    const path = join(folder, 'sample.xml');
    writeFileSync(path, junitOf(sampleRun()));
    const read = readByFastXmlParser({ type: 'junit', files: [path] });
    expect(read).toMatchObject({ total: 6, passed: 3, failed: 2, errors: 1 });
    const statuses = read.suites[0].cases.map(({ name, status }) => [name, status]);
    expect(statuses).toContainEqual(['AZ-1 overshoot', 'PASS']);
    expect(statuses).toContainEqual(['AZ-3 peak deviation', 'FAIL']);
    expect(read.suites[0].metadata).toMatchObject({ 'pawl version': '0.1.0' });
  });

  it.each(Object.entries(hostileNames))('is not harmed by a hostile name: %s', async (_, name) => {
    const text = junitOf(hostileRun(name));
    expect(text).not.toMatch(harmful);
    const suite = await suiteOf(text);
    expect(suite).toMatchObject({ tests: 4, failures: 2, errors: 1 });
    expect(suite.testcase).toHaveLength(4);
    const path = join(folder, 'hostile.xml');
    writeFileSync(path, text);
    expect(readByFastXmlParser({ type: 'junit', files: [path] }).suites[0].cases).toHaveLength(4);
  });

  it('lets no name ask a CI server to attach a file', async () => {
    const text = junitOf(hostileRun('[[ATTACHMENT|/etc/passwd]]'));
    expect((await suiteOf(text)).testcase![0]['system-out']![0]).not.toContain('[[');
    expect((await suiteOf(text)).testcase![1].failure![0].inner).not.toContain('[[');
  });
});

describe('junitOfFault', () => {
  it('is one case with an error, the first cause in its message and all of them in its body', async () => {
    const [suite] = await suites(
      junitOfFault('specs/a.pawl.yaml', ['a:1:2: no such symbol "kq"', 'a:3:1: second']),
    );
    expect(suite).toMatchObject({ name: 'specs/a.pawl.yaml', tests: 1, failures: 0, errors: 1 });
    expect(suite.testcase![0]).toMatchObject({ name: 'can be run', classname: 'specs.a' });
    expect(suite.testcase![0].error![0]).toEqual({
      message: 'a:1:2: no such symbol "kq" (and 1 more)',
      type: 'fault',
      inner: 'a:1:2: no such symbol "kq"\na:3:1: second',
    });
  });

  it('stands beside the suites of specs that could be run', async () => {
    const both = junitOf(metRun(), [{ specFile: 'b.pawl.yaml', messages: ['the build failed'] }]);
    expect((await suites(both)).map(({ name }) => name)).toEqual(['Heliostat azimuth drive', 'b.pawl.yaml']);
  });
});

describe.runIf(hasTool('xmllint', 'libxml2-utils'))('the schema of the format', () => {
  it('allows every output', () => {
    expect(faultsBySchema(junitOf(sampleRun()))).toBe('');
    expect(faultsBySchema(junitOf(metRun()))).toBe('');
    expect(faultsBySchema(junitOf({ version: '1', specs: [] }))).toBe('');
    expect(faultsBySchema(junitOfFault('a', ['x', '']))).toBe('');
    expect(faultsBySchema(junitOfFault('a', []))).toBe('');
  });

  it.each(Object.entries(hostileNames))('allows the output for a hostile name: %s', (_, name) => {
    expect(faultsBySchema(junitOf(hostileRun(name)))).toBe('');
    expect(faultsBySchema(junitOfFault(name, [name]))).toBe('');
  });

  it('allows the output whatever a name is made of', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary', minLength: 1 }), (name) => {
        expect(faultsBySchema(junitOf(hostileRun(name)))).toBe('');
      }),
      { seed: 12, numRuns: 25 },
    );
  });

  it('refuses what is not in the format', () => {
    const valid = junitOf(sampleRun());
    expect(
      faultsBySchema(valid.replace('<failure ', '<failed ').replace('</failure>', '</failed>')),
    ).not.toBe('');
    expect(faultsBySchema(valid.replace('tests="6"', 'tests="six"'))).not.toBe('');
    expect(faultsBySchema(valid.replace('classname=', 'class='))).not.toBe('');
  });
});
