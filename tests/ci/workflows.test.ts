import { execFileSync } from 'node:child_process';
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { parse } from 'yaml';

/** What GitHub's own language service finds wrong, one line each. */
function faults(path: string, text: string): string[] {
  const printed = execFileSync('node', ['tests/ci/lint_workflow.mjs', path], {
    input: text,
    encoding: 'utf8',
  });
  return printed.split('\n').filter((line) => line !== '');
}

const action = '.github/actions/pawl/action.yml';
const workflows = readdirSync('.github/workflows').map((name) => `.github/workflows/${name}`);
const snippets = [...readFileSync('README.md', 'utf8').matchAll(/```yaml\n(.*?)```/gs)]
  .map(([, text]) => text)
  .filter((text) => text.includes('runs-on'));

describe('the workflows', () => {
  it.each([...workflows, action])('%s is as GitHub reads it', (path) => {
    expect(faults(path, readFileSync(path, 'utf8'))).toEqual([]);
  });

  it('the linter sees a fault where there is one', () => {
    const text = readFileSync('.github/workflows/ci.yml', 'utf8');
    expect(faults('.github/workflows/ci.yml', text.replace('runs-on:', 'run-on:'))).not.toEqual([]);
    expect(faults('.github/workflows/ci.yml', text.replace('github.ref', 'github.reff('))).not.toEqual([]);
    const own = readFileSync(action, 'utf8');
    expect(faults(action, own.replace('using: composite', 'using: compost'))).not.toEqual([]);
  });

  it('call what is there: the project’s own script and its own action', () => {
    for (const path of workflows) {
      const { jobs } = parse(readFileSync(path, 'utf8'));
      const steps = Object.values(jobs).flatMap((job) => (job as { steps: Record<string, string>[] }).steps);
      for (const { uses, run } of steps) {
        if (uses?.startsWith('./')) expect(existsSync(join(uses, 'action.yml'))).toBe(true);
        if (run?.startsWith('bash ')) expect(existsSync(run.slice('bash '.length))).toBe(true);
      }
    }
  });

  it('hand no input to a shell but through the environment, where its text cannot become a command', () => {
    for (const path of [...workflows, action]) {
      const runs = JSON.stringify(parse(readFileSync(path, 'utf8')), (key, value) =>
        key === 'env' || key === 'with' || key === 'if' ? undefined : value,
      );
      const commands = [...runs.matchAll(/"run":"((?:[^"\\]|\\.)*)"/g)].map(([, text]) => text);
      for (const command of commands) expect(command).not.toContain('${{');
    }
  });

  it('the shell of the action is well formed, and gives the command what the inputs say', () => {
    const { steps } = parse(readFileSync(action, 'utf8')).runs;
    const judge = steps.find(({ name }: { name: string }) => name === 'Judge');
    const script = judge.run.replaceAll('node "$PAWL_ROOT/dist/cli/main.js"', 'printf "<%s>"');
    const words = (env: Record<string, string>): string =>
      execFileSync('bash', ['--noprofile', '--norc', '-e', '-o', 'pipefail', '-c', script], {
        cwd: resolve('tests/ci'),
        encoding: 'utf8',
        env: {
          PATH: process.env.PATH,
          PAWL_OUT: 'out',
          PAWL_SPECS: '',
          PAWL_SKIP_BUILD: 'false',
          PAWL_PART: '',
          PAWL_OF: '',
          PAWL_JOIN: '',
          ...env,
        },
      });
    expect(words({})).toBe('<check><--out><out>');
    expect(words({ PAWL_SPECS: 'a b.pawl.yaml\nc.pawl.yaml\n', PAWL_SKIP_BUILD: 'true' })).toBe(
      '<check><a b.pawl.yaml><c.pawl.yaml><--skip-build><--out><out>',
    );
    expect(words({ PAWL_PART: '3', PAWL_OF: '8', PAWL_OUT: '$(touch x)' })).toBe(
      '<check><--part><3><--of><8><--out><$(touch x)>',
    );
    expect(words({ PAWL_JOIN: 'none' })).toBe('<join><--out><out>');
  });
});

describe('the workflows in the README', () => {
  it.each(snippets.map((text, at) => [at + 1, text] as const))(
    'number %i is as GitHub reads it, and gives the action inputs that it has',
    (_, text) => {
      expect(faults('.github/workflows/pawl.yml', text)).toEqual([]);
      const { jobs } = parse(text);
      const inputs = Object.keys(parse(readFileSync(action, 'utf8')).inputs);
      const steps = Object.values(jobs).flatMap((job) => (job as { steps: Record<string, never>[] }).steps);
      const own = steps.filter(({ uses }) => String(uses).includes('/.github/actions/pawl@'));
      expect(own.length).toBeGreaterThan(0);
      for (const step of own)
        for (const input of Object.keys(step.with ?? {})) expect(inputs).toContain(input);
    },
  );
});
