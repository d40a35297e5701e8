import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { execa, execaSync } from 'execa';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { noise, outputs } from './law.js';

const folder = mkdtempSync(join(tmpdir(), 'pawl-pid-'));
const hasCompiler = execaSync('cc', ['--version'], { reject: false }).exitCode === 0;

const count = 10_000;

/** Rows of measurement, target, manual value and hand switch: jumping targets, and a measurement that follows roughly. */
function samples(): Float32Array {
  const random = noise(3 * count);
  const rows = new Float32Array(4 * count);
  let target = 0;
  for (let k = 0; k < count; k++) {
    if (k % 150 === 0) target = random[3 * k];
    rows[4 * k] = target * (0.6 + 0.4 * random[3 * k + 1]) + 0.02 * random[3 * k + 2];
    rows[4 * k + 1] = target;
    rows[4 * k + 2] = 0.9 * random[3 * k + 1];
    rows[4 * k + 3] = k % 400 < 60 ? 1 : 0;
  }
  return rows;
}

const forms = ['parallel', 'standard', 'interacting'];
const windups = ['none', 'hold_integral', 'bound_integral', 'pull_back'];
const rules = ['backward', 'forward', 'trapezoid'];

interface Variant {
  perSample: boolean;
  filtered: boolean;
  weighted: boolean;
  bumpless: boolean;
}

const variants: Variant[] = [0, 1, 2, 3].map((at) => ({
  perSample: at >= 2,
  filtered: at % 2 === 0,
  weighted: at === 1 || at === 2,
  bumpless: at === 3,
}));

function signal(form: string, windup: string, rule: string, variant: Variant): string {
  const { perSample, filtered, weighted, bumpless } = variant;
  const parallel = perSample ? 'ki: 0.02, kd: 1.5' : 'ki: 2.1 1/s, kd: 0.02 s';
  const times = perSample
    ? 'integral_time: 40, derivative_time: 1.75'
    : 'integral_time: 0.37 s, derivative_time: 0.015 s';
  const settings = [
    `form: ${form}, kp: 1.3, sum_by: ${rule}, gains: ${perSample ? 'per_sample' : 'per_second'}`,
    form === 'parallel' ? parallel : times,
    ...(filtered ? ['derivative_corner: 25 rad/s'] : []),
    ...(weighted ? ['target_weight: 0.6, derivative_target_weight: 0'] : []),
    ...(bumpless ? ['bumpless_start: 0.25, track: manual, track_when: hand'] : []),
    ...(windup === 'none' ? [] : [`anti_windup: ${windup}`]),
    ...(windup === 'pull_back' ? [`pull_back_time: ${perSample ? '25' : '0.21 s'}`] : []),
  ];
  const idle = bumpless ? 'target' : 'target + 0*manual*hand';
  return `out: { pid: { ${settings.join(', ')} }, of: { target: ${idle}, measurement: x }, range: [-1, 0.8] }`;
}

describe.skipIf(!hasCompiler && process.env.CI !== 'true')('pid against C compiled for this machine', () => {
  const rows = samples();
  const given = Array.from({ length: count }, (_, k) => [...rows.subarray(4 * k, 4 * k + 4)]);
  let all: Float32Array;

  beforeAll(async () => {
    const program = join(folder, 'pid');
    const flags = ['-std=c11', '-O1', '-Wall', '-Wextra', '-Werror', '-ffp-contract=off'];
    await execa('cc', [...flags, 'tests/loop/blocks/pid_law.c', '-o', program]);
    const { stdout } = await execa(program, {
      input: new Uint8Array(rows.buffer),
      encoding: 'buffer',
      maxBuffer: 1e9,
    });
    all = new Float32Array(stdout.slice().buffer);
  });
  afterAll(() => rmSync(folder, { recursive: true }));

  it('has an answer for every law', () => {
    expect(all).toHaveLength(forms.length * windups.length * rules.length * variants.length * count);
  });

  forms.forEach((form, f) => {
    windups.forEach((windup, w) => {
      it(`is equal to the bit over ${count} samples: ${form}, ${windup}, with every rule, gain, weight and start`, () => {
        rules.forEach((rule, r) => {
          variants.forEach((variant, v) => {
            const law = {
              signals: [signal(form, windup, rule, variant)],
              period: 0.01,
              arithmetic: 'float32',
              inputs: { target: '1', manual: '1', hand: '1' },
            };
            const first = (((f * windups.length + w) * rules.length + r) * variants.length + v) * count;
            const expected = all.subarray(first, first + count);
            const actual = outputs(law, given);
            const wrong = actual.findIndex((value, k) => value !== expected[k]);
            expect(wrong, `${law.signals[0]}: sample ${wrong}: ${actual[wrong]} for ${expected[wrong]}`).toBe(
              -1,
            );
            const atEnds = expected.filter((value) => value === -1 || value === Math.fround(0.8)).length;
            expect(atEnds).toBeGreaterThan(100);
            expect(atEnds).toBeLessThan(count - 100);
          });
        });
      });
    });
  });
});
