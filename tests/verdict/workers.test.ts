import { resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { describe, expect, it } from 'vitest';
import type { JudgedSpec, judgeSpec as JudgeSpec } from '../../src/verdict/judge_spec.js';
import { motorWith } from './motor.js';

// Workers run what is built: the built judge is asked, as the command does it.
const built = pathToFileURL(resolve('dist/verdict/judge_spec.js')).href;

describe('the number of workers', () => {
  it('changes nothing, to the last bit: one, two and four', async () => {
    const { judgeSpec } = (await import(built)) as { judgeSpec: typeof JudgeSpec };
    const spec = motorWith(
      ['plants: 40', 'plants: 150'],
      ['at_least: 0.7', 'at_least: 0.93'],
      ['search: 60', 'search: 40'],
    );
    const judged = async (workers: number): Promise<Omit<JudgedSpec, 'triedSeconds'>> => {
      // The time that it took is all that may differ.
      const { triedSeconds: _, ...rest } = await judgeSpec(spec, new Map(), { workers });
      return rest;
    };
    const [one, two, four] = [await judged(1), await judged(2), await judged(4)];
    expect(one.requirements.map(({ verdict }) => verdict.kind)).toContain('broken');
    expect(one.effort!.searched).toBeGreaterThan(0);
    expect(two).toEqual(one);
    expect(four).toEqual(one);
    expect(JSON.stringify(four)).toBe(JSON.stringify(one));
  });
});
