import type { Place } from '../spec/spec.js';
import { counting, fit, fitQuotient, fitSum } from './fixed_point.js';
import { fusedMultiplyAdd } from './fused.js';

/** Values from outside an expression. `index` counts within its kind; see `Loop`. */
export type LeafKind =
  | 'parameter'
  | 'input'
  | 'state'
  | 'mode'
  | 'held'
  | 'memory'
  | 'counter'
  | 'reading'
  | 'noise'
  | 'injected';

/** What an operation does with its arguments. Comparisons give 1 or 0; angles are in rad. */
export type OperationName =
  | 'add'
  | 'subtract'
  | 'multiply'
  | 'divide'
  | 'power'
  | 'negate'
  | 'less'
  | 'less_or_equal'
  | 'equal'
  | 'unequal'
  /** choose(condition, then, otherwise); only the chosen branch counts. */
  | 'choose'
  /** limit(x, low, high) */
  | 'limit'
  /** quantise(x, step): the nearest multiple of the step. */
  | 'quantise'
  /** The nearest float32. */
  | 'single'
  /** fused_multiply_add(x, y, z): x·y + z rounded once, to the nearest float32. */
  | 'fused_multiply_add'
  /** fit(x, step, rounding, low, size, overflow): x in a fixed-point format; see `fixed_point`. */
  | 'fit'
  /** fit_sum(step, rounding, low, size, overflow, unit, low and size of the accumulator, x₀, y₀, x₁, y₁ …) */
  | 'fit_sum'
  /** fit_quotient(x, y, step, low, size, overflow) */
  | 'fit_quotient'
  | 'abs'
  | 'sign'
  | 'sqrt'
  | 'exp'
  | 'ln'
  | 'sin'
  | 'cos'
  | 'tan'
  | 'asin'
  | 'acos'
  | 'atan'
  | 'sinh'
  | 'cosh'
  | 'tanh'
  | 'min'
  | 'max'
  | 'floor'
  | 'ceil'
  | 'round'
  | 'hypot';

/** Where a number comes from that the build holds, and in which format it is there. */
export interface StoredNumber {
  /** As the spec names it: `kp`, or `notch[2]`. */
  name: string;
  place: Place;
  /** Such as Q2.14 or float32; undefined where it is not known. */
  format: string | undefined;
  /** Of a fixed-point number or an integer; undefined for others. */
  fractionalBits: number | undefined;
}

/** A node of the expression graph. Equal expressions are the same object; `id` grows from arguments to results. */
export type Node =
  | { readonly kind: 'number'; readonly id: number; readonly value: number; readonly stored?: StoredNumber }
  | { readonly kind: 'leaf'; readonly id: number; readonly leaf: LeafKind; readonly index: number }
  | {
      readonly kind: 'operation';
      readonly id: number;
      readonly name: OperationName;
      readonly of: readonly Node[];
    };

/** Rounds half away from zero, as C's `round`. */
export function roundHalfAway(x: number): number {
  return x < 0 ? -Math.floor(-x + 0.5) : Math.floor(x + 0.5);
}

/** The numeric meaning of every operation; the compiler writes the same operations as source text. */
export const operations: Record<OperationName, (...x: number[]) => number> = {
  add: (a, b) => a + b,
  subtract: (a, b) => a - b,
  multiply: (a, b) => a * b,
  divide: (a, b) => a / b,
  power: (a, b) => a ** b,
  negate: (a) => -a,
  less: (a, b) => (a < b ? 1 : 0),
  less_or_equal: (a, b) => (a <= b ? 1 : 0),
  equal: (a, b) => (a === b ? 1 : 0),
  unequal: (a, b) => (a !== b ? 1 : 0),
  choose: (condition, then, otherwise) => (condition !== 0 ? then : otherwise),
  // biome-ignore lint/complexity/useMathMinMax: not-a-number must stay what it is whichever bound it meets
  limit: (x, low, high) => (x < low ? low : x > high ? high : x),
  quantise: (x, step) => roundHalfAway(x / step) * step,
  single: Math.fround,
  fused_multiply_add: fusedMultiplyAdd,
  fit,
  fit_sum: fitSum,
  fit_quotient: fitQuotient,
  abs: Math.abs,
  sign: Math.sign,
  sqrt: Math.sqrt,
  exp: Math.exp,
  ln: Math.log,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
  asin: Math.asin,
  acos: Math.acos,
  atan: Math.atan,
  sinh: Math.sinh,
  cosh: Math.cosh,
  tanh: Math.tanh,
  min: Math.min,
  max: Math.max,
  floor: Math.floor,
  ceil: Math.ceil,
  round: roundHalfAway,
  hypot: Math.hypot,
};

/** Where the terms of a `fit_sum` begin. */
export const firstTerm = 8;

/** What operations give when quanta and number formats are left out. */
export const unrounded: Partial<typeof operations> = {
  quantise: (x) => x,
  single: (x) => x,
  fused_multiply_add: (x, y, z) => x * y + z,
  fit: (x, _step, _rounding, _low, _size, overflow) => (overflow < counting ? x : 0),
  fit_sum: (...x) => {
    if (x[4] >= counting) return 0;
    let sum = 0;
    for (let at = firstTerm; at < x.length; at += 2) sum += x[at] * x[at + 1];
    return sum;
  },
  fit_quotient: (x, y, _step, _low, _size, overflow) => (overflow < counting ? x / y : 0),
};

/** Builds expression nodes; equal ones are shared, and operations on numbers alone are computed at once. */
export class Graph {
  private readonly known = new Map<string, Node>();

  private share(key: string, make: (id: number) => Node): Node {
    const found = this.known.get(key);
    if (found) return found;
    const node = make(this.known.size);
    this.known.set(key, node);
    return node;
  }

  number(value: number): Node {
    const key = Object.is(value, -0) ? 'n-0' : `n${value}`;
    return this.share(key, (id) => ({ kind: 'number', id, value }));
  }

  /** A number that the build holds; what is computed from it does not remember that. */
  stored(value: number, stored: StoredNumber): Node {
    const key = `${stored.name}${stored.place.line},${stored.place.column}=${value}`;
    return this.share(key, (id) => ({ kind: 'number', id, value, stored }));
  }

  leaf(leaf: LeafKind, index: number): Extract<Node, { kind: 'leaf' }> {
    const node = this.share(`${leaf}${index}`, (id) => ({ kind: 'leaf', id, leaf, index }));
    return node as Extract<Node, { kind: 'leaf' }>;
  }

  /** One operation on its arguments, in order. */
  apply(name: OperationName, ...of: Node[]): Node {
    if (of.every((node) => node.kind === 'number')) {
      return this.number(operations[name](...of.map((node) => (node as { value: number }).value)));
    }
    if (name === 'choose' && of[0].kind === 'number') return of[0].value !== 0 ? of[1] : of[2];
    return this.share(`${name}(${of.map((node) => node.id).join()})`, (id) => ({
      kind: 'operation',
      id,
      name,
      of,
    }));
  }
}

/** Every node that the roots need, arguments before results, each once. */
export function inOrder(roots: readonly Node[]): Node[] {
  const seen = new Set<Node>();
  const visit = (node: Node): void => {
    if (seen.has(node)) return;
    if (node.kind === 'operation') for (const argument of node.of) visit(argument);
    seen.add(node);
  };
  for (const root of roots) visit(root);
  return [...seen];
}

/** Whether any leaf of the stated kinds stands in the expression. */
export function dependsOn(root: Node, kinds: readonly LeafKind[]): boolean {
  return inOrder([root]).some((node) => node.kind === 'leaf' && kinds.includes(node.leaf));
}
