import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { Folder } from './in_process.js';

// Protects the bound on what one pull request may change, from the spec to the reports: a first latch is possible, a latch
// accepts any change, and what cannot be compared never passes.

const spec = (more = '') => `pawl: 1
loop: A small axis
firmware:
  command: [node, numbers.mjs]
  coefficients: { kp: kp, taps: taps }
inputs: { target: {} }
plant:
  speed: { lag: 1 s, of: drive }
sensors: { seen: { of: speed } }
controllers:
  law: { every: 50 ms, signals: { output: { value: "(kp + taps[0] + taps[1]) * (target - seen)" } } }
actuators: { drive: { of: output } }
scenarios:
  step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } }
requirements:
  - { name: R1, measure: largest_value, of: speed, in: step, at_most: 0.9 }
  - { name: KP, measure: change_since_latched, of: kp, at_most: 10 %, reason: Larger changes are tried on the bench first. }
  - { name: TAPS, measure: change_since_latched, of: taps, at_most: 1 % }
${more}merge:
  reference: latched/axis.json
  may_slip: 5 %
`;

describe('a bound on the change since the latched build', () => {
  let folder: Folder;
  beforeEach(() => {
    folder = new Folder();
    folder.write('axis.pawl.yaml', spec());
    numbers(2, [0, 0.5]);
  });
  afterEach(() => folder.remove());
  const numbers = (kp: number, taps: number[]): void =>
    folder.write('numbers.mjs', `console.log('${JSON.stringify({ kp, taps })}')`);
  const check = () => folder.run(['check', '--out', 'out']);
  const latch = (...words: string[]) => folder.run(['latch', '--reason', 'because', ...words]);
  const found = () => {
    const { requirements } = JSON.parse(folder.read('out/run.json')).specs[0];
    return Object.fromEntries(requirements.map((one: { name: string }) => [one.name, one]));
  };
  const verdicts = () => Object.values(found()).map(({ verdict }) => verdict);

  it('is unjudged before anything is latched, and says what to do; the first latch is possible', async () => {
    const before = await check();
    expect(before.status).toBe(1);
    expect(verdicts()).toEqual(['met', 'unjudged', 'unjudged']);
    expect(before.output.replace(/\s+/g, ' ')).toContain(
      'there is no latched reference latched/axis.json yet to compare with; write it with pawl latch',
    );
    expect(await latch()).toMatchObject({ status: 0, errors: '' });
    expect(JSON.parse(folder.read('latched/axis.json')).requirements.KP).toMatchObject({
      ...{ verdict: 'met', worst: { value: 0, headroom: 1 } },
    });
    expect((await check()).status).toBe(0);
    expect(verdicts()).toEqual(['met', 'met', 'met']);
  });

  it('lets a change within it through: that it costs more headroom than may slip is what it is for', async () => {
    await latch();
    numbers(2.125, [0, 0.5]);
    const ended = await check();
    expect(ended.status).toBe(0);
    // (2.125 − 2)/2; a share of a limit of 10 %.
    expect(found().KP).toMatchObject({ verdict: 'met', nominal: 0.0625 });
    expect(found().KP).not.toHaveProperty('since_latched');
    expect(found().R1).toHaveProperty('since_latched');
  });

  it('stops a larger one, shows the number that did it, and is accepted by a latch with its reason', async () => {
    await latch();
    numbers(2, [0, 0.55]);
    const ended = await check();
    expect(ended.status).toBe(1);
    expect(verdicts()).toEqual(['met', 'met', 'broken']);
    expect(ended.output).toContain("'taps[1]' 0.5 → 0.55");
    expect(folder.read('out/summary.md')).toContain('TAPS');
    expect(await latch()).toMatchObject({ status: 0, errors: '' });
    expect((await check()).status).toBe(0);
  });

  it('takes a number that was zero for an infinite change', async () => {
    await latch();
    numbers(2, [0.001, 0.5]);
    const ended = await check();
    expect(ended.status).toBe(1);
    expect(found().TAPS).toMatchObject({ verdict: 'broken', nominal: 'infinite' });
    expect(ended.output).toContain("'taps[0]' 0 → 0.001");
  });

  it('is unjudged for a coefficient that is new, or has another count of numbers', async () => {
    await latch();
    numbers(2, [0, 0.25, 0.25]);
    expect((await check()).output.replace(/\s+/g, ' ')).toContain(
      "no numbers to compare 'taps' with: it had 2 numbers and has 3; accept it with pawl latch",
    );
    expect(verdicts()[2]).toBe('unjudged');
    const reference = JSON.parse(folder.read('latched/axis.json'));
    delete reference.coefficients.kp;
    folder.write('latched/axis.json', JSON.stringify(reference));
    expect((await check()).output.replace(/\s+/g, ' ')).toContain("compare 'kp' with: it is new");
    expect(await latch()).toMatchObject({ status: 0 });
  });

  it('gives the same bytes in parts, which another reference than theirs refuses', async () => {
    await latch();
    numbers(2.5, [0, 0.5]);
    await check();
    for (const part of ['1', '2']) await folder.run(['check', '--out', 'parts', '--part', part, '--of', '2']);
    const join = ['join', 'parts/part-1-of-2.json', 'parts/part-2-of-2.json', '--out', 'joined'];
    expect((await folder.run(join)).status).toBe(1);
    expect(folder.read('joined/run.json')).toBe(folder.read('out/run.json'));
    await latch();
    expect((await folder.run(join)).errors).toContain('or its latched reference is not');
  });

  it('is replayed against the same reference', async () => {
    await latch();
    numbers(2.5, [0, 0.5]);
    await check();
    const ended = await folder.run(['replay', 'out', 'KP']);
    expect(ended.status).toBe(1);
    expect(ended.output).toMatch(/broken/);
  });

  it('needs a reference to be named', async () => {
    folder.write('axis.pawl.yaml', spec().split('merge:')[0]);
    expect(await check()).toMatchObject({
      ...{ status: 2, output: '' },
      errors:
        'axis.pawl.yaml:17:13: `change_since_latched` needs a `merge:` section: its `reference` keeps what was latched\n',
    });
  });

  it('has a limit that is a share', async () => {
    folder.write(
      'axis.pawl.yaml',
      spec('  - { name: S, measure: change_since_latched, of: kp, at_most: 3 s }\n'),
    );
    expect((await check()).errors).toMatch(/axis\.pawl\.yaml:19:\d+: .*plain number/);
  });
});
