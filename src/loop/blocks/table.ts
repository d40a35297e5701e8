import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block, BlockUse } from './block.js';
import { type Curve, valueAt } from './curve.js';

/** A curve, or a surface, through given values. */
export const table: Block = {
  description: {
    key: 'table',
    rooms: ['plant', 'controller'],
    takesInput: true,
    takesGain: false,
    settings: [
      {
        name: 'points',
        kind: 'matrix',
        rows: 'input',
        columns: 'plain',
        entry: 'ratio',
        optional: false,
        meaning:
          'ascending values of the input: a list, an array of the build, or { file: gains.csv, column: speed, unit: rpm }',
      },
      {
        name: 'values',
        kind: 'matrix',
        rows: 'output',
        columns: 'plain',
        entry: 'ratio',
        optional: false,
        meaning: 'the value at each point; with a second signal one row for each point, along second_points',
      },
      { name: 'second', kind: 'signals', optional: true, meaning: 'a second signal' },
      {
        name: 'second_points',
        kind: 'matrix',
        rows: { of: 'second' },
        columns: 'plain',
        entry: 'ratio',
        optional: true,
        meaning: 'ascending values of the second signal',
      },
      {
        name: 'between',
        kind: 'word',
        words: ['linear', 'cubic'],
        optional: true,
        meaning: 'linear, or a cubic that is monotone where the values are; linear by default',
      },
    ],
    meaning:
      'between points p, q with values v, w: y = v + ((w − v)·(of − p))/(q − p), held at the ends; with a second signal first along of, then along second',
  },
  keepsRange: false,
  expand: (use, { arithmetic }) => {
    const between = (use.word('between') ?? 'linear') as Curve['between'];
    const points = ascending(use, 'points');
    const curveAlong = (along: number[], values: Node[], x: Node): Node =>
      valueAt({ points: along, values, between }, x, arithmetic);
    const [second] = use.signals('second');
    if (!second) {
      const values = use.matrix('values')!.flat();
      expectCount(use, values.length, points.length);
      return curveAlong(points, values, use.input());
    }
    const secondPoints = ascending(use, 'second_points');
    const rows = use.matrix('values', secondPoints.length)!;
    expectCount(use, rows.length, points.length);
    for (const row of rows) expectCount(use, row.length, secondPoints.length);
    const across = secondPoints.map((_, column) =>
      curveAlong(
        points,
        rows.map((row) => row[column]),
        use.input(),
      ),
    );
    return curveAlong(secondPoints, across, second());
  },
};

function expectCount(use: BlockUse, found: number, expected: number): void {
  if (found === expected) return;
  throw new LoopError(
    `table of '${use.name}' has ${found} values for ${expected} points; expected one for each`,
    use.place,
  );
}

function ascending(use: BlockUse, name: string): number[] {
  const nodes = use.matrix(name)?.flat();
  if (!nodes) throw new LoopError(`table of '${use.name}' has a second signal and needs ${name}`, use.place);
  const points = nodes.map((node) => (node.kind === 'number' ? node.value : Number.NaN));
  const wrong = points.findIndex((point, at) => !(point > (points[at - 1] ?? Number.NEGATIVE_INFINITY)));
  if (wrong < 0) return points;
  const found = Number.isNaN(points[wrong]) ? 'something that changes' : `${points[wrong]}`;
  const before = wrong === 0 ? '' : ` after ${points[wrong - 1]}`;
  throw new LoopError(
    `the ${name} of table '${use.name}' must be ascending numbers, but number ${wrong + 1} is ${found}${before}`,
    use.place,
  );
}
