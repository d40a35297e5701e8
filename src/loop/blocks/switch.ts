import { plainNumber } from '../../spec/dimension.js';
import type { Node } from '../graph.js';
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
        meaning:
          'number of the law in charge, from 0: the first whose number is not below it, else the last; a condition is 0 or 1',
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
    const number = position(use.setting('by')!, laws.length, workshop);
    const chosen = pick(laws, number, workshop);
    const fade = use.design('bumpless');
    return fade ? bumpless(use, workshop, chosen, number, fade) : inRange(use, workshop, chosen);
  },
};

/** The place of the law in charge among so many. */
function position(by: Node, count: number, { arithmetic }: Workshop): Node {
  const numbers = Array.from({ length: count }, (_, at) => arithmetic.graph.number(at));
  return numbers
    .slice(0, -1)
    .reduceRight(
      (later, at) => arithmetic.apply('choose', arithmetic.apply('less_or_equal', by, at), at, later),
      numbers[count - 1],
    );
}

function pick(laws: Node[], number: Node, { arithmetic }: Workshop): Node {
  return laws
    .slice(0, -1)
    .reduceRight(
      (later, law, at) =>
        arithmetic.apply(
          'choose',
          arithmetic.apply('equal', number, arithmetic.graph.number(at)),
          law,
          later,
        ),
      laws[laws.length - 1],
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
  const changed = graph.apply('choose', started, graph.apply('unequal', number, lastNumber), graph.number(0));
  const offset = graph.apply(
    'choose',
    changed,
    arithmetic.subtract(lastOutput, chosen),
    arithmetic.multiply(rate, lastOffset),
  );
  const output = inRange(use, workshop, arithmetic.add(chosen, offset));
  return output;
}

function inRange(use: BlockUse, { arithmetic }: Workshop, node: Node): Node {
  return use.range ? arithmetic.apply('limit', node, use.range.low, use.range.high) : node;
}
