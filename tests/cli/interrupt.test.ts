import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
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

/** Starts the built command, and interrupts it as a terminal does: by a signal. */
class Running {
  private output = '';
  private errors = '';
  private readonly child: ChildProcess;
  private readonly closed: Promise<number | null>;

  constructor(folder: string, ...words: string[]) {
    this.child = spawn(process.execPath, [resolve('dist/cli/main.js'), ...words], { cwd: folder });
    this.child.stdout!.on('data', (text) => {
      this.output += text;
    });
    this.child.stderr!.on('data', (text) => {
      this.errors += text;
    });
    this.closed = new Promise((ended) => this.child.on('close', ended));
  }

  interrupt(): void {
    this.child.kill('SIGINT');
  }

  async ended(): Promise<{ status: number | null; output: string; errors: string }> {
    const status = await this.closed;
    return { status, output: this.output, errors: this.errors };
  }
}

/** Waits until something is so; its cap is the test's own limit. */
async function until(isSo: () => boolean): Promise<void> {
  while (!isSo()) await new Promise((later) => setTimeout(later, 20));
}

/** Whether a process is there; one that has ended but was not waited for is not. */
function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return !/^State:\s+Z/m.test(readFileSync(`/proc/${pid}/status`, 'utf8'));
  } catch {
    return false;
  }
}

describe('an interrupt while the build command runs', () => {
  let place: Workplace;
  beforeEach(() => {
    place = new Workplace((text) => text.replace(/build: \[.*\]/, 'build: [node, build.mjs]'));
    place.write('a.pawl.yaml', quick);
  });
  afterEach(() => place.remove());
  const pids = (): number[] => ['build.pid', 'child.pid'].map((name) => Number(place.read(name)));
  const isBuilding = (): boolean => existsSync(join(place.folder, 'child.pid'));
  /** Makes an image for ever, with a child that knows nothing; `heard` is what the build does when it is asked to end. */
  const build = (heard: string): void =>
    place.write(
      'build.mjs',
      `import { spawn } from 'node:child_process';
       import { renameSync, rmSync, writeFileSync } from 'node:fs';
       process.on('SIGTERM', () => { ${heard} });
       writeFileSync('firmware/half-made.elf', 'half');
       writeFileSync('build.pid', String(process.pid));
       const child = spawn(process.execPath, ['-e', 'setInterval(() => {}, 1000)'], { stdio: 'inherit' });
       writeFileSync('child.tmp', String(child.pid));
       renameSync('child.tmp', 'child.pid');
       setInterval(() => {}, 1000);`,
    );

  it('stops it with its children, lets it put things in order, and ends with status 2', async () => {
    build("rmSync('firmware/half-made.elf'); process.exit(1);");
    const command = new Running(place.folder, 'check', '--out', 'reports');
    await until(isBuilding);
    command.interrupt();
    const { status, output, errors } = await command.ended();
    expect(status).toBe(2);
    expect(errors).toBe('axis.pawl.yaml: interrupted before it was finished; nothing of it is judged\n');
    expect(pids().map(isAlive)).toEqual([false, false]);
    expect(existsSync(join(place.folder, 'firmware/half-made.elf'))).toBe(false);
    // What was finished before stands.
    expect(output).toContain('met  R1');
    expect(output).toContain('merge blocked');
    expect(place.read('reports/junit.xml')).toMatch(/<error [^>]*interrupted/);
    expect(JSON.parse(place.read('reports/run.json')).specs).toHaveLength(1);
  });

  it('ends one that does not listen', async () => {
    build('');
    const command = new Running(place.folder, 'check', place.spec, '--out', 'reports');
    await until(isBuilding);
    command.interrupt();
    expect((await command.ended()).status).toBe(2);
    expect(pids().map(isAlive)).toEqual([false, false]);
    expect(place.read('reports/junit.xml')).toMatch(/<error [^>]*interrupted/);
  });

  it('ends at once when it comes again', async () => {
    build("writeFileSync('heard', '');");
    const command = new Running(place.folder, 'check', place.spec, '--out', 'reports');
    await until(isBuilding);
    command.interrupt();
    await until(() => existsSync(join(place.folder, 'heard')));
    command.interrupt();
    const { status, errors } = await command.ended();
    expect(status).toBe(2);
    expect(errors).toBe('interrupted again: ended at once, and reports may be missing\n');
    expect(existsSync(join(place.folder, 'reports'))).toBe(false);
    await until(() => !pids().some(isAlive));
  });

  it.each(['latch', 'read'])('leaves nothing behind of pawl %s', async (name) => {
    build('process.exit(1);');
    const words = name === 'latch' ? [name, place.spec, '--reason', 'r'] : [name, place.spec];
    const command = new Running(place.folder, ...words);
    await until(isBuilding);
    command.interrupt();
    const { status, output, errors } = await command.ended();
    expect({ status, output }).toEqual({ status: 2, output: '' });
    expect(errors).toMatch(/interrupted/);
    expect(errors).not.toMatch(/^ {4}at /m);
    expect(pids().map(isAlive)).toEqual([false, false]);
    expect(existsSync(join(place.folder, '../../reference'))).toBe(false);
  });
});

describe('an interrupt while plants run', () => {
  it('ends a whole command with status 2 and one line, never with a pass and never with a trace', async () => {
    const place = new Workplace((text) =>
      text
        .replace('plants: 8', 'plants: 100000')
        .replace(/build: \[.*\]/, "build: [node, -e, \"require('fs').writeFileSync('built', '')\"]"),
    );
    place.write('a.pawl.yaml', quick);
    const command = new Running(place.folder, 'check', '--out', 'reports');
    await until(() => existsSync(join(place.folder, 'built')));
    await new Promise((later) => setTimeout(later, 500));
    command.interrupt();
    const { status, output, errors } = await command.ended();
    expect(status).toBe(2);
    expect(errors).toMatch(
      /^axis\.pawl\.yaml: interrupted before it was finished; (nothing of it is judged|no requirement of it is taken for met)\n$/,
    );
    expect(output).toContain('merge blocked');
    expect(output).toContain('met  R1');
    expect(output).not.toMatch(/met +AZ/);
    expect(place.read('reports/junit.xml')).toMatch(/<error [^>]*interrupted/);
    place.remove();
  });

  /** Interrupts when so many runs are told, or another line. */
  async function interruptedAt(folder: Folder, isTime: (line: string) => boolean, ...words: string[]) {
    const interrupt = new AbortController();
    const progress = (line: string): void => {
      if (isTime(line)) interrupt.abort();
    };
    const surroundings = { progress, interrupted: interrupt.signal };
    return folder.run([...words, 'axis.pawl.yaml', '--out', 'out'], surroundings);
  }
  const runsFrom = (least: number) => (line: string) =>
    Number(/: ([\d,]+) runs/.exec(line)?.[1].replace(',', '') ?? 0) >= least;
  /** A gain from 1 to 4: an overshoot of none, and a largest value of k/(1 + k), which is above 0.7 from k = 7/3 on. */
  const uncertain = (more = '') =>
    `${quick
      .replace('loop: quick', 'loop: quick\nparameters: { k: { nominal: 2, from: 1, to: 4 } }')
      .replace('of: drive }', 'of: drive, gain: k }')
      .replace(
        'at_most: 20 % } ]',
        'at_most: 20 % }, { name: R2, measure: largest_value, of: speed, in: step, at_most: 0.7 } ]',
      )}perturbation: { plants: 8, seed: 1 }\n${more}`;
  const found = (folder: Folder) => JSON.parse(folder.read('out/run.json')).specs[0];

  it('keeps what was tried, marked as partial: nothing of it is met or broken, and the numbers stand', async () => {
    const folder = new Folder();
    folder.write('axis.pawl.yaml', uncertain());
    const { status, output, errors } = await interruptedAt(folder, runsFrom(4), 'check');
    expect(status).toBe(2);
    expect(errors).toBe(
      'axis.pawl.yaml: interrupted before it was finished; no requirement of it is taken for met\n',
    );
    const { partial, requirements } = found(folder);
    expect(partial).toBe(true);
    // Nominal, both bounds alone and both corners, which are the same of one parameter: twice a gain of 4.
    expect(requirements).toMatchObject([
      {
        verdict: 'unjudged',
        why: expect.stringMatching(/^interrupted after 5 plants; none of them broke it/),
      },
      { verdict: 'unjudged', why: expect.stringMatching(/^interrupted after 5 plants; 2 of them broke it/) },
    ]);
    expect(requirements[1].worst).toBeCloseTo(4 / 5, 1);
    expect(requirements[1].claim).toBeNull();
    expect(output).toMatch(/unjudged +R2/);
    expect(folder.read('out/junit.xml')).not.toMatch(/<failure/);
    expect(folder.read('out/junit.xml').match(/<error/g)).toHaveLength(3);
    expect(folder.read('out/report.html')).toContain('interrupted');
    folder.remove();
  });

  it('before the first plants are settled leaves nothing', async () => {
    const folder = new Folder();
    folder.write('axis.pawl.yaml', uncertain());
    const ended = await interruptedAt(folder, runsFrom(1), 'check');
    expect(ended).toMatchObject({ status: 2, output: '' });
    expect(ended.errors).toBe(
      'axis.pawl.yaml: interrupted before it was finished; nothing of it is judged\n',
    );
    folder.remove();
  });

  it('while the latched numbers run, or a loss is shared out, leaves what is broken, and nothing as met', async () => {
    const folder = new Folder();
    const spec = uncertain('merge: { reference: kept.json, may_slip: 5 % }\n')
      .replace('inputs:', 'firmware: { command: [node, numbers.mjs], coefficients: { gain: gain } }\ninputs:')
      .replace('target - seen', 'gain * (target - seen)');
    folder.write('axis.pawl.yaml', spec.replace('at_most: 0.7', 'at_most: 0.9'));
    folder.write('numbers.mjs', 'console.log(\'{ "gain": 1 }\')');
    expect((await folder.run(['latch', '--reason', 'r'])).status).toBe(0);
    folder.write('axis.pawl.yaml', spec.replace('at_most: 20 %', 'at_most: 30 %'));
    folder.write('numbers.mjs', 'console.log(\'{ "gain": 1.5 }\')');
    const runs = (line: string): number => Number(/: ([\d,]+) runs/.exec(line)?.[1].replace(',', '') ?? 0);
    let all = 0;
    await interruptedAt(
      folder,
      (line) => {
        all = Math.max(all, runs(line));
        return false;
      },
      'check',
    );
    expect(found(folder).requirements[1].since_latched.attribution).toHaveLength(1);
    // The last runs are those of the latched numbers with and without the change.
    for (const before of [3, 12]) {
      const ended = await interruptedAt(folder, runsFrom(all - before), 'check');
      expect(ended.status).toBe(2);
      const { partial, requirements } = found(folder);
      expect(partial).toBe(true);
      expect(requirements).toMatchObject([
        {
          verdict: 'unjudged',
          why: expect.stringContaining('before it was held against the latched reference'),
        },
        { verdict: 'broken' },
      ]);
    }
    folder.remove();
  });

  it('latches nothing', async () => {
    const folder = new Folder();
    folder.write('axis.pawl.yaml', uncertain('merge: { reference: kept.json, may_slip: 5 % }\n'));
    const interrupt = new AbortController();
    const progress = (line: string): void => {
      if (runsFrom(4)(line)) interrupt.abort();
    };
    const ended = await folder.run(['latch', '--reason', 'r'], { progress, interrupted: interrupt.signal });
    expect(ended).toMatchObject({ status: 2, output: '' });
    expect(ended.errors).toMatch(/^nothing was latched:\naxis\.pawl\.yaml: interrupted/);
    expect(existsSync(join(folder.path, 'kept.json'))).toBe(false);
    folder.remove();
  });
});

describe('an interrupt', () => {
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
