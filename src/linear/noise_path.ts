import type { LeafValues } from '../loop/evaluate.js';
import type { Node } from '../loop/graph.js';
import type { Loop } from '../loop/loop.js';
import type { Schedule } from '../loop/schedule.js';
import { Linearisation } from './linearise.js';
import { add, identity, multiply, scale } from './matrix.js';
import { noiseGain } from './noise_gain.js';
import { openedLoop } from './opened_loop.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * So small a share of one output is added to the other that it never counts, but keeps both over the same states: those that
 * either of them sees.
 */
const trace = 1e-280;

/** The way of white noise from a sensor, where the loop is opened, to a held value such as an actuator's, the loop closed. */
export class NoisePath {
  private readonly seen: Linearisation;
  private readonly driven: Linearisation;

  /**
   * @param loop opened at the sensor alone.
   * @param held index of the held value.
   */
  constructor(loop: Loop, held: number) {
    const { graph } = loop;
    const [opening] = loop.openings;
    const { returned } = opening;
    const value = graph.leaf('held', held);
    const mixed = (all: Node, little: Node): Linearisation => {
      const both = graph.apply('add', all, graph.apply('multiply', graph.number(trace), little));
      return new Linearisation({ ...loop, openings: [{ ...opening, returned: both }] });
    };
    this.seen = mixed(returned, value);
    this.driven = mixed(value, returned);
  }

  /**
   * Standard deviation of the held value at the sampling instants of the sensor, over all of them in a cycle, for noise of
   * standard deviation one that is independent from sample to sample; in SI per unit of the sensor. Infinity for an unstable
   * loop.
   * @throws NumericFailure when the loop cannot be closed or an entry is not finite.
   */
  gain(schedule: Schedule, leaves: LeafValues): number {
    const seen = openedLoop(this.seen, schedule, leaves);
    const driven = openedLoop(this.driven, schedule, leaves);
    return noiseGain(closed(seen, driven)) / Math.sqrt(seen.b.columns);
  }
}

/** From noise added to what is injected to the driven value: injected = returned + noise, and an output is −returned. */
function closed(seen: StateEquations, driven: StateEquations): StateEquations {
  const { a, b, c, d, period } = seen;
  const closing = solve(add(identity(d.rows), d), identity(d.rows));
  const fed = multiply(closing, c);
  return {
    a: add(a, multiply(b, fed), -1),
    b: multiply(b, closing),
    c: add(multiply(driven.d, fed), driven.c, -1),
    d: scale(multiply(driven.d, closing), -1),
    period,
  };
}
