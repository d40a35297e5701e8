import { evaluateExpression } from '../spec/evaluate_expression.js';
import type { ParameterDefinition, Perturbation } from '../spec/spec.js';
import { type Correlate, correlate } from './correlated_shares.js';
import { quantile } from './quantile.js';

/** Ends of each move: -1 and 1, or 0 on a side where the nominal value is the bound. */
export interface MoveBox {
  readonly least: readonly number[];
  readonly most: readonly number[];
}

/** For each free parameter with a list of values the moves to them; undefined for those that glide between bounds. */
export interface ListedMoves {
  readonly listed: readonly (readonly number[] | undefined)[];
}

/**
 * The box of the free parameters. A plant is a vector of all parameters in SI, in the order of the spec; a *move* is a
 * vector with one number for each free parameter: 0 at nominal, -1 at the lower and 1 at the upper bound.
 */
export class ParameterSpace implements MoveBox, ListedMoves {
  /** Indices of the parameters that can move. */
  readonly free: readonly number[];
  readonly least: readonly number[];
  readonly most: readonly number[];
  readonly listed: readonly (readonly number[] | undefined)[];
  readonly nominal: Float64Array;
  private readonly correlated: Correlate | undefined;

  /** @throws {LoopError} when no distribution has all the correlations together. */
  constructor(
    readonly parameters: readonly ParameterDefinition[],
    private readonly relations: Pick<Perturbation, 'onlyWhere' | 'correlations'> = {},
  ) {
    this.free = parameters.flatMap(({ low, high }, i) => (low < high ? [i] : []));
    this.least = this.free.map((i) => (parameters[i].low < parameters[i].nominal ? -1 : 0));
    this.most = this.free.map((i) => (parameters[i].high > parameters[i].nominal ? 1 : 0));
    this.listed = this.free.map((i) => {
      const { distribution } = parameters[i];
      return distribution?.kind === 'values'
        ? distribution.values.map((value) => moveTo(value, parameters[i]))
        : undefined;
    });
    this.nominal = Float64Array.from(parameters, (parameter) => parameter.nominal);
    this.correlated = correlate(parameters, relations.correlations ?? []);
  }

  /** Number of free parameters. */
  get size(): number {
    return this.free.length;
  }

  /** The plant at a move. Beyond the bounds it goes on in a straight line, but no value crosses zero that may not. */
  plantAt(move: ArrayLike<number>): Float64Array {
    const values = this.nominal.slice();
    this.free.forEach((i, k) => {
      values[i] = valueAt(this.parameters[i], move[k]);
    });
    return this.completed(values);
  }

  /** The move of a plant. */
  moveOf(values: ArrayLike<number>): Float64Array {
    return Float64Array.from(this.free, (i) => moveTo(values[i], this.parameters[i]));
  }

  /** A plant with the derived parameters made to follow the others. */
  completed(values: Float64Array): Float64Array {
    this.parameters.forEach(({ derived }, i) => {
      if (derived) values[i] = evaluateExpression(derived, (name) => values[this.indexOf(name)]);
    });
    return values;
  }

  /** Whether every condition of `only_where` holds. */
  allows(values: Float64Array): boolean {
    return (this.relations.onlyWhere ?? []).every(
      (condition) => evaluateExpression(condition, (name) => values[this.indexOf(name)]) !== 0,
    );
  }

  /** The plant that lies at these shares (0 ≤ share < 1) of the free parameters' distributions, correlated as stated. */
  drawnAt(sharesOfFree: ArrayLike<number>): Float64Array {
    const shares = new Float64Array(this.parameters.length);
    this.free.forEach((i, k) => {
      shares[i] = sharesOfFree[k];
    });
    this.correlated?.(shares);
    const values = this.nominal.slice();
    for (const i of this.free) values[i] = quantile(this.parameters[i], shares[i]);
    return this.completed(values);
  }

  private indexOf(name: string): number {
    return this.parameters.findIndex((parameter) => parameter.name === name);
  }
}

function moveTo(value: number, { nominal, low, high }: ParameterDefinition): number {
  const way = value - nominal;
  return way === 0 ? 0 : way / (way < 0 ? nominal - low : high - nominal);
}

function valueAt(parameter: ParameterDefinition, move: number): number {
  const { nominal, low, high, distribution } = parameter;
  const value = move < 0 ? nominal + move * (nominal - low) : nominal + move * (high - nominal);
  if (distribution?.kind === 'values') return nearestOf(distribution.values, value);
  if (move === -1) return low;
  if (move === 1) return high;
  return Math.abs(move) > 1 ? withSign(parameter, value) : value;
}

function nearestOf(values: readonly number[], value: number): number {
  return values.reduce((best, one) => (Math.abs(one - value) < Math.abs(best - value) ? one : best));
}

/** Beyond the bounds a quantity of one sign keeps it: a mass may shrink to a hundredth of its lower bound, not to zero. */
function withSign({ low, high }: ParameterDefinition, value: number): number {
  if (low >= 0) return Math.max(value, low / 100);
  return high <= 0 ? Math.min(value, high / 100) : value;
}
