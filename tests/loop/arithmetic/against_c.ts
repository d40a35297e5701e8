import { mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { execa, execaSync } from 'execa';
import { compileLoop } from '../../../src/kernel/compile.js';
import { expandLoop } from '../../../src/loop/expand.js';
import type { CoefficientValues } from '../../../src/loop/parts.js';
import { specOf } from '../spec_of.js';

const hasCompiler = execaSync('gcc', ['--version'], { reject: false }).exitCode === 0;

/** Whether comparisons with C are left out: only on a developer's machine without a compiler. */
export const withoutCompiler = !hasCompiler && process.env.CI !== 'true';

/** Compiles C files for this machine and gives the program. */
export async function compiledC(files: readonly string[], ...flags: string[]): Promise<string> {
  const program = join(mkdtempSync(join(tmpdir(), 'pawl-arithmetic-')), 'program');
  await execa('gcc', ['-std=c11', '-O2', ...flags, ...files, '-o', program, '-lm']);
  return program;
}

/** What a program makes of the bytes of an array. */
export async function outputOf(
  program: string,
  args: string[],
  input: ArrayBufferView,
): Promise<ArrayBuffer> {
  const bytes = new Uint8Array(input.buffer, input.byteOffset, input.byteLength);
  const { stdout } = await execa(program, args, { input: bytes, encoding: 'buffer' });
  return stdout.slice().buffer as ArrayBuffer;
}

/** A repeatable sequence of numbers from 0 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
export function uniform(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 0x7fffffff;
    return state / 0x7fffffff;
  };
}

/** A controller alone: its arithmetic, its signals, of which `command` is the output, and what it reads. */
export interface Law {
  arithmetic: string;
  signals: string;
  reads: readonly string[];
  coefficients?: CoefficientValues;
}

/** The outputs of a law for rows of readings, and how the loop counts its overflows. */
export function outputsOfLaw(law: Law, rows: ArrayLike<number>, traced = 'command'): Float64Array {
  const loop = loopOf(law);
  const { layout, compute } = compileLoop(loop, [traced]);
  const m = new Float64Array(layout.length);
  const places = law.reads.map(
    (name) => layout.reading + loop.readings.findIndex(({ sensor }) => sensor === name),
  );
  return Float64Array.from({ length: rows.length / places.length }, (_, row) => {
    for (const [i, place] of places.entries()) m[place] = rows[row * places.length + i];
    compute[0](m);
    return m[layout.latest];
  });
}

/** The loop of a law around a plant that does not matter. */
export function loopOf(law: Law): ReturnType<typeof expandLoop> {
  const coefficients = law.coefficients ?? new Map();
  const firmware =
    coefficients.size === 0
      ? ''
      : `firmware: { image: a.elf, coefficients: { ${[...coefficients.keys()].map((name) => `${name}: ${name}`)} } }`;
  const spec = specOf(`
${firmware}
plant: { position: { lag: 1 s, of: drive } }
sensors: { ${law.reads.map((name) => `${name}: { of: position }`)} }
controllers:
  law:
    every: 1 ms
    arithmetic: ${law.arithmetic}
    signals:
${law.signals.replaceAll(/^/gm, '      ')}
actuators: { drive: { of: command } }
scenarios: { rest: { lasts: 1 s, inputs: {} } }
requirements: [{ name: R, measure: peak_deviation, of: position, to: position, in: rest, at_most: 1 }]
`);
  return expandLoop(spec, coefficients);
}

/** Flags with which the compiler fuses products and sums for this machine; undefined where it has no such operation. */
export const fuses: string[] | undefined = fusingFlags();

function fusingFlags(): string[] | undefined {
  const contract = '-ffp-contract=fast';
  if (process.arch === 'arm64') return [contract];
  const has = process.arch === 'x64' && / fma /.test(readFileSync('/proc/cpuinfo', 'utf8'));
  return has ? [contract, '-mfma'] : undefined;
}
