import { FirmwareError, quoted } from './failure.js';
import { type ProgramLimits, watchGroup } from './process_group.js';

/** A program to run without a shell. */
export interface ProgramRequest extends ProgramLimits {
  command: readonly string[];
  cwd: string;
  /** What the program reads from its standard input. */
  input?: string;
}

/** More output than this is no list of coefficients. */
const mostOutput = 64 * 1024 * 1024;

/**
 * Runs a program to its end and gives its standard output.
 * @throws FirmwareError `build_failed` or `build_too_slow`, with the last lines of its standard error
 */
export async function outputOf(request: ProgramRequest): Promise<string> {
  const [program, ...args] = request.command;
  const written = quoted(request.command.join(' '));
  if (program === undefined)
    throw new FirmwareError('build_failed', 'the command is empty; expected a program and its arguments');
  // Loaded here, since most runs of the tool start no program.
  const { execa } = await import('execa');
  const subprocess = execa(program, args, {
    cwd: request.cwd,
    reject: false,
    input: request.input ?? '',
    maxBuffer: mostOutput,
    stripFinalNewline: false,
    detached: process.platform !== 'win32',
  });
  const result = await watchGroup(subprocess, request);
  if (result === 'interrupted') throw new FirmwareError('build_failed', `${written} was interrupted`);
  if (result === 'too slow') {
    throw new FirmwareError(
      'build_too_slow',
      `${written} was ended after its time limit of ${request.timeLimitSeconds} s`,
    );
  }
  if (result.isMaxBuffer)
    throw new FirmwareError('build_failed', `${written} printed more than ${mostOutput} bytes`);
  if (!result.failed) return result.stdout;
  const lines = (result.stderr ?? '').trim().split('\n').slice(-6).join(' | ');
  const how =
    result.exitCode === undefined
      ? `could not be run (${result.code ?? result.signal})`
      : `ended with status ${result.exitCode}`;
  throw new FirmwareError('build_failed', `${written} ${how}${lines === '' ? '' : `: ${lines}`}`);
}
