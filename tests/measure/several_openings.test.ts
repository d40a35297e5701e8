import { describe, expect, it } from 'vitest';
import { Linearisation } from '../../src/linear/linearise.js';
import { openedLoop } from '../../src/linear/opened_loop.js';
import { prepareResponseMatrix } from '../../src/linear/response.js';
import { Evaluation } from '../../src/loop/evaluate.js';
import { expandLoop } from '../../src/loop/expand.js';
import { scheduleOf } from '../../src/loop/schedule.js';
import { OpenedSizes } from '../../src/measure/opened_sizes.js';
import { smallSpecOf } from '../small_loop.js';

const spec = smallSpecOf({
  parameters: 'width: { nominal: 2, from: 1, to: 3 }',
  inputs: 'u: {}\nv: { unit: m }',
  plant: 'y: { integral: (3 1/s)*pull - y*(2 1/s) + (0.5 1/s)*push }\nz: { integral: (4 m/s)*push, unit: m }',
  sensors: 'seen: { of: y }\nfelt: { of: z, unit: mm }',
  controllers: [
    'slow:\n  every: 20 ms\n  signals:\n    wanted: { value: 2*(u - seen) }',
    'fast:\n  every: 10 ms\n  signals:\n    force: { value: wanted - (3 1/m)*(felt - v), range: [-10, 10] }\n    turn: { value: 0.1*force }',
  ].join('\n'),
  actuators: 'pull: { of: turn, range: [-width, width] }\npush: { of: force }',
  requirements: ['{ name: A, measure: gain_margin, at: [pull, push], at_least: 1.2 }'],
});
const expanded = (...openAt: string[]) => expandLoop(spec, new Map(), { openAt });

describe('a loop that is opened at several signals', () => {
  it('has an opening for each of them, in the order asked for, and none where it is closed', () => {
    expect(expanded().openings).toEqual([]);
    const { openings, tasks } = expanded('push', 'wanted', 'pull');
    expect(openings.map(({ at, task }) => [at, tasks[task].name])).toEqual([
      ['push', 'fast'],
      ['wanted', 'slow'],
      ['pull', 'fast'],
    ]);
  });

  it('lets the takers of each see a value of its own', () => {
    const { openings, held } = expanded('pull', 'force');
    const at = (name: string, injected: number[]): number =>
      new Evaluation({ injected }).of(held.find((one) => one.name === name)!.value);
    expect([at('pull', [5, 7]), at('push', [5, 7])]).toEqual([5, 7]);
    // What returns at `pull` is computed from what is injected at `force`, at the same instant.
    expect(new Evaluation({ injected: [5, 7], parameter: [2] }).of(openings[0].returned)).toBeCloseTo(
      0.7,
      12,
    );
  });

  it('has an input and an output for each change of each signal in a cycle', () => {
    const loop = expanded('seen', 'pull', 'push');
    const schedule = scheduleOf(loop, [2]);
    const equations = openedLoop(new Linearisation(loop), schedule, { parameter: [2] });
    // Once in 20 ms, and twice each.
    expect([equations.b.columns, equations.c.rows, equations.period]).toEqual([5, 5, 0.02]);
  });

  it('is scaled alike in rows and columns by what counts as one, which leaves the diagonal as it is', () => {
    const loop = expanded('pull', 'force');
    const schedule = scheduleOf(loop, [2]);
    const linearisation = new Linearisation(loop);
    const responseFor = (sizes?: number[]) =>
      prepareResponseMatrix(openedLoop(linearisation, schedule, { parameter: [2] }, sizes))(40);
    const [plain, scaled] = [responseFor(), responseFor([2, 8])];
    // Both change twice in a cycle: inputs are pull, force, pull, force.
    const sizes = [2, 8, 2, 8];
    plain.forEach((row, i) => {
      row.forEach((entry, j) => {
        expect(scaled[i][j].real).toBeCloseTo((entry.real * sizes[j]) / sizes[i], 12);
        expect(scaled[i][j].imaginary).toBeCloseTo((entry.imaginary * sizes[j]) / sizes[i], 12);
      });
    });
  });
});

describe('what counts as one of an opened signal', () => {
  const sizesAt = (width: number, ...openAt: string[]) =>
    new OpenedSizes(spec, expanded(...openAt)).at(new Evaluation({ parameter: [width] }));

  it('is the width of its range where every one has a range', () => {
    expect(sizesAt(2, 'pull', 'force')).toEqual({ kind: 'sizes', sizes: [4, 20] });
    expect(sizesAt(3, 'force', 'pull')).toEqual({ kind: 'sizes', sizes: [20, 6] });
  });

  it('is one in SI where one has none: of a sensor in mm a thousand of them', () => {
    expect(sizesAt(2, 'pull', 'push')).toEqual({ kind: 'sizes', sizes: [1, 1] });
    expect(sizesAt(2, 'felt', 'pull')).toEqual({ kind: 'sizes', sizes: [1000, 1] });
  });

  it('is one of its own unit where it is alone', () => {
    expect(sizesAt(2, 'felt')).toEqual({ kind: 'sizes', sizes: [1] });
  });

  it('is nothing where its range is empty on a plant', () => {
    expect(sizesAt(0, 'force', 'pull')).toEqual({
      kind: 'unformed',
      why: "the range of 'pull' is 0 wide (SI), so that its values have no size; expected a width above 0",
    });
    expect(sizesAt(-1, 'force', 'pull')).toMatchObject({ why: expect.stringContaining('-2 wide') });
  });
});
