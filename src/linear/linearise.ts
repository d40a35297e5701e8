import { Derivative } from '../loop/derivative.js';
import { Evaluation, type LeafValues } from '../loop/evaluate.js';
import type { LeafKind, Node } from '../loop/graph.js';
import type { Loop } from '../loop/loop.js';
import { type Matrix, zeros } from './matrix.js';

/** The groups of equations of a loop, and the groups of leaves that they are linearised in. */
export type RowGroup = 'derivative' | 'reading' | 'memory' | 'held' | 'returned';
export type ColumnGroup = Extract<LeafKind, 'state' | 'input' | 'held' | 'memory' | 'reading' | 'injected'>;

interface Entry {
  row: number;
  column: number;
  slope: Node;
}

interface Block {
  rows: number;
  columns: number;
  entries: Entry[];
}

/** The exact partial derivatives of a loop's equations, as expressions: made once, evaluated for each plant. */
export class Linearisation {
  readonly roots: Record<RowGroup, Node[]>;
  private readonly blocks = new Map<string, Block>();

  constructor(readonly loop: Loop) {
    this.roots = {
      derivative: loop.states.map(({ derivative }) => derivative),
      reading: loop.readings.map(({ sampled }) => sampled),
      memory: loop.memories.map(({ next }) => next),
      held: loop.held.map(({ value }) => value),
      returned: loop.openings.map(({ returned }) => returned),
    };
    const columns: Record<ColumnGroup, number> = {
      state: loop.states.length,
      input: loop.inputs.length,
      held: loop.held.length,
      memory: loop.memories.length,
      reading: loop.readings.length,
      injected: loop.openings.length,
    };
    const derivative = new Derivative(loop.graph);
    for (const [rowGroup, nodes] of Object.entries(this.roots) as [RowGroup, Node[]][]) {
      for (const [columnGroup, count] of Object.entries(columns) as [ColumnGroup, number][]) {
        const entries = nodes.flatMap((node, row) =>
          slopesOf(derivative, loop, node, row, columnGroup, count),
        );
        this.blocks.set(`${rowGroup} ${columnGroup}`, { rows: nodes.length, columns: count, entries });
      }
    }
  }

  /** The slopes of one group of equations in one group of leaves, rows × columns as counted in the loop. */
  slopes(rows: RowGroup, columns: ColumnGroup, evaluation: Evaluation): Matrix {
    const block = this.blocks.get(`${rows} ${columns}`)!;
    const matrix = zeros(block.rows, block.columns);
    for (const { row, column, slope } of block.entries) {
      matrix.data[row * block.columns + column] = evaluation.of(slope);
    }
    return matrix;
  }

  /** The slope expressions of one group, where they are not zero. */
  entries(rows: RowGroup, columns: ColumnGroup): readonly Entry[] {
    return this.blocks.get(`${rows} ${columns}`)!.entries;
  }
}

function slopesOf(
  derivative: Derivative,
  loop: Loop,
  node: Node,
  row: number,
  columnGroup: ColumnGroup,
  count: number,
): Entry[] {
  const zero = loop.graph.number(0);
  return Array.from({ length: count }, (_, column) => ({
    row,
    column,
    slope: derivative.of(node, loop.graph.leaf(columnGroup, column)),
  })).filter(({ slope }) => slope !== zero);
}

/** Leaf values with the readings that follow from them; quanta, noise and number formats off. */
export function withReadings(loop: Loop, leaves: LeafValues): LeafValues {
  const evaluation = new Evaluation(leaves, 'off');
  return { ...leaves, reading: loop.readings.map(({ sampled }) => evaluation.of(sampled)) };
}
