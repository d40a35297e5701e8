import type { CheckContext } from './check_context.js';
import { sameDimension } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import type { Dimension, Expression, Operator, Place } from './spec.js';
import { prefixHint } from './unit_hints.js';

/** An expression with what is known of its unit. */
export interface Checked {
  expression: Expression;
  /** `undefined`: unknown, because something in it is wrong and has been reported. */
  dimension: Dimension | undefined;
  /** SI value of one unit of the result. */
  scale: number;
  /** Whether only numbers and constants stand in it. */
  literal: boolean;
  /** A bare 0, which fits every unit. */
  zero?: boolean;
  /** The unit of a literal quantity, for hints. */
  withUnit?: string | undefined;
  /** Whether a literal quantity is a factor of it. */
  hasUnit?: boolean;
  /** The same expression multiplied by a number at no cost at run time, where a literal in it can take the factor. */
  adapt?: ((by: number) => Expression) | undefined;
}

/** Stands for a wrong expression. */
export function unknown(place: Place): Checked {
  return {
    expression: { kind: 'number', value: Number.NaN, place },
    dimension: undefined,
    scale: 1,
    literal: false,
  };
}

/** Whether two scales are one, up to the rounding of their computation. */
export function sameScale(a: number, b: number): boolean {
  return Math.abs(a - b) <= 1e-12 * Math.max(Math.abs(a), Math.abs(b));
}

/** The factor from one scale to another, free of a rounding of its own where both are decimal. */
function factorBetween(from: number, to: number): number {
  return to < from ? from / to : 1 / (to / from);
}

/**
 * Brings an expression to a scale: literals adapt when the spec is read; anything else is multiplied at run time,
 * which only a float64 controller does not feel: in others it is an error.
 */
export function toScale(of: Checked, scale: number, place: Place, context: CheckContext): Checked {
  if (sameScale(of.scale, scale) || of.zero) return { ...of, scale };
  const factor = factorBetween(of.scale, scale);
  if (of.adapt) return { ...of, scale, expression: of.adapt(factor), adapt: undefined };
  if (!context.convertsFreely && of.dimension !== undefined) {
    context.problems.add(
      of.expression.place,
      `this would be multiplied by ${factor} to fit its unit, which the controller's arithmetic does not do by itself; declare both in one unit, or write the factor that the firmware has`,
    );
  }
  return { ...of, scale, expression: multiplied(of.expression, factor, place), adapt: undefined };
}

/** The expression times a number. */
export function multiplied(of: Expression, by: number, place: Place): Expression {
  if (by === 1) return of;
  return { kind: 'operation', operator: '*', left: of, right: { kind: 'number', value: by, place }, place };
}

/** 1 divided by the expression times a number. */
export function inverted(of: Expression, by: number, place: Place): Expression {
  const one: Expression = { kind: 'number', value: 1, place };
  return { kind: 'operation', operator: '/', left: one, right: multiplied(of, by, place), place };
}

const verbs: Partial<Record<Operator, string>> = { '+': 'add', '-': 'subtract' };

/** Brings two operands to one dimension and scale; a literal adapts to the other, else the right to the left. */
export function toOneScale(
  left: Checked,
  right: Checked,
  operator: Operator | 'choose',
  place: Place,
  context: CheckContext,
): [Checked, Checked] {
  if (left.dimension === undefined || right.dimension === undefined)
    return [unknownLike(left), unknownLike(right)];
  if (!left.zero && !right.zero && !sameDimension(left.dimension, right.dimension)) {
    context.problems.add(place, mismatch(left, right, operator));
    return [unknownLike(left), unknownLike(right)];
  }
  if (left.zero) return [{ ...left, scale: right.scale }, right];
  if (right.zero || sameScale(left.scale, right.scale)) return [left, { ...right, scale: left.scale }];
  if (left.literal && !right.literal) return [toScale(left, right.scale, place, context), right];
  return [left, toScale(right, left.scale, place, context)];
}

function unknownLike(of: Checked): Checked {
  return { ...of, dimension: undefined, adapt: undefined };
}

function mismatch(left: Checked, right: Checked, operator: Operator | 'choose'): string {
  const verb = operator === 'choose' ? 'choose between' : (verbs[operator] ?? 'compare');
  const hint =
    (right.withUnit && prefixHint(right.withUnit, left.dimension!)) ||
    (left.withUnit && prefixHint(left.withUnit, right.dimension!)) ||
    '';
  const both = `${formatDimension(left.dimension!)} and ${formatDimension(right.dimension!)}`;
  return `cannot ${verb} ${both}${hint}`;
}
