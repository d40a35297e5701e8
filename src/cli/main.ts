#!/usr/bin/env node
import { runCommand } from './commands.js';
import { progressLine } from './progress_line.js';
import { type ExitStatus, Fault, isoDay } from './surroundings.js';
import { version } from './version.js';

const interrupt = new AbortController();
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) {
  process.on(signal, () => {
    if (!interrupt.signal.aborted) return interrupt.abort();
    process.stderr.write('interrupted again: ended at once, and reports may be missing\n');
    process.exit(2);
  });
}
// Who reads only the beginning of what is printed has seen enough.
process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code !== 'EPIPE') throw error;
  process.exit();
});
process.exitCode = await ended();

async function ended(): Promise<ExitStatus> {
  try {
    const status = await runCommand(process.argv.slice(2), {
      cwd: process.cwd(),
      print: (text) => process.stdout.write(text),
      complain: (text) => process.stderr.write(text),
      colour:
        process.stdout.isTTY === true && process.stdout.hasColors() && process.env.NO_COLOR === undefined,
      width: process.stdout.columns ?? 100,
      today: isoDay(new Date()),
      environment: process.env,
      progress: process.stderr.isTTY ? progressLine(process.stderr, Date.now) : undefined,
      interrupted: interrupt.signal,
    });
    return interrupt.signal.aborted ? 2 : status;
  } catch (error) {
    if (error instanceof Fault) process.stderr.write(`${error.lines.join('\n')}\n`);
    else if (interrupt.signal.aborted) process.stderr.write('interrupted\n');
    else process.stderr.write(bugReport(error));
    return 2;
  }
}

function bugReport(error: unknown): string {
  const trace = error instanceof Error ? error.stack : String(error);
  return `pawl ${version} failed; this is a bug in pawl, please report it with these lines:\n${trace}\n`;
}
