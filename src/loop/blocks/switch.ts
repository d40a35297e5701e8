import { plainNumber } from '../../spec/dimension.js';
import type { Graph, Node } from '../graph.js';
import type { Block, BlockUse, Workshop } from './block.js';

/** One of several laws, as a condition or a number says. */
export const switchBlock: Block = {
  description: {
    key: 'switch',
    rooms: ['controller'],
    takesInput: false,
    takesGain: false,
    settings: [
      {
        name: 'between',
        kind: 'matrix',
        rows: 'output',
        columns: 'plain',
        entry: 'ratio',
        optional: false,
        meaning: 'the laws: a list of signals or expressions',
      },
      {
        name: 'by',
        kind: 'expression',
        optional: false,
        dimension: () => plainNumber,
        meaning: 'number of the law in charge, from 0, to the nearest; a condition is 0 or 1',
      },
      {
        name: 'bumpless',
        kind: 'time_constant',
        optional: true,
        meaning: 'time constant τ with which the jump at a change of law fades',
      },
    ],
    meaning:
      'y = c + o with c the law in charge; o = y₁ − c where another law is in charge than at the last instant, else o₁·r with r = τ/(τ + T); without bumpless o = 0',
  },
  keepsRange: true,
  expand: (use, workshop) => {
    const laws = use.matrix('between')!.flat();
    const by = use.setting('by')!;
    const chosen = pick(laws, by, workshop);
    const fade = use.design('bumpless');
    if (!fade) return inRange(use, workshop, chosen);
    const numbers = laws.map((_, at) => workshop.arithmetic.graph.number(at));
    return bumpless(use, workshop, chosen, pick(numbers, by, workshop), fade);
  },
};

/** One of several for the number nearest to `by`; conditions stay away from what a number is when it is whole. */
function pick(of: Node[], by: Node, { arithmetic }: Workshop): Node {
  return of
    .slice(0, -1)
    .reduceRight(
      (later, one, at) =>
        arithmetic.apply(
          'choose',
          arithmetic.apply('less', by, arithmetic.graph.number(at + 0.5)),
          one,
          later,
        ),
      of[of.length - 1],
    );
}

/** At the first instant after power-up nothing has changed. */
function bumpless(use: BlockUse, workshop: Workshop, chosen: Node, number: Node, fade: Node): Node {
  const { arithmetic, addMemory, exactPeriod } = workshop;
  const { graph } = arithmetic;
  const started = addMemory(`${use.name} started`, () => graph.number(1), 0);
  const lastNumber = addMemory(`${use.name} law`, () => number, 0);
  const lastOutput: Node = addMemory(`${use.name} last output`, () => output, 0);
  const lastOffset: Node = addMemory(`${use.name} offset`, () => offset, 0);
  const rate = arithmetic.take(graph.apply('divide', fade, graph.apply('add', fade, exactPeriod())));
  const changed = graph.apply('choose', started, differs(number, lastNumber, graph), graph.number(0));
  const offset = graph.apply(
    'choose',
    changed,
    arithmetic.subtract(lastOutput, chosen),
    arithmetic.multiply(rate, lastOffset),
  );
  const output = inRange(use, workshop, arithmetic.add(chosen, offset));
  return output;
}

/** Whether two whole numbers differ. */
function differs(one: Node, other: Node, graph: Graph): Node {
  const above = graph.apply('add', other, graph.number(0.5));
  const below = graph.apply('subtract', other, graph.number(0.5));
  return graph.apply(
    'choose',
    graph.apply('less', one, below),
    graph.number(1),
    graph.apply('less', above, one),
  );
}

function inRange(use: BlockUse, { arithmetic }: Workshop, node: Node): Node {
  return use.range ? arithmetic.apply('limit', node, use.range.low, use.range.high) : node;
}
