import { checkCall } from './check_call.js';
import type { CheckContext } from './check_context.js';
import { scaled } from './decimal.js';
import { isPlain, plainNumber, powerOf, productOf, quotientOf } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import { missingName } from './missing_name.js';
import { aKind, type NameEntry, type Room, roleOf } from './names.js';
import { type Checked, toOneScale, toScale, unknown } from './scales.js';
import type { Expression, Place } from './spec.js';
import type { Syntax } from './syntax.js';

/**
 * Looks up every name and works out dimension and scale, bottom up. What is wrong is reported once; above it the
 * dimension is unknown, so that nothing follows from it.
 */
export function check(syntax: Syntax, context: CheckContext): Checked {
  const place = context.placeAt(syntax.at);
  switch (syntax.kind) {
    case 'number':
      return literal(syntax.value, place);
    case 'quantity':
      return quantity(syntax, place, context);
    case 'name':
      return name(syntax, place, context);
    case 'negate':
      return negated(check(syntax.of, context), place);
    case 'operation':
      return operation(syntax, place, context);
    case 'call':
      return checkCall(
        syntax.name,
        syntax.arguments.map((argument) => check(argument, context)),
        place,
        context,
      );
  }
}

function literal(value: number, place: Place): Checked {
  return {
    expression: { kind: 'number', value, place },
    dimension: plainNumber,
    scale: 1,
    literal: true,
    zero: value === 0,
    adapt: (by) => ({ kind: 'number', value: scaled(value, by), place }),
  };
}

/** In a controller a literal stays in its own unit until something asks for another; plain ratios are ratios. */
function quantity(syntax: Syntax & { kind: 'quantity' }, place: Place, context: CheckContext): Checked {
  const { unit, value } = syntax;
  const own = !context.room.si && !isPlain(unit.dimension) && unit.law === undefined;
  return {
    expression: { kind: 'number', value: own ? Number(syntax.digits) : value, place },
    dimension: unit.dimension,
    scale: own ? unit.unit.scale : 1,
    literal: true,
    withUnit: unit.unit.text,
    adapt: (by) => ({ kind: 'number', value: scaled(own ? Number(syntax.digits) : value, by), place }),
  };
}

function name(syntax: Syntax & { kind: 'name' }, place: Place, context: CheckContext): Checked {
  const entry = context.names.entries.get(syntax.name);
  context.names.used.add(syntax.name);
  if (entry?.twice) return unknown(place);
  if (entry === undefined || !context.room.sees.includes(entry.kind)) {
    context.problems.add(place, missingName(syntax.name, entry, context));
    context.names.incomplete = true;
    return unknown(place);
  }
  if (syntax.index !== undefined && entry.kind !== 'coefficient') {
    context.problems.add(place, `only a coefficient has an index; \`${entry.name}\` is ${aKind(entry.kind)}`);
    return unknown(place);
  }
  return named(entry, syntax.index, place, context.room);
}

function named(entry: NameEntry, index: number | undefined, place: Place, room: Room): Checked {
  const { kind, unit } = entry;
  if (kind === 'constant') {
    if (unit === undefined || entry.value === undefined) return unknown(place);
    return { ...literal(entry.value, place), dimension: unit.dimension, hasUnit: !isPlain(unit.dimension) };
  }
  const expression: Expression = { kind: 'name', role: roleOf[kind], name: entry.name, index, place };
  // Parameters are physical: SI everywhere.
  const scale = room.si || kind === 'parameter' ? 1 : (unit?.scale ?? 1);
  const dimension = entry.adapts ? plainNumber : unit?.dimension;
  return { expression, dimension, scale, literal: false };
}

function negated(of: Checked, place: Place): Checked {
  const { adapt } = of;
  return {
    ...of,
    expression: { kind: 'negate', of: of.expression, place },
    adapt: adapt && ((by) => ({ kind: 'negate', of: adapt(by), place })),
  };
}

function operation(syntax: Syntax & { kind: 'operation' }, place: Place, context: CheckContext): Checked {
  const left = check(syntax.left, context);
  const right = check(syntax.right, context);
  const { operator } = syntax;
  if (operator === '*' || operator === '/') return productOrQuotient(operator, left, right, place);
  if (operator === '^') return power(left, right, place, context);
  const [a, b] = toOneScale(left, right, operator, place, context);
  const expression: Expression = {
    kind: 'operation',
    operator,
    left: a.expression,
    right: b.expression,
    place,
  };
  if (operator !== '+' && operator !== '-') {
    return { expression, dimension: plainNumber, scale: 1, literal: false };
  }
  const both = a.adapt && b.adapt;
  return {
    expression,
    dimension: a.zero ? b.dimension : a.dimension,
    scale: a.scale,
    literal: a.literal && b.literal,
    adapt:
      both && ((by) => ({ kind: 'operation', operator, left: a.adapt!(by), right: b.adapt!(by), place })),
  };
}

function productOrQuotient(operator: '*' | '/', left: Checked, right: Checked, place: Place): Checked {
  const known = left.dimension !== undefined && right.dimension !== undefined;
  const dimension = known
    ? (operator === '*' ? productOf : quotientOf)(left.dimension!, right.dimension!)
    : undefined;
  const built = (a: Expression, b: Expression): Expression => ({
    kind: 'operation',
    operator,
    left: a,
    right: b,
    place,
  });
  return {
    expression: built(left.expression, right.expression),
    dimension,
    scale: operator === '*' ? left.scale * right.scale : left.scale / right.scale,
    literal: left.literal && right.literal,
    withUnit: undefined,
    hasUnit: carriesUnit(left) || carriesUnit(right),
    adapt: adaptedFactor(operator, left, right, built),
  };
}

function carriesUnit(of: Checked): boolean {
  return of.hasUnit === true || of.withUnit !== undefined;
}

/**
 * A product adapts for free where one factor is a literal written with a unit, or where all of it is literal. A bare
 * number times a name does not: the firmware computes with that very number.
 */
function adaptedFactor(
  operator: '*' | '/',
  left: Checked,
  right: Checked,
  built: (a: Expression, b: Expression) => Expression,
): Checked['adapt'] {
  const all = left.literal && right.literal;
  if (left.adapt && (all || carriesUnit(left))) return (by) => built(left.adapt!(by), right.expression);
  if (right.adapt && carriesUnit(right)) {
    return (by) => built(left.expression, right.adapt!(operator === '*' ? by : 1 / by));
  }
  return undefined;
}

function power(base: Checked, exponent: Checked, place: Place, context: CheckContext): Checked {
  const expression = (a: Expression, b: Expression): Expression => ({
    kind: 'operation',
    operator: '^',
    left: a,
    right: b,
    place,
  });
  if (exponent.dimension !== undefined && !isPlain(exponent.dimension)) {
    context.problems.add(
      exponent.expression.place,
      `an exponent must be a plain number, but this is ${formatDimension(exponent.dimension)}`,
    );
    return unknown(place);
  }
  const plainExponent = toScale(exponent, 1, place, context);
  const n = literalNumber(plainExponent.expression);
  if (n === undefined) return powerOfPlain(base, plainExponent, place, context, expression);
  return {
    expression: expression(base.expression, plainExponent.expression),
    dimension: base.dimension && powerOf(base.dimension, n),
    scale: base.scale ** n,
    literal: false,
  };
}

function powerOfPlain(
  base: Checked,
  exponent: Checked,
  place: Place,
  context: CheckContext,
  expression: (a: Expression, b: Expression) => Expression,
): Checked {
  if (base.dimension !== undefined && !isPlain(base.dimension)) {
    context.problems.add(
      exponent.expression.place,
      `the exponent of ${formatDimension(base.dimension)} must be a number, since the result's unit depends on it`,
    );
    return unknown(place);
  }
  const plainBase = toScale(base, 1, place, context);
  return {
    expression: expression(plainBase.expression, exponent.expression),
    dimension: base.dimension,
    scale: 1,
    literal: false,
  };
}

/** The value of a number, a negated one, or a quotient of two (as in x^(1/2)). */
function literalNumber(of: Expression): number | undefined {
  if (of.kind === 'number') return of.value;
  if (of.kind === 'negate') {
    const inner = literalNumber(of.of);
    return inner === undefined ? undefined : -inner;
  }
  if (of.kind !== 'operation' || of.operator !== '/') return undefined;
  const [left, right] = [literalNumber(of.left), literalNumber(of.right)];
  return left === undefined || right === undefined ? undefined : left / right;
}
