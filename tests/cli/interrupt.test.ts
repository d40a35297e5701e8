import { spawn } from 'node:child_process';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { progressLine } from '../../src/cli/progress_line.js';
import { Folder } from './in_process.js';
import { Workplace } from './workplace.js';

const quick = `pawl: 1
loop: quick
inputs: { target: {} }
plant: { speed: { lag: 1 s, of: drive } }
sensors: { seen: { of: speed } }
controllers: { law: { every: 50 ms, signals: { output: { value: target - seen } } } }
actuators: { drive: { of: output } }
scenarios: { step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } } }
requirements: [ { name: R1, measure: overshoot, of: speed, to: target, in: step, at_most: 20 % } ]
`;

describe('an interrupt', () => {
  it('ends a whole command with status 2 and one line, never with a pass and never with a trace', async () => {
    const place = new Workplace((text) => text.replace('plants: 8', 'plants: 100000'));
    place.write('a.pawl.yaml', quick);
    const command = spawn(
      process.execPath,
      [resolve('dist/cli/main.js'), 'check', '--skip-build', '--out', 'reports'],
      {
        cwd: place.folder,
      },
    );
    let output = '';
    let errors = '';
    command.stdout.on('data', (text) => {
      output += text;
    });
    command.stderr.on('data', (text) => {
      errors += text;
    });
    setTimeout(() => command.kill('SIGINT'), 3000);
    const status = await new Promise((ended) => command.on('close', ended));
    expect(status).toBe(2);
    expect(errors).toBe('axis.pawl.yaml: interrupted before it was finished; nothing of it is judged\n');
    expect(output).toContain('merge blocked');
    expect(output).toContain('met  R1');
    expect(place.read('reports/junit.xml')).toMatch(/<error [^>]*interrupted/);
    expect(JSON.parse(place.read('reports/run.json')).specs).toHaveLength(1);
    place.remove();
  });

  it('before the work begins leaves every spec unjudged', async () => {
    const folder = new Folder();
    folder.write('a.pawl.yaml', quick);
    folder.write('b.pawl.yaml', quick);
    const { status, errors } = await folder.run(['check'], { interrupted: AbortSignal.abort() });
    expect(status).toBe(2);
    expect(errors).toBe(
      'a.pawl.yaml: interrupted before it was begun\nb.pawl.yaml: interrupted before it was begun\n',
    );
    folder.remove();
  });
});

describe('the progress line', () => {
  it('tells how many runs are done, and is gone at the end', async () => {
    const folder = new Folder();
    folder.write('a.pawl.yaml', quick);
    const lines: string[] = [];
    await folder.run(['check'], { progress: (line) => lines.push(line) });
    expect(lines[0]).toBe('quick: reading the build');
    expect(lines).toContain('quick: 1 runs (200 independent plants asked for)');
    expect(lines.at(-1)).toBe('');
    folder.remove();
  });

  it('is written over itself, at most ten times a second, and never longer than the terminal is wide', () => {
    let time = 0;
    const written: string[] = [];
    const show = progressLine({ columns: 20, write: (text) => written.push(text) }, () => time);
    show('first');
    show('too soon');
    time = 100;
    show('a\nname that is far too long for it');
    show('');
    show('');
    expect(written).toHaveLength(3);
    expect(written[0]).toBe('\r\u001b[Kfirst');
    expect(written[1].length - '\r\u001b[K'.length).toBeLessThanOrEqual(19);
    expect(written[1]).not.toContain('\n');
    expect(written[2]).toBe('\r\u001b[K');
  });

  it('is not there in a log: a command whose output is no terminal writes nothing of it', async () => {
    const place = new Workplace();
    place.write('a.pawl.yaml', quick);
    expect((await place.pawl('check', 'a.pawl.yaml')).errors).toBe('');
    place.remove();
  });
});
