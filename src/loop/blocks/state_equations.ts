import type { SettingDescription } from '../../spec/vocabulary.js';
import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block, BlockUse } from './block.js';

const matrix = (name: string, optional: boolean, meaning: string): SettingDescription => ({
  name,
  kind: 'matrix',
  rows: 'plain',
  columns: 'plain',
  entry: 'ratio',
  optional,
  meaning,
});

/** A linear system of one input and one output in state equations. */
export const stateEquationsBlock: Block = {
  description: {
    key: 'state_equations',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    settings: [
      matrix('state_matrix', false, 'A, in SI units: a list of rows'),
      matrix('input_matrix', false, 'B: one number for each state'),
      matrix('output_matrix', false, 'C: one number for each state'),
      matrix('feedthrough', true, 'D: one number; 0 by default'),
    ],
    meaning:
      'x′ = A·x + B·u, y = C·x + D·u with u = gain · of; all states start at 0 unless rest says otherwise',
  },
  keepsRange: false,
  expand: (use, { arithmetic: a, addState }) => {
    const { rows, input, output, feedthrough } = matrices(use);
    const drive = (): Node => a.multiply(use.gain(), use.input());
    const states: Node[] = [];
    const combined = (row: Node[], last: Node | undefined): Node =>
      [...row.map((entry, i) => a.multiply(entry, states[i])), ...(last ? [last] : [])].reduce((x, y) =>
        a.add(x, y),
      );
    rows.forEach((row, i) => {
      states.push(
        addState(`${use.name} state ${i + 1}`, () => combined(row, a.multiply(input[i], drive())), 0),
      );
    });
    return combined(output, feedthrough && a.multiply(feedthrough, drive()));
  },
};

function matrices(use: BlockUse): {
  rows: Node[][];
  input: Node[];
  output: Node[];
  feedthrough: Node | undefined;
} {
  const rows = use.matrix('state_matrix')!;
  const [input, output] = ['input_matrix', 'output_matrix'].map((name) => use.matrix(name)!.flat());
  const feedthrough = use.matrix('feedthrough')?.flat();
  const n = rows.length;
  const wrong = [
    ...rows.map((row, i) => ({ what: `row ${i + 1} of state_matrix`, length: row.length, expected: n })),
    { what: 'input_matrix', length: input.length, expected: n },
    { what: 'output_matrix', length: output.length, expected: n },
    { what: 'feedthrough', length: feedthrough?.length ?? 1, expected: 1 },
  ].find(({ length, expected }) => length !== expected);
  if (!wrong) return { rows, input, output, feedthrough: feedthrough?.[0] };
  throw new LoopError(
    `state_equations of '${use.name}' with ${n} states: ${wrong.what} has ${wrong.length} numbers, expected ${wrong.expected}`,
    use.place,
  );
}
