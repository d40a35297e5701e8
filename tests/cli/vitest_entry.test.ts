import { resolve } from 'node:path';
import { execa } from 'execa';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Folder } from './in_process.js';

const spec = `pawl: 1
loop: quick
inputs: { target: {} }
plant: { speed: { lag: 1 s, of: drive } }
sensors: { seen: { of: speed } }
controllers: { law: { every: 50 ms, signals: { output: { value: target - seen } } } }
actuators: { drive: { of: output } }
scenarios: { step: { lasts: 4 s, inputs: { target: { step: 1, at: 0.5 s } } } }
requirements:
  - { name: R1, measure: overshoot, of: speed, to: target, in: step, at_most: 20 % }
  - { name: R2, measure: largest_value, of: speed, in: step, at_most: 0.1 }
`;

interface Reported {
  success: boolean;
  testResults: {
    name: string;
    message: string;
    assertionResults: { title: string; status: string; failureMessages: string[] }[];
  }[];
}

/** vitest itself runs a test file as a user writes it, with the built package. */
describe('pawl/vitest', () => {
  let folder: Folder;
  let reported: Reported;
  beforeAll(async () => {
    folder = new Folder();
    folder.write('drive.pawl.yaml', spec);
    folder.write('broken.pawl.yaml', spec.replace('lag: 1 s', 'lag: 1 m'));
    for (const name of ['drive', 'broken']) {
      const entry = resolve('dist/vitest.js');
      folder.write(
        `${name}.test.mjs`,
        `import { testRequirements } from ${JSON.stringify(entry)};\ntestRequirements('${name}.pawl.yaml');\n`,
      );
    }
    const vitest = resolve('node_modules/vitest/vitest.mjs');
    const words = [vitest, 'run', '--root', folder.path, '--reporter', 'json'];
    const { stdout } = await execa('node', words, { cwd: folder.path, reject: false });
    reported = JSON.parse(stdout);
  });
  afterAll(() => folder.remove());

  const resultOf = (file: string) => reported.testResults.find(({ name }) => name.endsWith(`/${file}`))!;

  it('makes each requirement a test, which fails with the finding at its line in the spec', () => {
    expect(reported.success).toBe(false);
    const [first, second] = resultOf('drive.test.mjs').assertionResults;
    expect([first.title, first.status]).toEqual(['R1 overshoot', 'passed']);
    expect([second.title, second.status]).toEqual(['R2 largest_value', 'failed']);
    expect(second.failureMessages[0]).toMatch(/^broken: R2.*largest value.*0\.1/);
    expect(second.failureMessages[0]).toContain(`${resolve(folder.path, 'drive.pawl.yaml')}:11:`);
  });

  it('passes nothing where the spec is wrong', () => {
    const { message, assertionResults } = resultOf('broken.test.mjs');
    expect(assertionResults.filter(({ status }) => status === 'passed')).toEqual([]);
    expect(message).toContain('broken.pawl.yaml:4:');
  });
});
