import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { motor } from '../verdict/motor.js';
import { type Ended, Workplace } from './workplace.js';

// A limit that some plants break, so that there is a counterexample to run again.
const spec = motor.replace('at_most: 30 %', 'at_most: 2 %').replace('at_least: 0.7', 'at_least: 0.93');

describe('pawl replay', () => {
  const folder = new Workplace();
  let checked: Ended;

  beforeAll(async () => {
    folder.write('motor.pawl.yaml', spec.replace('kp: 0.8', 'kp: 0.2'));
    checked = await folder.pawl('check', 'motor.pawl.yaml', '--out', 'out');
  });
  afterAll(() => folder.remove());

  it('runs the counterexample nearest to nominal again, to the last digit', async () => {
    expect(checked.status).toBe(1);
    const report = JSON.parse(folder.read('out/run.json'));
    const { status, output } = await folder.pawl('replay', 'out', 'M-1', '--out', 'out');
    expect(status).toBe(1);
    expect(output).toMatch(/M-1 broken: overshoot of speed to goal in step/);
    const shrunk = report.specs[0].requirements[0].shrunk;
    expect(shrunk.value).toBeGreaterThan(0.02);
    expect(output).toContain('the counterexample nearest to nominal');
    expect(output).toContain('* speed');
  });

  it('writes every signal over time, of this plant and of the nominal one', async () => {
    const rows = folder.read('out/replay-M-1.csv').split('\r\n');
    expect(rows[0]).toMatch(/^time \(s\),goal \(rad\/s\),/);
    expect(rows[0]).toContain('speed nominal (rad/s)');
    expect(rows.length).toBeGreaterThan(4000);
    const last = rows[rows.length - 2].split(',').map(Number);
    expect(last[0]).toBe(1);
    expect(last[1]).toBe(10);
  });

  it('judges a requirement on the loop without a trace', async () => {
    const { status, output } = await folder.here('replay', 'out/run.json', 'M-4');
    expect([0, 1]).toContain(status);
    expect(output).toContain('no trace: the requirement is about the loop');
  });

  it('keeps a counterexample, which every later check tries first', async () => {
    const { output } = await folder.here('replay', 'out', 'M-1', '--keep', '--out', 'out');
    expect(output).toContain('kept in motor.counterexamples.json');
    await folder.here('replay', 'out', 'M-1', '--keep', '--out', 'out');
    const saved = JSON.parse(folder.read('motor.counterexamples.json'));
    expect(saved.counterexamples).toHaveLength(1);
    expect(Object.keys(saved.counterexamples[0].plant).sort()).toEqual(['gain', 'lag']);
    await folder.pawl('check', 'motor.pawl.yaml', '--out', 'again');
    const report = JSON.parse(folder.read('again/run.json'));
    expect(report.specs[0].plants.saved).toBe(1);
  });

  it.each([
    [['replay', 'out', 'M-9'], "the report holds no requirement 'M-9'; did you mean 'M-1'?"],
    [
      ['replay', 'nowhere', 'M-1'],
      "nowhere: there is no such file; expected the run.json that 'pawl check --out DIR'",
    ],
    [['replay', 'motor.pawl.yaml', 'M-1'], 'motor.pawl.yaml: cannot be read'],
    [['replay', 'out', 'M-1', '--spec', 'motr.pawl.yaml'], "the report holds no spec 'motr.pawl.yaml'"],
    [['replay', 'out'], "'pawl replay' takes a report and a requirement"],
  ])('tells what is wrong: %j', async (words, message) => {
    const { status, errors } = await folder.here(...(words as string[]));
    expect(status).toBe(2);
    expect(errors).toContain(message);
  });

  it('does not take a broken file of counterexamples for none', async () => {
    const other = new Workplace();
    other.write('motor.pawl.yaml', spec);
    other.write('motor.counterexamples.json', '{"pawl": 1, "counterexamples": [{"plant": 3}]}');
    const { status, errors } = await other.here('check', 'motor.pawl.yaml');
    other.remove();
    expect(status).toBe(2);
    expect(errors).toContain('motor.counterexamples.json: holds no saved counterexamples');
  });
});
