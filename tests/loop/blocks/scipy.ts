import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { execa } from 'execa';

const PYTHON = '/usr/bin/python3';
const script = fileURLToPath(new URL('./reference_blocks.py', import.meta.url));
// The arrays are small: more than one thread would only wait.
const env = { OPENBLAS_NUM_THREADS: '1', OMP_NUM_THREADS: '1' };

async function hasScipy(): Promise<boolean> {
  const { failed } = await execa(PYTHON, ['-c', 'import scipy.signal'], { reject: false });
  return !failed;
}

/** Whether scipy can be asked. In CI the reference must be there: a missing one fails instead of passing unseen. */
export const scipyAvailable = process.env.CI === 'true' || (await hasScipy());

/** Something that the script knows: its name and what it takes. */
export type Question = { ask: string } & Record<string, unknown>;

let ask: ((line: string) => Promise<string>) | undefined;

/** Starting Python takes longer than any answer: one process serves all files of tests, and ends with the one that asks. */
function start(): (line: string) => Promise<string> {
  const python = execa(PYTHON, [script], { env });
  const lines = createInterface({ input: python.stdout })[Symbol.asyncIterator]();
  return async (line) => {
    python.stdin.write(`${line}\n`);
    const { value, done } = await lines.next();
    if (done) throw new Error((await python.catch((error) => error)).message);
    return value;
  };
}

/** The answers of scipy (Virtanen and others, 2020) in the order of the questions. */
export async function answersOf<Answer = number[]>(questions: readonly Question[]): Promise<Answer[]> {
  ask ??= start();
  return JSON.parse(await ask(JSON.stringify(questions)));
}
