import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { execa, execaSync } from 'execa';
import { afterAll, describe, expect, it } from 'vitest';
import { vocabulary } from '../../src/cli/vocabulary.js';
import { openImage, readCoefficients } from '../../src/firmware/index.js';
import { compileLoop } from '../../src/kernel/compile.js';
import { expandLoop } from '../../src/loop/expand.js';
import { loadSpec } from '../../src/spec/index.js';

const folder = mkdtempSync(join(tmpdir(), 'pawl-law-'));
const firmware = 'specs/heliostat/firmware';
const hasCompiler = execaSync('cc', ['--version'], { reject: false }).exitCode === 0;

/** A repeatable sequence of numbers from 0 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
function uniform(): () => number {
  let state = 20261201;
  return () => {
    state = (state * 48271) % 0x7fffffff;
    return state / 0x7fffffff;
  };
}

/** 10,000 pairs of target and encoder angle: a wandering target, an encoder that follows it roughly. */
function samples(): Float32Array {
  const next = uniform();
  const pairs = new Float32Array(20_000);
  let target = 0;
  for (let i = 0; i < pairs.length; i += 2) {
    if (i % 400 === 0) target = (next() - 0.5) * 2;
    pairs[i] = target;
    pairs[i + 1] = target * next() + (next() - 0.5) * 0.01;
  }
  return pairs;
}

async function dutiesOfC(pairs: Float32Array): Promise<Float32Array> {
  const program = join(folder, 'law');
  const sources = ['azimuth.c', 'azimuth_settings.c'].map((name) => join(firmware, name));
  const flags = ['-std=c11', '-O2', '-ffp-contract=off', `-I${firmware}`];
  await execa('cc', [...flags, ...sources, 'tests/loop/control_law_driver.c', '-o', program]);
  const { stdout } = await execa(program, { input: new Uint8Array(pairs.buffer), encoding: 'buffer' });
  return new Float32Array(stdout.slice().buffer);
}

function dutiesOfLoop(pairs: Float32Array): Float32Array {
  const file = 'specs/heliostat/heliostat.pawl.yaml';
  const loaded = loadSpec(readFileSync(file, 'utf8'), file, vocabulary);
  if (loaded.kind !== 'spec') throw new Error('the demo spec has errors');
  const image = openImage(readFileSync(join(firmware, 'azimuth.elf')), 'azimuth.elf');
  const { coefficients } = readCoefficients(image, loaded.spec.firmware!.coefficients);
  const numbers = new Map(
    [...coefficients].map(([name, { elements }]) => [name, elements.map(({ value }) => value)]),
  );
  const { layout, compute } = compileLoop(expandLoop(loaded.spec, numbers), ['command']);
  const m = new Float64Array(layout.length);
  return Float32Array.from({ length: pairs.length / 2 }, (_, k) => {
    m[layout.input] = pairs[2 * k];
    m[layout.reading] = pairs[2 * k + 1];
    compute[0](m);
    return m[layout.latest];
  });
}

describe.skipIf(!hasCompiler && process.env.CI !== 'true')('the demo’s controller', () => {
  afterAll(() => rmSync(folder, { recursive: true }));

  it('gives the duties of its own C code, compiled for this machine, to the bit, over 10,000 samples', async () => {
    const pairs = samples();
    const [expected, actual] = [await dutiesOfC(pairs), dutiesOfLoop(pairs)];
    expect(expected).toHaveLength(10_000);
    const wrong = [...actual].findIndex((duty, k) => !Object.is(duty, expected[k]));
    expect(wrong, `sample ${wrong}: ${actual[wrong]} for ${expected[wrong]}`).toBe(-1);
    const saturated = expected.filter((duty) => Math.abs(duty) === 1).length;
    expect(saturated).toBeGreaterThan(100);
    expect(saturated).toBeLessThan(9_900);
  });
});
