import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { CheckContext } from '../../src/spec/check_context.js';
import { check } from '../../src/spec/check_expression.js';
import { plainNumber, sameDimension } from '../../src/spec/dimension.js';
import { evaluateExpression } from '../../src/spec/evaluate_expression.js';
import { controllerRoom, plantRoom, type Room } from '../../src/spec/names.js';
import { parseExpression } from '../../src/spec/parse_expression.js';
import { newProblems } from '../../src/spec/problems.js';
import type { Checked } from '../../src/spec/scales.js';
import type { Dimension, Expression } from '../../src/spec/spec.js';
import type { Syntax } from '../../src/spec/syntax.js';
import { expressionsOf, namesOfKind, unitOf } from './well_formed.js';

const dimensions: Dimension[] = ['V', 'A', 's', 'V/A', 'V*s', '1/s'].map((text) => unitOf(text).dimension);
const anyDimension = fc.constantFrom(...dimensions, plainNumber);
const anyExpression = anyDimension.chain((dimension) =>
  expressionsOf(dimension, 3).map((text) => ({ text, dimension })),
);
/** SI values of the names; every one positive, so that roots and quotients stay real. */
const anyValues = fc
  .array(fc.double({ min: 0.1, max: 10, noNaN: true }), { minLength: 9, maxLength: 9 })
  .map((values) => new Map('abcdefghi'.split('').map((name, at) => [name, values[at]])));

function checked(syntax: Syntax, room: Room, kind: 'sensor' | 'plant signal', convertsFreely = true) {
  const problems = newProblems();
  const context: CheckContext = {
    names: { entries: namesOfKind(kind), used: new Set(), incomplete: false },
    room,
    problems,
    placeAt: (at) => ({ file: '', line: 1, column: at + 1 }),
    convertsFreely,
  };
  return { result: check(syntax, context), errors: problems.all() };
}

function syntaxOf(text: string): Syntax {
  const syntax = parseExpression(text);
  if (syntax.kind === 'fault') throw new Error(`${text}: ${syntax.message}`);
  return syntax;
}

function valueIn(expression: Expression, values: ReadonlyMap<string, number>): number {
  return evaluateExpression(expression, (name) => values.get(name)!);
}

/** Relative to the size of what was added up on the way, which may cancel. */
function expectClose(found: number, expected: number): void {
  expect(Math.abs(found - expected)).toBeLessThanOrEqual(
    1e-9 * Math.max(1, Math.abs(found), Math.abs(expected)),
  );
}

test('an expression whose parts fit is accepted, with the dimension that it was built for', () => {
  fc.assert(
    fc.property(anyExpression, ({ text, dimension }) => {
      const { result, errors } = checked(syntaxOf(text), plantRoom, 'plant signal');
      expect(errors).toEqual([]);
      expect(result.zero || sameDimension(result.dimension!, dimension)).toBe(true);
    }),
  );
});

/** The same syntax in a world whose base units are larger: every quantity is a smaller number. */
function inOtherUnits(syntax: Syntax, factorOf: (dimension: Dimension) => number): Syntax {
  const inner = (part: Syntax) => inOtherUnits(part, factorOf);
  switch (syntax.kind) {
    case 'quantity':
      return { ...syntax, value: syntax.value * factorOf(syntax.unit.dimension) };
    case 'negate':
      return { ...syntax, of: inner(syntax.of) };
    case 'operation':
      return { ...syntax, left: inner(syntax.left), right: inner(syntax.right) };
    case 'call':
      return { ...syntax, arguments: syntax.arguments.map(inner) };
    default:
      return syntax;
  }
}

// Buckingham (1914): an equation that is right in one system of units is right in every other. Were the checker to accept
// a sum of two dimensions, or to state a wrong one, the value would not scale as its dimension says.
test('the value of an accepted expression scales with the base units as its dimension says', () => {
  const scales = fc.tuple(
    fc.constantFrom(0.5, 2, 3),
    fc.constantFrom(0.25, 1.5, 4),
    fc.constantFrom(0.2, 2, 5),
    fc.constantFrom(0.5, 3),
  );
  fc.assert(
    fc.property(anyExpression, anyValues, scales, ({ text }, values, [m, kg, s, ampere]) => {
      const base = [m, kg, s, ampere, 1, 1, 1, 1];
      const factorOf = (dimension: Dimension) =>
        dimension.reduce((all, power, at) => all * base[at] ** power, 1);
      const syntax = syntaxOf(text);
      const here = checked(syntax, plantRoom, 'plant signal').result;
      const there = checked(inOtherUnits(syntax, factorOf), plantRoom, 'plant signal').result;
      const entries = namesOfKind('plant signal');
      const moved = new Map(
        [...values].map(([name, value]) => [name, value * factorOf(entries.get(name)!.unit!.dimension)]),
      );
      const scaled = valueIn(here.expression, values) * factorOf(here.dimension!);
      fc.pre(Number.isFinite(scaled) && Math.abs(scaled) < 1e12);
      expectClose(valueIn(there.expression, moved), scaled);
    }),
    { numRuns: 300 },
  );
});

/** What the controller computes, on the numbers in declared units, as an SI value. */
function inDeclaredUnits(result: Checked, values: ReadonlyMap<string, number>): number {
  const entries = namesOfKind('sensor');
  const declared = new Map(
    [...values].map(([name, value]) => [name, value / entries.get(name)!.unit!.scale]),
  );
  return valueIn(result.expression, declared) * result.scale;
}

test('a controller that computes in declared units gets what the same expression gives in SI', () => {
  fc.assert(
    fc.property(anyExpression, anyValues, ({ text }, values) => {
      const syntax = syntaxOf(text);
      const si = valueIn(checked(syntax, plantRoom, 'plant signal').result.expression, values);
      fc.pre(Number.isFinite(si) && Math.abs(si) < 1e12);
      expectClose(inDeclaredUnits(checked(syntax, controllerRoom, 'sensor').result, values), si);
    }),
    { numRuns: 300 },
  );
});

/** Operations and calls of an expression. */
function operationsIn(expression: Expression): number {
  switch (expression.kind) {
    case 'operation':
      return 1 + operationsIn(expression.left) + operationsIn(expression.right);
    case 'call':
      return 1 + expression.arguments.reduce((sum, part) => sum + operationsIn(part), 0);
    case 'negate':
    case 'before':
      return 1 + operationsIn(expression.of);
    default:
      return 0;
  }
}

function written(syntax: Syntax): number {
  switch (syntax.kind) {
    case 'operation':
      return 1 + written(syntax.left) + written(syntax.right);
    case 'call':
      return 1 + syntax.arguments.reduce((sum, part) => sum + written(part), 0);
    case 'negate':
      return 1 + written(syntax.of);
    default:
      return 0;
  }
}

test('what is accepted under float32 has no operation that the spec does not have', () => {
  let accepted = 0;
  fc.assert(
    fc.property(anyExpression, ({ text }) => {
      const syntax = syntaxOf(text);
      const strict = checked(syntax, controllerRoom, 'sensor', false);
      const free = checked(syntax, controllerRoom, 'sensor', true);
      expect(free.errors).toEqual([]);
      const inserted = operationsIn(free.result.expression) - written(syntax);
      expect(strict.errors.length > 0).toBe(inserted > 0);
      if (strict.errors.length === 0) accepted += 1;
    }),
    { numRuns: 300 },
  );
  expect(accepted).toBeGreaterThan(50);
});

test('a part of another dimension is found wherever it is put', () => {
  fc.assert(
    fc.property(anyExpression, ({ text, dimension }) => {
      const stranger = '(1 mol)';
      for (const spoiled of [
        `${text} + ${stranger}`,
        `max(${text}, ${stranger})`,
        `(${text} < ${stranger})`,
      ]) {
        const { result, errors } = checked(syntaxOf(spoiled), plantRoom, 'plant signal');
        const zero = checked(syntaxOf(text), plantRoom, 'plant signal').result.zero === true;
        expect(errors.length, `${spoiled} ${dimension}`).toBe(zero ? 0 : 1);
        if (!zero && !spoiled.includes('<')) expect(result.dimension).toBeUndefined();
      }
    }),
  );
});
