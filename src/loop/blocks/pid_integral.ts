import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { BlockUse, Workshop } from './block.js';
import { lawPeriod } from './pid_gains.js';

/** What surrounds the integral in a law. */
export interface AroundIntegral {
  /** What is summed, and the same at the last instant. */
  taken: Node;
  last: () => Node;
  /** The other parts of the output, in the order in which they are taken off where the integral is set. */
  others: Node[];
  /** The output with this integral, before the range. */
  total: (integral: Node) => Node;
  started: Node | undefined;
}

/** The output of a law with an integral, in its range; what the integral keeps follows the rule against windup. */
export function integralAction(
  use: BlockUse,
  workshop: Workshop,
  perSample: Node,
  around: AroundIntegral,
): Node {
  const { arithmetic, addMemory } = workshop;
  const last: Node = addMemory(`${use.name} integral`, () => kept);
  const gained = increment(use, workshop, around);
  const integral = set(use, workshop, around, wound(use, workshop, last, [perSample, gained], around));
  const sum = around.total(integral);
  const output = use.range ? arithmetic.apply('limit', sum, use.range.low, use.range.high) : sum;
  const kept = use.word('anti_windup') === 'pull_back' ? pulledBack() : integral;
  return output;

  function pulledBack(): Node {
    const time = use.setting('pull_back_time');
    if (!time) {
      throw new LoopError(
        `pid of '${use.name}' has anti_windup: pull_back and needs a pull_back_time`,
        use.place,
      );
    }
    const excess = arithmetic.subtract(output, sum);
    const period = lawPeriod(use, workshop);
    if (!period) return arithmetic.add(integral, arithmetic.divide(excess, time));
    return arithmetic.sumOfProducts([arithmetic.divide(period, time)], [excess], integral);
  }
}

/** What the integral gains at one instant, for a gain a sample of one. */
function increment(use: BlockUse, { arithmetic }: Workshop, around: AroundIntegral): Node {
  switch (use.word('sum_by')) {
    case 'forward':
      return around.last();
    case 'trapezoid':
      return arithmetic.multiply(arithmetic.add(around.taken, around.last()), arithmetic.number(0.5));
    default:
      return around.taken;
  }
}

/** The sum, held or bounded where the rule against windup says so. */
function wound(
  use: BlockUse,
  { arithmetic }: Workshop,
  last: Node,
  [perSample, gained]: [Node, Node],
  { total }: AroundIntegral,
): Node {
  const { graph } = arithmetic;
  const rule = use.word('anti_windup');
  if (rule !== 'hold_integral' || !use.range) {
    const sum = arithmetic.sumOfProducts([perSample], [gained], last);
    if (rule !== 'bound_integral' || !use.range) return sum;
    return arithmetic.apply('limit', sum, use.range.low, use.range.high);
  }
  const { low, high } = use.range;
  const step = arithmetic.multiply(perSample, gained);
  const candidate = arithmetic.add(last, step);
  const zero = graph.number(0);
  const hold = (outside: Node, outward: Node, otherwise: Node): Node =>
    graph.apply('choose', outside, graph.apply('choose', outward, last, candidate), otherwise);
  const sum = total(candidate);
  const below = hold(graph.apply('less', sum, low), graph.apply('less', step, zero), candidate);
  return hold(graph.apply('less', high, sum), graph.apply('less', zero, step), below);
}

/** The integral, or what brings the output to a value: at a bumpless start, and while another law is in charge. */
function set(use: BlockUse, { arithmetic }: Workshop, around: AroundIntegral, integral: Node): Node {
  const { graph } = arithmetic;
  const bringing = (output: Node): Node =>
    around.others.reduce((rest, part) => arithmetic.subtract(rest, part), output);
  const [track, when, start] = ['track', 'track_when', 'bumpless_start'].map((name) => use.setting(name));
  if (!track !== !when) {
    throw new LoopError(`pid of '${use.name}' needs both track and track_when, or neither`, use.place);
  }
  const tracking = track && when ? graph.apply('choose', when, bringing(track), integral) : integral;
  return start && around.started
    ? graph.apply('choose', around.started, tracking, bringing(start))
    : tracking;
}
