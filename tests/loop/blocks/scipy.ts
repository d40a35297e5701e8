import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { execa } from 'execa';
import { env, python } from '../../scipy.js';

const script = fileURLToPath(new URL('./reference_blocks.py', import.meta.url));

/** Something that the script knows: its name and what it takes. */
export type Question = { ask: string } & Record<string, unknown>;

let ask: ((line: string) => Promise<string>) | undefined;

/** Starting Python takes longer than any answer: one process serves all files of tests, and ends with the one that asks. */
function start(): (line: string) => Promise<string> {
  const process = execa(python, [script], { env });
  const lines = createInterface({ input: process.stdout })[Symbol.asyncIterator]();
  return async (line) => {
    process.stdin.write(`${line}\n`);
    const { value, done } = await lines.next();
    if (done) throw new Error((await process.catch((error) => error)).message);
    return value;
  };
}

/** The answers of scipy (Virtanen and others, 2020) in the order of the questions. */
export async function answersOf<Answer = number[]>(questions: readonly Question[]): Promise<Answer[]> {
  ask ??= start();
  return JSON.parse(await ask(JSON.stringify(questions)));
}
