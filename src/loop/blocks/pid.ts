import { productOf, quotientOf, rateDimension, timeDimension } from '../../spec/dimension.js';
import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block, BlockUse, Workshop } from './block.js';

type SumBy = 'backward' | 'forward' | 'trapezoid';

/**
 * Proportional, integral and derivative action in parallel form, as difference equations (Åström and Wittenmark,
 * 'Computer-Controlled Systems', 1997, chapter 8, from memory). e is the given signal, T the period, ω the derivative's corner,
 * a subscript 1 the value at the last instant; every operation rounds as the target does, in the order written.
 *
 *     p = kp·e
 *     i = i₁ + (ki·T)·e         backward     (ki·T)·e₁  forward     (ki·T)·((e + e₁)·0.5)  trapezoid
 *     d = (d₁ + (kd·ω)·(e − e₁)) / (1 + ω·T)                            backward
 *     d = (1 − ω·T)·d₁ + (kd·ω)·(e − e₁)                               forward
 *     d = ((2 − ω·T)·d₁ + (2·(kd·ω))·(e − e₁)) / (2 + ω·T)             trapezoid
 *     d = kd·((e − e₁)/T)                                              without a corner
 *     u = (p + i) + d, then the range
 */
export const pid: Block = {
  description: {
    key: 'pid',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    settings: [
      {
        name: 'kp',
        kind: 'expression',
        optional: true,
        dimension: ({ output, input }) => quotientOf(output, input),
        meaning: 'proportional gain',
      },
      {
        name: 'ki',
        kind: 'expression',
        optional: true,
        dimension: ({ output, input }) => quotientOf(output, productOf(input, timeDimension)),
        meaning: 'integral gain, a second',
      },
      {
        name: 'kd',
        kind: 'expression',
        optional: true,
        dimension: ({ output, input }) => quotientOf(output, productOf(input, rateDimension)),
        meaning: 'derivative gain',
      },
      {
        name: 'derivative_corner',
        kind: 'corner',
        optional: true,
        meaning: 'corner ω of the first-order filter on the derivative',
      },
      {
        name: 'sum_by',
        kind: 'word',
        words: ['backward', 'forward', 'trapezoid'],
        optional: true,
        meaning: 'summation rule of the integral and of the filter on the derivative; backward by default',
      },
      {
        name: 'anti_windup',
        kind: 'word',
        words: ['hold_integral', 'bound_integral'],
        optional: true,
        meaning:
          'hold_integral: i stays at i₁ where u would pass the range and the sum would go further out; bound_integral: i stays inside the range',
      },
    ],
    meaning: 'u = (kp·e + i) + d',
  },
  keepsRange: true,
  expand: (use, workshop) => {
    const gains = { kp: use.setting('kp'), ki: use.setting('ki'), kd: use.setting('kd') };
    if (!gains.kp && !gains.ki && !gains.kd) {
      throw new LoopError(`pid of '${use.name}' has no gain: give at least one of kp, ki, kd`, use.place);
    }
    const { arithmetic } = workshop;
    const error = use.input();
    const last = addLast(use, workshop, error);
    const proportional = gains.kp && arithmetic.multiply(gains.kp, error);
    const derivative = gains.kd && derivativeAction(use, workshop, gains.kd, error, last());
    const total = (integral: Node | undefined): Node =>
      [proportional, integral, derivative]
        .filter((part) => part !== undefined)
        .reduce((sum, part) => arithmetic.add(sum, part));
    if (!gains.ki) return inRange(use, workshop, total(undefined));
    const integral = integralAction(use, workshop, increment(use, workshop, gains.ki, error, last), total);
    return inRange(use, workshop, total(integral));
  },
};

/** The given signal at the last instant, kept only if something asks for it. */
function addLast(use: BlockUse, workshop: Workshop, error: Node): () => Node {
  let kept: Node | undefined;
  return () => {
    kept ??= workshop.addMemory(`${use.name} last input`, () => error);
    return kept;
  };
}

function inRange(use: BlockUse, { arithmetic }: Workshop, node: Node): Node {
  return use.range ? arithmetic.apply('limit', node, use.range.low, use.range.high) : node;
}

function sumRule(use: BlockUse): SumBy {
  return (use.word('sum_by') ?? 'backward') as SumBy;
}

/** What the integral gains at one instant. */
function increment(use: BlockUse, workshop: Workshop, ki: Node, error: Node, last: () => Node): Node {
  const { arithmetic } = workshop;
  const perSample = arithmetic.multiply(ki, workshop.period());
  switch (sumRule(use)) {
    case 'backward':
      return arithmetic.multiply(perSample, error);
    case 'forward':
      return arithmetic.multiply(perSample, last());
    case 'trapezoid':
      return arithmetic.multiply(
        perSample,
        arithmetic.multiply(arithmetic.add(error, last()), arithmetic.number(0.5)),
      );
  }
}

function integralAction(
  use: BlockUse,
  { arithmetic, addMemory }: Workshop,
  step: Node,
  total: (integral: Node) => Node,
): Node {
  const { graph } = arithmetic;
  const last: Node = addMemory(`${use.name} integral`, () => integral);
  const candidate = arithmetic.add(last, step);
  const integral = windup();
  return integral;

  function windup(): Node {
    const rule = use.word('anti_windup');
    if (!rule || !use.range) return candidate;
    const { low, high } = use.range;
    if (rule === 'bound_integral') return arithmetic.apply('limit', candidate, low, high);
    const zero = graph.number(0);
    const hold = (outside: Node, outward: Node, otherwise: Node): Node =>
      graph.apply('choose', outside, graph.apply('choose', outward, last, candidate), otherwise);
    const sum = total(candidate);
    const below = hold(graph.apply('less', sum, low), graph.apply('less', step, zero), candidate);
    return hold(graph.apply('less', high, sum), graph.apply('less', zero, step), below);
  }
}

function derivativeAction(use: BlockUse, workshop: Workshop, kd: Node, error: Node, lastError: Node): Node {
  const { arithmetic } = workshop;
  const change = arithmetic.subtract(error, lastError);
  const corner = use.setting('derivative_corner');
  if (!corner) return arithmetic.multiply(kd, arithmetic.divide(change, workshop.period()));
  const last: Node = workshop.addMemory(`${use.name} derivative`, () => derivative);
  const drive = arithmetic.multiply(kd, corner);
  const turn = arithmetic.multiply(corner, workshop.period());
  const derivative = filtered();
  return derivative;

  function filtered(): Node {
    const [one, two] = [arithmetic.number(1), arithmetic.number(2)];
    switch (sumRule(use)) {
      case 'backward':
        return arithmetic.divide(
          arithmetic.add(last, arithmetic.multiply(drive, change)),
          arithmetic.add(one, turn),
        );
      case 'forward':
        return arithmetic.add(
          arithmetic.multiply(arithmetic.subtract(one, turn), last),
          arithmetic.multiply(drive, change),
        );
      case 'trapezoid':
        return arithmetic.divide(
          arithmetic.add(
            arithmetic.multiply(arithmetic.subtract(two, turn), last),
            arithmetic.multiply(arithmetic.multiply(two, drive), change),
          ),
          arithmetic.add(two, turn),
        );
    }
  }
}
