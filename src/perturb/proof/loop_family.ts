import { TargetArithmetic } from '../../loop/arithmetic.js';
import type { LeafKind, Node } from '../../loop/graph.js';
import type { Loop } from '../../loop/loop.js';
import { lower } from '../../loop/lower.js';
import { type Schedule, scheduleOf } from '../../loop/schedule.js';
import type { LoopPoint } from '../../measure/loop_point.js';
import type { ParameterSpace } from '../parameter_space.js';
import type { Interval } from './interval.js';
import { polynomialsOf } from './loop_polynomials.js';
import type { LoopPolynomials } from './margin_statement.js';
import { isNothing, type Slope, SlopeField } from './slope.js';
import { openedLoopOver } from './slope_cycle.js';
import { SlopeEvaluation, Unprovable } from './slope_evaluation.js';
import { type ManyOrders, timingsOver } from './slope_timing.js';

/** The loop opened at one point, for all plants of a box of its free parameters (SI, in the order of `space.free`). */
export class LoopFamily {
  private readonly schedule: Schedule;
  private readonly restsAtZero: boolean;
  private readonly derived: (Node | undefined)[];

  /** @throws {Unprovable} where intervals are not carried through the loop. */
  constructor(
    private readonly point: LoopPoint,
    private readonly space: ParameterSpace,
  ) {
    const { loop } = point.linearisation;
    if (loop.modes.length > 0) throw new Unprovable('the plant has a part that jumps');
    if (loop.openings.length > 1) {
      const names = loop.openings.map(({ at }) => at).join(', ');
      throw new Unprovable(`the loop is opened at several signals at once (${names})`);
    }
    this.schedule = scheduleOf(loop, space.nominal);
    if (this.schedule.cycle !== this.schedule.period[loop.openings[0].task]) {
      throw new Unprovable('the opened signal changes several times in a cycle of all controllers');
    }
    this.derived = space.parameters.map(({ derived }) => derived && this.lowered(loop, derived));
    this.restsAtZero = this.zeroIsRest();
  }

  /** The bounds of the free parameters. */
  get box(): Interval[] {
    return this.space.free.map((i) => [this.space.parameters[i].low, this.space.parameters[i].high]);
  }

  /**
   * Denominator and numerator of the loop transfer over a box, one pair for each order in which things may happen there; the
   * field's first variables are the free parameters.
   * @throws {Unprovable} where intervals are not carried through the loop.
   */
  polynomials(field: SlopeField): LoopPolynomials[] | ManyOrders {
    const { linearisation } = this.point;
    const evaluation = this.evaluation(field);
    const timings = timingsOver(linearisation.loop, this.schedule, evaluation);
    if ('cut' in timings) return timings;
    return timings.map((timing) => polynomialsOf(field, openedLoopOver(linearisation, timing, evaluation)));
  }

  /** The loop's expressions at the point of linearisation, as for one plant: readings and the injection follow from it. */
  private evaluation(field: SlopeField): SlopeEvaluation {
    const { loop } = this.point.linearisation;
    const closed = this.evaluationWith(field, () => field.constant(0));
    return this.evaluationWith(field, () => closed.of(loop.openings[0].returned));
  }

  private evaluationWith(field: SlopeField, injected: () => Slope): SlopeEvaluation {
    const { loop } = this.point.linearisation;
    const evaluation: SlopeEvaluation = new SlopeEvaluation(field, (leaf, index): Slope => {
      if (leaf === 'parameter') return this.parameter(field, evaluation, index);
      if (leaf === 'reading') return evaluation.of(loop.readings[index].sampled);
      if (leaf === 'injected') return injected();
      return field.constant(this.atPoint(leaf, index));
    });
    return evaluation;
  }

  private parameter(field: SlopeField, evaluation: SlopeEvaluation, index: number): Slope {
    const node = this.derived[index];
    if (node) return evaluation.of(node);
    const free = this.space.free.indexOf(index);
    return free < 0 ? field.constant(this.space.nominal[index]) : field.variable(free);
  }

  /** What `around` sets, the inputs at rest, and zero for all else where zero is the point of rest of every plant. */
  private atPoint(leaf: LeafKind, index: number): number {
    const { linearisation, overrides } = this.point;
    const set = overrides.find((one) => one.group === leaf && one.index === index);
    if (set) return set.value;
    if (leaf === 'input') return linearisation.loop.inputRest[index];
    if (leaf === 'noise') return 0;
    if (!this.restsAtZero) throw new Unprovable('the point of linearisation may move with a parameter');
    return 0;
  }

  private lowered(loop: Loop, expression: Parameters<typeof lower>[0]): Node {
    return lower(expression, {
      arithmetic: new TargetArithmetic(loop.graph, 'float64'),
      name: ({ name }) => loop.graph.leaf('parameter', loop.parameters.indexOf(name)),
      before: () => {
        throw new Error('before() in a derived parameter passed the spec reader');
      },
    });
  }

  /** Whether with everything at zero nothing changes, for every plant: then that is where the search for rest begins and ends. */
  private zeroIsRest(): boolean {
    const { loop, roots } = this.point.linearisation;
    if ([...loop.states, ...loop.memories].some(({ start }) => start !== 0)) return false;
    const field = new SlopeField(this.box);
    const evaluation: SlopeEvaluation = new SlopeEvaluation(field, (leaf, index): Slope => {
      if (leaf === 'parameter') return this.parameter(field, evaluation, index);
      if (leaf === 'reading') return evaluation.of(loop.readings[index].sampled);
      return field.constant(leaf === 'input' ? loop.inputRest[index] : 0);
    });
    try {
      const { derivative, memory, held, returned } = roots;
      return [...derivative, ...memory, ...held, ...returned].every((node) => isNothing(evaluation.of(node)));
    } catch (error) {
      if (error instanceof Unprovable) return false;
      throw error;
    }
  }
}
