import type { Expression, Operator } from './spec.js';

const operators: Record<Operator, (a: number, b: number) => number> = {
  '+': (a, b) => a + b,
  '-': (a, b) => a - b,
  '*': (a, b) => a * b,
  '/': (a, b) => a / b,
  '^': (a, b) => a ** b,
  '<': (a, b) => (a < b ? 1 : 0),
  '<=': (a, b) => (a <= b ? 1 : 0),
  '>': (a, b) => (a > b ? 1 : 0),
  '>=': (a, b) => (a >= b ? 1 : 0),
  '==': (a, b) => (a === b ? 1 : 0),
  '!=': (a, b) => (a !== b ? 1 : 0),
};

const calls: Record<string, (...x: number[]) => number> = {
  ...{ abs: Math.abs, sign: Math.sign, sqrt: Math.sqrt, exp: Math.exp, ln: Math.log },
  ...{ sin: Math.sin, cos: Math.cos, tan: Math.tan, asin: Math.asin, acos: Math.acos, atan: Math.atan },
  ...{ sinh: Math.sinh, cosh: Math.cosh, tanh: Math.tanh, min: Math.min, max: Math.max },
  ...{ floor: Math.floor, ceil: Math.ceil, hypot: Math.hypot },
  round: (x) => (x < 0 ? -Math.floor(-x + 0.5) : Math.floor(x + 0.5)),
  if: (condition, then, otherwise) => (condition !== 0 ? then : otherwise),
};

/**
 * The value of an expression that has no time in it, SI; comparisons give 1 or 0.
 * @param numberOf the SI value of a name.
 * @throws {Error} for `before`, which no such expression can hold.
 */
export function evaluateExpression(of: Expression, numberOf: (name: string) => number): number {
  const inner = (part: Expression): number => evaluateExpression(part, numberOf);
  switch (of.kind) {
    case 'number':
      return of.value;
    case 'name':
      return numberOf(of.name);
    case 'negate':
      return -inner(of.of);
    case 'operation':
      return operators[of.operator](inner(of.left), inner(of.right));
    case 'call':
      return calls[of.name](...of.arguments.map(inner));
    case 'before':
      throw new Error('before() in an expression of parameters passed the spec reader');
  }
}
