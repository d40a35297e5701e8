import { describe, expect, it } from 'vitest';
import {
  compiledDemo,
  type Demo,
  firstDifference,
  outputOfC,
  uniform,
  withoutCompiler,
} from './fixed_law.js';

const demo: Demo = {
  spec: 'specs/rootzone-heating/rootzone-heating.pawl.yaml',
  firmware: 'specs/rootzone-heating/firmware',
  image: 'rootzone.elf',
};
const samples = 10_000;
const one = 65536;

/** Triples of target, bed and outside temperature in steps of 2^-16 K; now and then far beyond any glasshouse. */
function temperatures(): Int32Array {
  const next = uniform(20261202);
  const result = new Int32Array(3 * samples);
  let [target, outside] = [0, 0];
  for (let k = 0; k < samples; k++) {
    if (k % 100 === 0) [target, outside] = [next() * 20, (next() - 0.5) * 40];
    const wild = k % 500 > 490 ? 3000 : 1;
    result.set(
      [target * wild, target + (next() - 0.5) * 8 * wild, outside * wild].map((x) => Math.round(x * one)),
      3 * k,
    );
  }
  return result;
}

function openingsOfLoop(input: Int32Array): Int32Array {
  const { loop, layout, compute } = compiledDemo(demo, ['opening']);
  const at = (sensor: string) => layout.reading + loop.readings.findIndex((one) => one.sensor === sensor);
  const target = layout.input + loop.inputs.indexOf('target');
  const [probe, weather] = [at('probe'), at('weather')];
  const m = new Float64Array(layout.length);
  return Int32Array.from({ length: samples }, (_, k) => {
    m[target] = input[3 * k] / one;
    m[probe] = input[3 * k + 1] / one;
    m[weather] = input[3 * k + 2] / one;
    compute[0](m);
    // The trace is in SI, a share; the firmware counts per cent.
    return Math.round(m[layout.latest] * 100 * one);
  });
}

describe.skipIf(withoutCompiler)('the root-zone demo’s controller', () => {
  it('gives the openings of its own C code, compiled for this machine, to the bit, over 10,000 samples', async () => {
    const input = temperatures();
    const expected = await outputOfC(demo, ['rootzone.c', 'rootzone_settings.c'], 'rootzone_driver.c', input);
    expect(expected).toHaveLength(samples);
    expect(firstDifference(openingsOfLoop(input), expected)).toBeUndefined();
    const atAnEnd = expected.filter((opening) => opening === 0 || opening === 100 * one).length;
    expect(atAnEnd).toBeGreaterThan(500);
    expect(atAnEnd).toBeLessThan(9_000);
  });
});
