import { Linearisation } from '../../linear/linearise.js';
import { pointOfRest } from '../../linear/point_of_rest.js';
import { TargetArithmetic } from '../../loop/arithmetic.js';
import { expandLoop } from '../../loop/expand.js';
import type { LeafKind, Node } from '../../loop/graph.js';
import type { Loop } from '../../loop/loop.js';
import { lower } from '../../loop/lower.js';
import type { CoefficientValues } from '../../loop/parts.js';
import { type Schedule, scheduleOf } from '../../loop/schedule.js';
import { LoopPoint } from '../../measure/loop_point.js';
import type { Requirement, Spec } from '../../spec/spec.js';
import type { ParameterSpace } from '../parameter_space.js';
import type { Interval } from './interval.js';
import { polynomialsOf } from './loop_polynomials.js';
import type { LoopPolynomials } from './margin_statement.js';
import { isNothing, type Slope, SlopeField } from './slope.js';
import { openedLoopOver } from './slope_cycle.js';
import { SlopeEvaluation, Unprovable } from './slope_evaluation.js';
import { type KeptGroup, type KeptValues, restOver } from './slope_rest.js';
import { type ManyOrders, timingsOver } from './slope_timing.js';

/** What a leaf of the loop is at the point of linearisation. */
type AtPoint = (leaf: LeafKind, index: number) => Slope;

/** The loop opened at one point, for all plants of a box of its free parameters (SI, in the order of `space.free`). */
export class LoopFamily {
  private readonly point: LoopPoint;
  /** Of the closed loop, which rests. */
  private readonly closed: Linearisation;
  private readonly schedule: Schedule;
  private readonly restsAtZero: boolean;
  private readonly derived: (Node | undefined)[];

  /** @throws {Unprovable} where intervals are not carried through the loop. */
  constructor(
    spec: Spec,
    coefficients: CoefficientValues,
    requirement: Requirement,
    private readonly space: ParameterSpace,
  ) {
    this.point = new LoopPoint(spec, coefficients, requirement);
    const { loop } = this.point.linearisation;
    if (loop.modes.length > 0) throw new Unprovable('the plant has a part that jumps');
    if (loop.openings.length > 1) {
      const names = loop.openings.map(({ at }) => at).join(', ');
      throw new Unprovable(`the loop is opened at several signals at once (${names})`);
    }
    this.closed = new Linearisation(expandLoop(spec, coefficients));
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
   * @throws {Unprovable} where intervals are not even carried through the loop of one plant.
   */
  polynomials(field: SlopeField): LoopPolynomials[] | ManyOrders {
    const { linearisation } = this.point;
    try {
      const evaluation = this.evaluation(field);
      const timings = timingsOver(linearisation.loop, this.schedule, evaluation);
      if ('cut' in timings) return timings;
      return timings.map((timing) => polynomialsOf(field, openedLoopOver(linearisation, timing, evaluation)));
    } catch (error) {
      const cut = this.widest(field);
      if (!(error instanceof Unprovable) || cut === undefined) throw error;
      // What a wide box leaves open a narrower one may settle.
      return { cut };
    }
  }

  /** The parameter with the largest share of its bounds; undefined for one plant alone. */
  private widest({ box }: SlopeField): number | undefined {
    const shares = this.box.map(([low, high], i) => (box[i][1] - box[i][0]) / (high - low));
    const largest = Math.max(...shares);
    return largest > 0 ? shares.indexOf(largest) : undefined;
  }

  /** The loop's expressions at the point of linearisation, as for one plant: readings and the injection follow from it. */
  private evaluation(field: SlopeField): SlopeEvaluation {
    const { loop } = this.point.linearisation;
    const atPoint = this.atPoint(field);
    const closed = this.evaluationWith(field, loop, atPoint, () => field.constant(0));
    return this.evaluationWith(field, loop, atPoint, () => closed.of(loop.openings[0].returned));
  }

  private evaluationWith(
    field: SlopeField,
    loop: Loop,
    atPoint: AtPoint,
    injected: () => Slope,
  ): SlopeEvaluation {
    const evaluation: SlopeEvaluation = new SlopeEvaluation(field, (leaf, index): Slope => {
      if (leaf === 'parameter') return this.parameter(field, evaluation, index);
      if (leaf === 'reading') return evaluation.of(loop.readings[index].sampled);
      if (leaf === 'injected') return injected();
      if (leaf === 'noise') return field.constant(0);
      if (leaf === 'input') return field.constant(loop.inputRest[index]);
      return atPoint(leaf, index);
    });
    return evaluation;
  }

  /** What `around` sets, and the point of rest for all else. It is not looked for where no slope asks for it, as in affine loops. */
  private atPoint(field: SlopeField): AtPoint {
    let rest: AtPoint | undefined;
    return (leaf, index) => {
      const set = this.point.overrides.find((one) => one.group === leaf && one.index === index);
      if (set) return field.constant(set.value);
      rest ??= this.rest(field);
      return rest(leaf, index);
    };
  }

  /** Zero where that is the point of rest of every plant, else bounds around that of the plant in the middle. */
  private rest(field: SlopeField): AtPoint {
    if (this.restsAtZero) return () => field.constant(0);
    const { loop } = this.closed;
    const plant = this.space.nominal.slice();
    this.space.free.forEach((i, k) => {
      const [low, high] = field.box[k];
      plant[i] = low + (high - low) / 2;
    });
    const middle = pointOfRest(this.closed, this.space.completed(plant), loop.inputRest);
    if (middle.kind === 'none') throw new Unprovable(middle.why);
    const lookUp =
      (values: KeptValues): AtPoint =>
      (leaf, index) =>
        values[leaf as KeptGroup][index];
    const values = restOver(field, this.closed, middle.point, (tried) =>
      this.evaluationWith(field, loop, lookUp(tried), () => field.constant(0)),
    );
    return lookUp(values);
  }

  private parameter(field: SlopeField, evaluation: SlopeEvaluation, index: number): Slope {
    const node = this.derived[index];
    if (node) return evaluation.of(node);
    const free = this.space.free.indexOf(index);
    return free < 0 ? field.constant(this.space.nominal[index]) : field.variable(free);
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
