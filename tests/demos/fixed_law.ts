import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { execa, execaSync } from 'execa';
import { vocabulary } from '../../src/cli/vocabulary.js';
import { openImage, readCoefficients } from '../../src/firmware/index.js';
import { type CompiledLoop, compileLoop } from '../../src/kernel/compile.js';
import { expandLoop } from '../../src/loop/expand.js';
import type { CoefficientValues } from '../../src/loop/parts.js';
import { loadSpec } from '../../src/spec/index.js';

/** Whether the tests against C are left out: only outside CI, and only where there is no compiler. */
export const withoutCompiler =
  execaSync('gcc', ['--version'], { reject: false }).exitCode !== 0 && process.env.CI !== 'true';

/** A demo: its spec, the image it is judged by, and its folder of firmware. */
export interface Demo {
  spec: string;
  firmware: string;
  image: string;
}

/** A demo's loop as it is judged, with traces of the named signals. @throws where the spec has errors */
export function compiledDemo({ spec: file, firmware, image }: Demo, traced: readonly string[]): CompiledLoop {
  const loaded = loadSpec(readFileSync(file, 'utf8'), file, vocabulary);
  if (loaded.kind !== 'spec') throw new Error(`${file} has errors`);
  const opened = openImage(readFileSync(join(firmware, image)), image);
  const { coefficients } = readCoefficients(opened, loaded.spec.firmware!.coefficients);
  const numbers: CoefficientValues = new Map(
    [...coefficients].map(([name, { elements }]) => [name, elements.map(({ value }) => value)]),
  );
  return compileLoop(expandLoop(loaded.spec, numbers), traced);
}

/** Compiles the demo's own sources with a driver for this machine and gives what it writes for what it reads. */
export async function outputOfC(
  { firmware }: Demo,
  sources: readonly string[],
  driver: string,
  input: Int32Array,
): Promise<Int32Array> {
  const folder = mkdtempSync(join(tmpdir(), 'pawl-demo-'));
  try {
    const program = join(folder, 'law');
    const files = [...sources.map((name) => join(firmware, name)), `tests/demos/${driver}`];
    const flags = ['-std=c11', '-O2', '-Wall', '-Wextra', '-Werror', `-I${firmware}`];
    await execa('gcc', [...flags, ...files, '-o', program]);
    const { stdout } = await execa(program, { input: new Uint8Array(input.buffer), encoding: 'buffer' });
    return new Int32Array(stdout.slice().buffer);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** A repeatable sequence of numbers from 0 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
export function uniform(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 0x7fffffff;
    return state / 0x7fffffff;
  };
}

/** Where two sequences first differ, in words; nothing where they are the same. */
export function firstDifference(actual: Int32Array, expected: Int32Array): string | undefined {
  if (actual.length !== expected.length) return `${actual.length} results for ${expected.length}`;
  const at = actual.findIndex((value, k) => value !== expected[k]);
  return at < 0 ? undefined : `result ${at}: ${actual[at]} for ${expected[at]}`;
}
