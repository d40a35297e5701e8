import { balance } from './balance.js';
import { makeReflection, reduceToHessenberg, reflectFromLeft, reflectFromRight } from './hessenberg.js';
import { euclideanNorm } from './matrix.js';
import type { StateEquations } from './state_equations.js';

/** The states that one input reaches, scaled and turned into a chain which starts at the input. */
export interface Chain {
  /** Number of states reached. */
  n: number;
  /** n × n upper Hessenberg matrix, row by row; for a sampled system that of `a` less the identity. */
  h: Float64Array;
  /** One over the entry of `h` left of each diagonal entry; the first is not used. */
  inverse: Float64Array;
  /** outputs × n, row by row, multiplied by the gain with which the input drives the first state. */
  c: Float64Array;
  /** The feedthrough to each output. */
  d: Float64Array;
}

/** Scales and turns the states so that input number `input` enters the first one only and `a` is in Hessenberg form. */
export function reachedChain(system: StateEquations, input: number): Chain {
  const n = system.a.rows;
  const { a, b, c } = scaledParts(system, input);
  const drive = turnOntoFirstState(a, b, c, n);
  reduceToHessenberg(a, n, c);
  const reached = drive === 0 ? 0 : lengthOfChain(a, n);
  const outputs = system.c.rows;
  const chain = {
    n: reached,
    h: new Float64Array(reached * reached),
    inverse: new Float64Array(reached),
    c: new Float64Array(outputs * reached),
    d: Float64Array.from({ length: outputs }, (_, k) => system.d.data[k * system.d.columns + input]),
  };
  for (let i = 0; i < reached; i++) {
    chain.h.set(a.subarray(i * n, i * n + reached), i * reached);
    if (i > 0) chain.inverse[i] = 1 / a[i * n + i - 1];
    for (let k = 0; k < outputs; k++) chain.c[k * reached + i] = drive * c[k * n + i];
  }
  return chain;
}

/**
 * `a` (less the identity for a sampled system), one column of `b`, and `c`, the states scaled by powers of two. Input and
 * outputs take part in the scaling, as one more row and column, because a chain of integrators alone cannot be balanced.
 */
function scaledParts(
  system: StateEquations,
  input: number,
): { a: Float64Array; b: Float64Array; c: Float64Array } {
  const n = system.a.rows;
  const size = n + 1;
  const outputs = system.c.rows;
  const c = system.c.data.slice();
  const all = new Float64Array(size * size);
  for (let i = 0; i < n; i++) {
    all.set(system.a.data.subarray(i * n, (i + 1) * n), i * size);
    if (system.period !== undefined) all[i * size + i] -= 1;
    all[i * size + n] = system.b.data[i * system.b.columns + input];
    for (let k = 0; k < outputs; k++) all[n * size + i] += Math.abs(c[k * n + i]);
  }
  const factors = balance(all, size);
  const a = new Float64Array(n * n);
  const b = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    a.set(all.subarray(i * size, i * size + n), i * n);
    b[i] = all[i * size + n];
    for (let k = 0; k < outputs; k++) c[k * n + i] *= factors[i] / factors[n];
  }
  return { a, b, c };
}

/** Turns the states so that `b` becomes a multiple of the first basis vector, and returns that multiple. */
function turnOntoFirstState(a: Float64Array, b: Float64Array, c: Float64Array, n: number): number {
  if (n === 0) return 0;
  const v = b.slice();
  const weight = makeReflection(v, 0, n);
  if (weight === 0) return b[0];
  reflectFromLeft(a, n, v, weight, 0);
  reflectFromRight(a, n, v, weight, 0);
  reflectFromRight(c, n, v, weight, 0);
  return -Math.sign(v[0]) * euclideanNorm(b);
}

function lengthOfChain(h: Float64Array, n: number): number {
  let length = 1;
  while (length < n && h[length * n + length - 1] !== 0) length++;
  return length;
}
