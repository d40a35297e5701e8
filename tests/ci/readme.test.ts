import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { execa } from 'execa';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { quickDemo } from '../cli/workplace.js';

const readme = readFileSync('README.md', 'utf8');
const blocks = (language: string): string[] =>
  [...readme.matchAll(new RegExp(`\`\`\`${language}\\n(.*?)\`\`\``, 'gs'))].map(([, text]) => text);
const commands = blocks('sh').flatMap((text) => text.split('\n').filter((line) => line !== ''));
const pawlCommands = commands.filter((line) => line.startsWith('npx pawl '));

/** The commands as they stand there, in a copy of the demo, in their order: each may use what the one before wrote. */
describe('the README', () => {
  let folder: string;
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'pawl-readme-'));
    cpSync('specs/heliostat', join(folder, 'specs/heliostat'), { recursive: true });
    cpSync('reference/latched', join(folder, 'reference/latched'), { recursive: true });
    writeFileSync(join(folder, 'specs/heliostat/heliostat.pawl.yaml'), quickDemo());
    mkdirSync(join(folder, 'bin'));
    const built = resolve('dist/cli/main.js');
    writeFileSync(join(folder, 'bin/npx'), `#!/bin/sh\nshift\nexec node '${built}' "$@"\n`, { mode: 0o755 });
  });
  afterAll(() => rmSync(folder, { recursive: true }));

  it('has commands of every kind', () => {
    const kinds = new Set(pawlCommands.map((line) => line.split(' ')[2]));
    expect([...kinds].sort()).toEqual(['check', 'join', 'latch', 'read', 'replay', 'schema', 'start']);
  });

  it.each(pawlCommands)('%s', async (line) => {
    const expected = Number(/# ends with (\d)/.exec(line)?.[1] ?? 0);
    const ended = await execa('sh', ['-c', line], {
      cwd: folder,
      reject: false,
      env: {
        PATH: `${join(folder, 'bin')}:${process.env.PATH}`,
        GITHUB_ACTIONS: '',
        GITHUB_STEP_SUMMARY: '',
      },
    });
    expect(ended.exitCode, ended.stderr).toBe(expected);
    expect(ended.stderr).toBe('');
  });

  it('calls scripts of npm that there are', () => {
    const { scripts } = JSON.parse(readFileSync('package.json', 'utf8'));
    const called = commands
      .filter((line) => line.startsWith('npm'))
      .flatMap((line) => [...line.matchAll(/npm (?:run )?(\w+)/g)]);
    for (const [, script] of called) if (script !== 'ci') expect(Object.keys(scripts)).toContain(script);
    expect(called.length).toBeGreaterThanOrEqual(4);
  });

  it('names options that the commands have, also in the words between', async () => {
    const named = [...readme.matchAll(/pawl ([a-z]+)((?: +(?![&|#])[^\s`]+)*)/g)]
      .map(([, command, rest]) => ({ command, options: rest.match(/--[a-z-]+/g) ?? [] }))
      .filter(({ options }) => options.length > 0);
    for (const { command, options } of named) {
      const { stdout } = await execa('node', ['dist/cli/main.js', command, '--help']);
      for (const option of options) if (option !== '--help') expect(stdout).toContain(option);
    }
    expect(named.length).toBeGreaterThan(5);
  });

  it('imports what the package exports', async () => {
    const imports = blocks('ts').flatMap((text) => [
      ...text.matchAll(/import \{ (.*?) \} from 'pawl(\/\w+)?'/g),
    ]);
    const { exports } = JSON.parse(readFileSync('package.json', 'utf8'));
    for (const [, names, entry = ''] of imports) {
      const file = exports[`.${entry}`].default;
      const declared = readFileSync(file.replace(/\.js$/, '.d.ts'), 'utf8');
      for (const name of names.split(', ')) expect(declared).toContain(name);
    }
    expect(imports).toHaveLength(2);
  });
});
