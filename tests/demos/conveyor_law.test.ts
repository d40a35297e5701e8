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
  spec: 'specs/grain-conveyor/grain-conveyor.pawl.yaml',
  firmware: 'specs/grain-conveyor/firmware',
  image: 'conveyor.elf',
};
const ratio = 10;
const speedSamples = 10_000;
const samples = ratio * speedSamples;
const one = 32768;

function q15(x: number): number {
  return Math.min(Math.max(Math.round(x * one), -one), one - 1);
}

/** Triples of target, speed and current; mostly near what was asked for, sometimes anywhere in the whole range. */
function shares(): Int32Array {
  const next = uniform(20261203);
  const result = new Int32Array(3 * samples);
  let [target, current] = [0, 0];
  for (let k = 0; k < samples; k++) {
    if (k % 2000 === 0) target = (next() - 0.5) * 2.2;
    const wild = k % 1000 > 950;
    current += 0.02 * (next() - 0.5 - 0.2 * current);
    const speed = wild ? (next() - 0.5) * 2.2 : target + 0.04 * (next() - 0.5);
    result.set([q15(target), q15(speed), q15(wild ? (next() - 0.5) * 2.2 : current)], 3 * k);
  }
  return result;
}

function answersOfLoop(input: Int32Array): Int32Array {
  const { loop, layout, compute } = compiledDemo(demo, ['current_target', 'asked']);
  const task = (name: string) => loop.tasks.findIndex((one) => one.name === name);
  const reading = (name: string) => layout.reading + loop.readings.findIndex((one) => one.sensor === name);
  const target = layout.input + loop.inputs.indexOf('target');
  const handed = loop.held.findIndex(({ name }) => name === 'current_target');
  const m = new Float64Array(layout.length);
  const result = new Int32Array(2 * samples);
  for (let k = 0; k < samples; k++) {
    m[target] = input[3 * k] / one;
    m[reading('encoder')] = input[3 * k + 1] / one;
    m[reading('shunt')] = input[3 * k + 2] / one;
    m[layout.held + handed] = m[layout.pending + handed];
    if (k % ratio === 0) compute[task('speed_task')](m);
    compute[task('current_task')](m);
    result.set([m[layout.latest] * one, m[layout.latest + 1] * one], 2 * k);
  }
  return result;
}

describe.skipIf(withoutCompiler)('the grain conveyor demo’s controllers', () => {
  it('give the currents and duties of their own C code to the bit, over 10,000 samples of the slower one', async () => {
    const input = shares();
    const expected = await outputOfC(demo, ['conveyor.c', 'conveyor_settings.c'], 'conveyor_driver.c', input);
    expect(expected).toHaveLength(2 * samples);
    expect(firstDifference(answersOfLoop(input), expected)).toBeUndefined();
    for (const [what, limit] of [0.75, 0.95].entries()) {
      const atAnEnd = expected.filter((x, i) => i % 2 === what && Math.abs(x) === Math.round(limit * one));
      expect(atAnEnd.length).toBeGreaterThan(samples / 100);
      expect(atAnEnd.length).toBeLessThan(0.9 * samples);
    }
  });
});
