import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import {
  candidates,
  describeImage,
  FirmwareError,
  matchPaths,
  openCommand,
  readCoefficient,
  runBuild,
} from '../../src/firmware/index.js';
import { freshFolder } from './toolchain.js';

/** A build is run without a shell, under a limit, and leaves nothing behind; what it printed is kept. */
const node = process.execPath;

function script(folder: string, code: string): string[] {
  writeFileSync(join(folder, 'build.cjs'), code);
  return [node, 'build.cjs'];
}

async function failureOf(work: Promise<unknown>): Promise<FirmwareError> {
  const error = await work.then(
    () => undefined,
    (caught: unknown) => caught,
  );
  expect(error).toBeInstanceOf(FirmwareError);
  return error as FirmwareError;
}

const makeImage = "require('node:fs').writeFileSync('a.elf', 'image ' + (process.argv[2] ?? ''));";

describe('a build', () => {
  const request = (cwd: string, command: readonly string[], timeLimitSeconds = 20) => ({
    command,
    cwd,
    timeLimitSeconds,
    imagePath: join(cwd, 'a.elf'),
  });

  test('makes the image, and its output is kept', async () => {
    const cwd = freshFolder();
    const command = script(cwd, `${makeImage} console.log('compiling'); console.error('a warning');`);
    const record = await runBuild(request(cwd, command));
    expect(record).toMatchObject({
      command,
      refreshed: true,
      outputCut: false,
      imagePath: join(cwd, 'a.elf'),
    });
    expect(record.output).toContain('compiling');
    expect(record.output).toContain('a warning');
    expect(record.durationSeconds).toBeGreaterThan(0);
  });

  test('that leaves the image as it was says so, and is no error: make decides what is new', async () => {
    const cwd = freshFolder();
    writeFileSync(join(cwd, 'a.elf'), 'old');
    expect((await runBuild(request(cwd, script(cwd, '')))).refreshed).toBe(false);
    expect((await runBuild(request(cwd, script(cwd, makeImage)))).refreshed).toBe(true);
  });

  test('gets its arguments as they are: there is no shell', async () => {
    const cwd = freshFolder();
    await runBuild(request(cwd, [...script(cwd, makeImage), '$HOME; touch evil && *']));
    expect(readFileSync(join(cwd, 'a.elf'), 'utf8')).toBe('image $HOME; touch evil && *');
    expect(existsSync(join(cwd, 'evil'))).toBe(false);
  });

  test('that fails is an error with the last lines', async () => {
    const cwd = freshFolder();
    const lines =
      "for (let i = 1; i <= 20; i++) console.log('line ' + i); console.error('gains.c:3: error: no such unit'); process.exit(2);";
    const error = await failureOf(runBuild(request(cwd, script(cwd, lines))));
    expect(error.code).toBe('build_failed');
    expect(error.message).toMatch(
      /ended with status 2; its last lines: .*line 20.*gains\.c:3: error: no such unit/,
    );
    expect(error.message).not.toContain('line 5 ');
    expect(error.message).not.toContain('\n');
  });

  test.each([
    [['no-such-program-at-all'], /could not be started: there is no such program or folder/],
    [[], /the build command is empty/],
  ])('%j cannot be started', async (command, message) => {
    const error = await failureOf(runBuild(request(freshFolder(), command)));
    expect(error.code).toBe('build_failed');
    expect(error.message).toMatch(message);
  });

  test('that succeeds without an image', async () => {
    const cwd = freshFolder();
    const error = await failureOf(runBuild(request(cwd, script(cwd, ''))));
    expect(error.code).toBe('image_missing');
    expect(error.message).toMatch(/succeeded, but there is no image/);
  });

  test('that takes too long is ended with its children', async () => {
    const cwd = freshFolder();
    const code = `const { spawn } = require('node:child_process');
      const child = spawn(process.execPath, ['-e', 'setInterval(() => {}, 1000)'], { stdio: 'inherit' });
      require('node:fs').writeFileSync('child', String(child.pid));
      console.log('working'); setInterval(() => {}, 1000);`;
    const error = await failureOf(runBuild(request(cwd, script(cwd, code), 2)));
    expect(error.code).toBe('build_too_slow');
    expect(error.message).toMatch(/ended after its time limit of 2 s.*working/);
    const child = Number(readFileSync(join(cwd, 'child'), 'utf8'));
    expect(await isGone(child)).toBe(true);
  });

  test.each([100, 0])(
    'that is interrupted %i ms after its start is ended with its children',
    async (after) => {
      const cwd = freshFolder();
      const code = `require('node:child_process').spawn(process.execPath, ['-e', 'setInterval(() => {}, 1000)'], { stdio: 'inherit' });
      require('node:fs').writeFileSync('pid', String(process.pid)); setInterval(() => {}, 1000);`;
      const interrupted = after === 0 ? AbortSignal.abort() : AbortSignal.timeout(after);
      const error = await failureOf(runBuild({ ...request(cwd, script(cwd, code)), interrupted }));
      expect(error.code).toBe('build_failed');
      expect(error.message).toMatch(/^the build .* was interrupted$/);
      if (existsSync(join(cwd, 'pid')))
        expect(await isGone(Number(readFileSync(join(cwd, 'pid'), 'utf8')))).toBe(true);
    },
  );

  test('that prints without end keeps only the end', async () => {
    const cwd = freshFolder();
    const code = `${makeImage} for (let i = 0; i < 40000; i++) console.log('line ' + i + ' of a very talkative compiler');`;
    const record = await runBuild(request(cwd, script(cwd, code)));
    expect(record.outputCut).toBe(true);
    expect(record.output.length).toBeLessThan(200_000);
    expect(record.output).toContain('line 39999');
  });

  test('listens to no signal any more once it is over', async () => {
    const before = process.listenerCount('SIGINT') + process.listenerCount('exit');
    const cwd = freshFolder();
    await runBuild(request(cwd, script(cwd, makeImage)));
    expect(process.listenerCount('SIGINT') + process.listenerCount('exit')).toBe(before);
  });
});

/** Whether a process ends within two seconds; one that has ended but was not waited for counts as gone. */
async function isGone(pid: number): Promise<boolean> {
  for (let round = 0; round < 40; round++) {
    try {
      process.kill(pid, 0);
      if (/^State:\s+Z/m.test(readFileSync(`/proc/${pid}/status`, 'utf8'))) return true;
    } catch {
      return true;
    }
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  return false;
}

describe('a program which prints coefficients', () => {
  const open = (printed: string) =>
    openCommand({
      command: [node, '-e', `process.stdout.write(${JSON.stringify(printed)})`],
      cwd: freshFolder(),
    });
  const asked = (at: string, format?: string) => ({ name: 'gain', at, format });

  test('gives numbers, tables, and objects of them', async () => {
    const image = await open('{"kp": 1.25, "axis": {"notch": [1, 2, 3], "grid": [[1, 2], [3, 4]]}}');
    expect(readCoefficient(image, asked('kp'))).toMatchObject({
      type: 'number',
      format: { kind: 'float', bits: 64 },
      shape: [],
      elements: [{ value: 1.25, address: undefined }],
    });
    expect(readCoefficient(image, asked('axis.grid'))).toMatchObject({
      shape: [2, 2],
      elements: [{ value: 1 }, { value: 2 }, { value: 3 }, { value: 4 }],
    });
    expect(readCoefficient(image, asked('axis.grid[1][0]')).elements[0].value).toBe(3);
  });

  test('a format rounds floats to the nearest, and takes stored integers', async () => {
    const image = await open('{"kp": 0.1, "raw": 16384, "big": 70000}');
    expect(readCoefficient(image, asked('kp', 'float32')).elements[0]).toMatchObject({
      value: Math.fround(0.1),
      stored: '0x3dcccccd',
    });
    expect(readCoefficient(image, asked('raw', 'Q2.14')).elements[0]).toMatchObject({
      value: 1,
      stored: '0x4000',
    });
    expect(() => readCoefficient(image, asked('big', 'int16'))).toThrow(
      /is 70000, which does not fit the 16 bits of int16/,
    );
    expect(() => readCoefficient(image, asked('kp', 'Q1.15'))).toThrow(/stores integers only/);
    expect(() => readCoefficient(image, asked('kp', 'float16'))).toThrow(/is no float16/);
    expect(readCoefficient(image, asked('raw', 'float16')).elements[0].stored).toBe('0x7400');
  });

  test.each([
    ['text', '{"kp": "1.25"}', 'kp', /printed "1\.25", expected a number/],
    ['nothing', '{"kp": null}', 'kp', /printed null, expected a number/],
    ['a ragged table', '{"kp": [[1, 2], [3]]}', 'kp', /a table whose rows have different lengths/],
    ['an empty table', '{"kp": []}', 'kp', /is an empty table/],
    ['an object', '{"kp": {"a": 1}}', 'kp', /name one of its members, as in kp\.a/],
    ['another name', '{"kp": 1}', 'kq', /has no “kq”; nearest: “kp”/],
    ['a name of every object', '{"kp": 1}', 'constructor', /has no “constructor”/],
  ])('%s is an error', async (_, printed, at, message) => {
    await expect(() => open(printed).then((image) => readCoefficient(image, asked(at)))).rejects.toThrow(
      message,
    );
  });

  test.each([
    ['kp = 1', /is not JSON/],
    ['[1, 2]', /is no JSON object; expected \{ "kp": 1\.25/],
    ['', /is not JSON/],
  ])('output %j is an error', async (printed, message) => {
    await expect(open(printed)).rejects.toThrow(message);
  });

  test('a program that fails is an error with its words', async () => {
    const command = [node, '-e', "console.error('no gains today'); process.exit(3)"];
    await expect(openCommand({ command, cwd: freshFolder() })).rejects.toThrow(
      /ended with status 3: no gains today/,
    );
    const forever = [node, '-e', 'setInterval(() => {}, 1000)'];
    await expect(
      openCommand({ command: forever, cwd: freshFolder(), timeLimitSeconds: 0.5 }),
    ).rejects.toThrow(/time limit of 0\.5 s/);
  });

  test('its values are listed by a wildcard; a first spec is made of an ELF image only', async () => {
    const image = await open('{"kp": 1, "axis": {"ki": 2, "note": "x", "notch": [1, 2]}}');
    expect(matchPaths(image, '**')).toEqual(['kp', 'axis.ki', 'axis.notch']);
    expect(matchPaths(image, 'axis.notch[*]')).toEqual(['axis.notch[0]', 'axis.notch[1]']);
    expect(() => candidates(image)).toThrow(
      /is no ELF image: its values are listed by a wildcard such as \*\*/,
    );
    expect(describeImage(image)).toMatchObject({ kind: 'command', machine: undefined, byteOrder: undefined });
  });

  test('addresses mean nothing to it', async () => {
    const image = await open('{"kp": 1}');
    expect(() => readCoefficient(image, { ...asked('kp', 'int8'), address: 16 })).toThrow(
      /has no addresses: give a name instead/,
    );
  });
});
