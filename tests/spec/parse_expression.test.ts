import fc from 'fast-check';
import { expect, test } from 'vitest';
import { parseExpression } from '../../src/spec/parse_expression.js';
import type { Operator } from '../../src/spec/spec.js';
import type { Syntax } from '../../src/spec/syntax.js';
import { type ParsedUnit, parseUnit, siValue } from '../../src/spec/units.js';
import { printed } from './printing.js';

function grouping(text: string): string {
  const syntax = parseExpression(text);
  return syntax.kind === 'fault' ? `${syntax.at}: ${syntax.message}` : printed(syntax);
}

test.each([
  ['a + b * c', '(a + (b * c))'],
  ['a - b - c', '((a - b) - c)'],
  ['a / b * c', '((a / b) * c)'],
  ['a ^ b ^ c', '(a ^ (b ^ c))'],
  ['-a ^ 2', '(-(a ^ 2))'],
  ['2 ^ -3 * a', '((2 ^ (-3)) * a)'],
  ['-a * b', '((-a) * b)'],
  ['a * -b', '(a * (-b))'],
  ['--a', '(-(-a))'],
  ['+a', 'a'],
  ['a + b < c * d', '((a + b) < (c * d))'],
  ['(a < b) < c', '((a < b) < c)'],
  ['a <= b + 1', '(a <= (b + 1))'],
  ['a != b', '(a != b)'],
  ['if(a >= b, -c, d^2)', 'if((a >= b), (-c), (d ^ 2))'],
  ['f(g(x), y)', 'f(g(x), y)'],
  ['notch[3] * x', '(notch[3] * x)'],
  ['speed/(0.5 mrad/s)', '(speed / (0.5 mrad/s))'],
  ['x * (-3 N*m)', '(x * (-3 N*m))'],
  ['x * (5 %)', '(x * (5 %))'],
  ['x * (5 1/s)', '(x * (5 1/s))'],
  ['x + (2 J/(kg*K))', '(x + (2 J/(kg*K)))'],
  ['38 kg*m^2', '(38 kg*m^2)'],
  ['-3.5e-2 N*m', '(-3.5e-2 N*m)'],
  ['6 dB', '(6 dB)'],
  ['.5', '0.5'],
  ['2.', '2'],
  ['1e3', '1000'],
  ['2*(3)', '(2 * 3)'],
  [' a\n + b ', '(a + b)'],
])('%s is read as %s', (text, expected) => {
  expect(grouping(text)).toBe(expected);
});

test.each([
  ['', '0: an expression was expected here'],
  ['a +', '3: a number, a name or ( was expected where the expression ends'],
  ['* a', '0: a number, a name or ( was expected where there is `*`'],
  ['a < b < c', '6: a comparison of a comparison; compare twice and multiply, or use if(…)'],
  ['f(a', '1: this ( is not closed by )'],
  ['f(a b)', '4: an operator was expected before `b`'],
  ['(a, b)', '2: a comma belongs between the arguments of a function only'],
  ['a, b', '1: a comma belongs between the arguments of a function only'],
  ['a)', '1: a ) without its ('],
  ['a[b]', '2: an index is a whole number, counted from 0, as in name[3]'],
  ['a[-1]', '2: an index is a whole number, counted from 0, as in name[3]'],
  ['a[1', '1: this [ is not closed by ]'],
  [
    'a + 5 V',
    '6: a quantity inside an expression stands in parentheses of its own, as in (0.5 mrad/s); here `V` follows the number 5',
  ],
  ['5 volt', '2: unknown unit `volt`; it is written `V`'],
  ['a * (5 V', '4: this ( is not closed by )'],
  ['a $ b', '2: unexpected `$` in an expression'],
  ['a = b', '2: unexpected `=` in an expression; equality is written =='],
  ['a && b', '2: unexpected `&` in an expression; a product of comparisons holds when both hold'],
  ['a ? b', '2: unexpected `?` in an expression; a choice is written if(condition, a, b)'],
  ['a · b', '2: unexpected `·` in an expression; a product is written *'],
  ['1e400', '0: `1e400` is too large a number'],
  ['1e308 km', '0: `1e308 km` is too large a number'],
])('"%s" is a fault at its place', (text, message) => {
  expect(grouping(text)).toBe(message);
});

test('depth and length are bounded', () => {
  expect(grouping('('.repeat(1000))).toBe('100: nested more than 100 deep');
  expect(grouping('-'.repeat(1000))).toContain('nested more than 100 deep');
  expect(grouping(Array(2000).fill('a').join('+'))).toContain('an expression of more than 2000 words');
  expect(grouping(Array(900).fill('a').join('^'))).toContain('nested more than 100 deep');
});

test('a node points to what an error about it should show', () => {
  const syntax = parseExpression('alpha + f(beta)') as Extract<Syntax, { kind: 'operation' }>;
  expect(syntax.at).toBe(6);
  expect(syntax.left.at).toBe(0);
  expect(syntax.right.at).toBe(8);
});

const operators: Operator[] = ['+', '-', '*', '/', '^', '<', '<=', '>', '>=', '==', '!='];

function quantity(digits: string, text: string): Syntax {
  const unit = parseUnit(text) as ParsedUnit;
  return { kind: 'quantity', digits, value: siValue(digits, unit), unit, at: 0 };
}

const { tree } = fc.letrec<{ tree: Syntax }>((tie) => ({
  tree: fc.oneof(
    { maxDepth: 5, depthSize: 'small' },
    fc.double({ min: 0, noNaN: true, max: 1e300 }).map((value): Syntax => ({ kind: 'number', value, at: 0 })),
    fc
      .tuple(
        fc.constantFrom('3', '-0.25', '1e-7'),
        fc.constantFrom('mrad/s', 'kg*m^2', '%', 'dB', '1/s', 'J/(kg*K)'),
      )
      .map(([digits, text]) => quantity(digits, text)),
    fc
      .tuple(fc.constantFrom('a', 'speed_2', 'm', 'kp'), fc.option(fc.nat(20), { nil: undefined }))
      .map(([name, index]): Syntax => ({ kind: 'name', name, index, at: 0 })),
    tie('tree').map((of): Syntax => ({ kind: 'negate', of, at: 0 })),
    fc
      .tuple(fc.constantFrom(...operators), tie('tree'), tie('tree'))
      .map(([operator, left, right]): Syntax => ({ kind: 'operation', operator, left, right, at: 0 })),
    fc
      .tuple(fc.constantFrom('sin', 'if', 'before'), fc.array(tie('tree'), { maxLength: 3 }))
      .map(([name, given]): Syntax => ({ kind: 'call', name, arguments: given, at: 0 })),
  ),
}));

test('an expression that is printed and read again is the same', () => {
  const withoutPlaces = (syntax: unknown) =>
    JSON.stringify(syntax, (key, value) => (key === 'at' ? 0 : value));
  fc.assert(
    fc.property(tree, (syntax) => {
      expect(withoutPlaces(parseExpression(printed(syntax)))).toBe(withoutPlaces(syntax));
    }),
  );
});

test('any text is an expression or a fault inside it', () => {
  const pieces = fc.constantFrom(
    'a',
    '1',
    ' ',
    '(',
    ')',
    '+',
    '-',
    '*',
    '/',
    '^',
    '<',
    ',',
    '[',
    ']',
    'V',
    '%',
    '1e',
    '.',
  );
  fc.assert(
    fc.property(
      fc.oneof(
        fc.string(),
        fc.array(pieces).map((list) => list.join('')),
      ),
      (text) => {
        const syntax = parseExpression(text);
        expect(syntax.at).toBeGreaterThanOrEqual(0);
        expect(syntax.at).toBeLessThanOrEqual(text.length);
      },
    ),
    { numRuns: 1000 },
  );
});
