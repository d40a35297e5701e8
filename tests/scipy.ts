import { fileURLToPath } from 'node:url';
import { execa } from 'execa';

/** Debian's, which CI installs; another one in the path may lack scipy. */
export const python = '/usr/bin/python3';

/** What is handed to scipy is small: more than one thread would only wait. */
export const env = { OPENBLAS_NUM_THREADS: '1', OMP_NUM_THREADS: '1' };

const parts = 'import scipy.integrate, scipy.linalg, scipy.optimize, scipy.signal';

async function hasScipy(): Promise<boolean> {
  const { failed } = await execa(python, ['-c', parts], { reject: false });
  return !failed;
}

/** Whether scipy can be asked. In CI the reference must be there: a missing one fails instead of passing unseen. */
export const scipyAvailable = process.env.CI === 'true' || (await hasScipy());

/**
 * What a script makes with scipy (Virtanen and others, 2020) of a question, both JSON.
 * @param script of Python, which reads the question from its standard input and prints the answer.
 */
export async function askScipy<Answer>(script: URL, question: unknown): Promise<Answer> {
  const { stdout } = await execa(python, [fileURLToPath(script)], { input: JSON.stringify(question), env });
  return JSON.parse(stdout);
}
