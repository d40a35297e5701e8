import { createHash } from 'node:crypto';
import { readFile, stat } from 'node:fs/promises';
import { FirmwareError, quoted } from './failure.js';
import { type ProgramLimits, watchGroup } from './process_group.js';

/** What to build, where, and what comes out. */
export interface BuildRequest extends ProgramLimits {
  /** Program and arguments; no shell is involved. */
  command: readonly string[];
  /** Folder to run it in. */
  cwd: string;
  /** The image which the build makes. */
  imagePath: string;
}

/** What a build did, for the report. */
export interface BuildRecord {
  command: string[];
  durationSeconds: number;
  /** Standard output and error as they came, the end of it where it is long. */
  output: string;
  /** The beginning of the output was left out. */
  outputCut: boolean;
  imagePath: string;
  /** The image is new, or its contents or time changed; `make` leaves it alone when nothing did. */
  refreshed: boolean;
}

/** Characters of output that are kept. */
const mostOutput = 64 * 1024;
const lastLines = 8;

/**
 * Runs a build command without a shell, ends it with all its children at the time limit or when it is interrupted, and checks
 * that the image is there.
 * @throws FirmwareError `build_failed`, `build_too_slow` or `image_missing`, with the last lines of the output
 */
export async function runBuild(request: BuildRequest): Promise<BuildRecord> {
  const [program, ...args] = request.command;
  if (program === undefined)
    throw new FirmwareError(
      'build_failed',
      'the build command is empty; expected a program and its arguments',
    );
  const before = await fingerprint(request.imagePath);
  const started = performance.now();
  const { output, outputCut, failure } = await run(program, args, request);
  const durationSeconds = (performance.now() - started) / 1000;
  if (failure) throw failure;
  const after = await fingerprint(request.imagePath);
  if (after === undefined) {
    throw new FirmwareError(
      'image_missing',
      `the build ${quoted(request.command.join(' '))} succeeded, but there is no image ${quoted(request.imagePath)} after it`,
    );
  }
  return {
    command: [...request.command],
    durationSeconds,
    output,
    outputCut,
    imagePath: request.imagePath,
    refreshed: before !== after,
  };
}

interface Outcome {
  output: string;
  outputCut: boolean;
  failure: FirmwareError | undefined;
}

async function run(program: string, args: string[], request: BuildRequest): Promise<Outcome> {
  // Loaded here, since most runs of the tool build nothing.
  const { execa } = await import('execa');
  let output = '';
  let outputCut = false;
  const subprocess = execa(program, args, {
    cwd: request.cwd,
    all: true,
    buffer: false,
    reject: false,
    stdin: 'ignore',
    detached: process.platform !== 'win32',
  });
  subprocess.all?.on('data', (chunk: Buffer) => {
    output += chunk.toString('utf8');
    if (output.length > 2 * mostOutput) {
      output = output.slice(-mostOutput);
      outputCut = true;
    }
  });
  const result = await watchGroup(subprocess, request);
  const command = quoted([program, ...args].join(' '));
  if (result === 'too slow' || result === 'interrupted') subprocess.all?.destroy();
  if (result === 'interrupted') {
    const failure = new FirmwareError('build_failed', `the build ${command} was interrupted`);
    return { output, outputCut, failure };
  }
  if (result === 'too slow') {
    const limit = `the build ${command} was ended after its time limit of ${request.timeLimitSeconds} s`;
    return { output, outputCut, failure: new FirmwareError('build_too_slow', limit + lastOf(output)) };
  }
  return { output, outputCut, failure: result.failed ? buildFailed(command, result, output) : undefined };
}

function buildFailed(
  command: string,
  result: { exitCode?: number; signal?: string; code?: string; cause?: unknown },
  output: string,
): FirmwareError {
  const why =
    result.exitCode !== undefined
      ? `ended with status ${result.exitCode}`
      : result.signal !== undefined
        ? `was ended by ${result.signal}`
        : result.code === 'ENOENT'
          ? 'could not be started: there is no such program or folder'
          : `could not be started: ${result.cause instanceof Error ? result.cause.message : (result.code ?? 'unknown cause')}`;
  return new FirmwareError('build_failed', `the build ${command} ${why}${lastOf(output)}`);
}

function lastOf(output: string): string {
  const lines = output
    .split('\n')
    .map((line) => line.trim())
    .filter((line) => line !== '');
  return lines.length === 0
    ? '; it printed nothing'
    : `; its last lines: ${lines.slice(-lastLines).join(' | ')}`;
}

/** Contents and time of the image, undefined when there is none. */
async function fingerprint(path: string): Promise<string | undefined> {
  try {
    const [bytes, { mtimeMs }] = await Promise.all([readFile(path), stat(path)]);
    return `${createHash('sha256').update(bytes).digest('hex')} ${mtimeMs}`;
  } catch {
    return undefined;
  }
}
