import { run } from './toolchain.js';

/** What the debugger says of one number. */
export type Answer = number | 'none';

/** What the debugger says of an image. */
export interface Answers {
  values: Map<string, Answer>;
  /** Lines in which variables are declared, by the declaration as C writes it, e.g. `const struct axis azimuth;`. */
  lines: Map<string, number>;
}

/**
 * Values of expressions in an image as `gdb-multiarch` reads them from the file, without running anything. Printed with 17
 * significant digits, which hold a float64 exactly (IEEE 754-2019, 5.12.2).
 */
export async function askDebugger(image: string, expressions: readonly string[]): Promise<Answers> {
  const questions = expressions.flatMap((expression) => [
    '-ex',
    `echo @${expression}@`,
    '-ex',
    `printf "%.17g", (double)(${expression})`,
    '-ex',
    'echo \\n',
  ]);
  const printed = await run('gdb-multiarch', ['-nx', '-batch', ...questions, '-ex', 'info variables', image]);
  const values = new Map<string, Answer>();
  for (const [, expression, value] of printed.matchAll(/@([^@\n]+)@(-?[\d.e+-]+|-?inf|-?nan\S*)?/g)) {
    values.set(expression, value === undefined ? 'none' : Number(value.replace('inf', 'Infinity')));
  }
  const lines = new Map(
    [...printed.matchAll(/^(\d+):\t(.*;)$/gm)].map(([, line, text]) => [text, Number(line)] as const),
  );
  return { values, lines };
}
