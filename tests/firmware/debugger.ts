import { run } from './toolchain.js';

/** What the debugger says of one number: its bytes as a number, as exact text. */
export type Answer = number | 'none';

/**
 * Values of expressions in an image as `gdb-multiarch` reads them from the file, without running anything. Printed with 17
 * significant digits, which hold a float64 exactly (IEEE 754-2019, 5.12.2).
 */
export async function askDebugger(
  image: string,
  expressions: readonly string[],
): Promise<Map<string, Answer>> {
  const questions = expressions.flatMap((expression) => [
    '-ex',
    `echo @${expression}@`,
    '-ex',
    `printf "%.17g", (double)(${expression})`,
    '-ex',
    'echo \\n',
  ]);
  const printed = await run('gdb-multiarch', ['-nx', '-batch', ...questions, image]);
  const answers = new Map<string, Answer>();
  for (const [, expression, value] of printed.matchAll(/@([^@\n]+)@(-?[\d.e+-]+|-?inf|-?nan\S*)?/g)) {
    answers.set(expression, value === undefined ? 'none' : Number(value.replace('inf', 'Infinity')));
  }
  return answers;
}
