#!/usr/bin/env node
import { runCommand } from './commands.js';
import { Fault } from './surroundings.js';
import { version } from './version.js';

try {
  process.exitCode = await runCommand(process.argv.slice(2), {
    cwd: process.cwd(),
    print: (text) => process.stdout.write(text),
    complain: (text) => process.stderr.write(text),
    colour: process.stdout.isTTY === true && process.stdout.hasColors() && process.env.NO_COLOR === undefined,
    width: process.stdout.columns ?? 100,
    environment: process.env,
  });
} catch (error) {
  process.exitCode = 2;
  if (error instanceof Fault) {
    process.stderr.write(`${error.lines.join('\n')}\n`);
  } else {
    const trace = error instanceof Error ? error.stack : String(error);
    process.stderr.write(
      `pawl ${version} failed; this is a bug in pawl, please report it with these lines:\n${trace}\n`,
    );
  }
}
