import { readFileSync } from 'node:fs';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { check, htmlReport, openImage, readCoefficients } from '../../src/index.js';
import { Folder } from './in_process.js';

const spec = `pawl: 1
loop: quick
inputs: { target: {} }
plant: { speed: { lag: 1 s, of: drive } }
sensors: { seen: { of: speed } }
controllers: { law: { every: 50 ms, signals: { output: { value: target - seen } } } }
actuators: { drive: { of: output } }
scenarios: { step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } } }
requirements: [ { name: R1, measure: overshoot, of: speed, to: target, in: step, at_most: 20 % } ]
`;

describe('the library', () => {
  let folder: Folder;
  beforeEach(() => {
    folder = new Folder();
    folder.write('a.pawl.yaml', spec);
  });
  afterEach(() => folder.remove());

  it('checks as the command does, with the same three statuses', async () => {
    const met = await check({ folder: folder.path });
    expect(met.status).toBe(0);
    expect(met.faults).toEqual([]);
    expect(met.run.specs[0].requirements[0].verdict.kind).toBe('met');
    expect(htmlReport(met.run, { plots: { specs: met.plots() } })).toContain('<svg class="drawing"');
    folder.write('b.pawl.yaml', spec.replace('at_most: 20 %', 'between: [10 %, 20 %]'));
    expect((await check({ folder: folder.path })).status).toBe(1);
    folder.write('c.pawl.yaml', spec.replace('lag: 1 s', 'lag: 1 m'));
    const wrong = await check({ folder: folder.path });
    expect(wrong.status).toBe(2);
    expect(wrong.run.specs).toHaveLength(2);
    expect(wrong.faults[0]).toMatchObject({ specFile: 'c.pawl.yaml' });
    const one = await check({ folder: folder.path, specs: ['a.pawl.yaml'] });
    expect(one.status).toBe(0);
  });

  it('is not made to pass by a folder without specs, nor by being stopped', async () => {
    const empty = new Folder();
    await expect(check({ folder: empty.path })).rejects.toThrow(/no \*\.pawl\.yaml was found/);
    empty.remove();
    expect((await check({ folder: folder.path, signal: AbortSignal.abort() })).status).toBe(2);
  });

  it('reads coefficients from the bytes of an image', () => {
    const image = openImage(readFileSync('specs/heliostat/firmware/azimuth.elf'), 'azimuth.elf');
    const { coefficients, errors } = readCoefficients(image, [
      { name: 'kp', at: 'azimuth.gains.kp' },
      { name: 'none', at: 'azimuth.gains.kq' },
    ]);
    // The literal of the source, 2.7f.
    expect(coefficients.get('kp')!.elements[0].value).toBe(Math.fround(2.7));
    expect(errors.map(({ requestName }) => requestName)).toEqual(['none']);
  });
});
