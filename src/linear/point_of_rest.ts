import { Matrix as LibraryMatrix, SingularValueDecomposition } from 'ml-matrix';
import { Evaluation } from '../loop/evaluate.js';
import type { Loop } from '../loop/loop.js';
import { withoutRanges } from '../loop/without_ranges.js';
import { Linearisation, type RowGroup, withReadings } from './linearise.js';
import { add, blockOf, identity, type Matrix, multiply, place, toRows, zeros } from './matrix.js';

/** Everything in a loop that keeps a value, where nothing changes any more. */
export interface PointOfRest {
  state: number[];
  memory: number[];
  held: number[];
  mode: number[];
}

/** The point of rest, or why there is none. */
export type RestResult = { kind: 'rest'; point: PointOfRest } | { kind: 'none'; why: string };

const mostRounds = 60;
/** A search that comes back to where it was so many rounds ago, or fewer, runs from one end of a range to the other. */
const longestCircle = 4;
/** The smallest number that a float64 holds in full: what is below is nothing. */
const nothing = 2 ** -1022;
const mostModeChanges = 20;

/**
 * Solves for the point where every rate is zero and every sampled value repeats, with quanta and noise off. Modes start as
 * they are stated and are taken anew at the point found, until they stand.
 * @param inputs SI values of the inputs, constant.
 */
export function pointOfRest(
  linearisation: Linearisation,
  parameters: ArrayLike<number>,
  inputs: ArrayLike<number>,
): RestResult {
  const { loop } = linearisation;
  let mode = loop.modes.map(({ start }) => start);
  for (let change = 0; change < mostModeChanges; change++) {
    const result = restWithModes(linearisation, { parameter: parameters, input: inputs, mode });
    if (result.kind === 'none') return result;
    const { point } = result;
    const evaluation = new Evaluation({ parameter: parameters, input: inputs, ...point }, 'off');
    const next = loop.modes.map((one) => evaluation.of(one.next));
    if (next.every((value, i) => value === mode[i])) return result;
    mode = next;
  }
  const names = loop.modes.map(({ name }) => `'${name}'`).join(', ');
  return {
    kind: 'none',
    why: `no point of rest was found: ${names} changed ${mostModeChanges} times on the way`,
  };
}

interface Given {
  parameter: ArrayLike<number>;
  input: ArrayLike<number>;
  mode: number[];
}

const freed = new WeakMap<Linearisation, Linearisation>();

/** The loop without its ranges, for a point to search from: beyond a range nothing tells which way to go. */
function withoutItsRanges(linearisation: Linearisation): Linearisation {
  const found = freed.get(linearisation) ?? new Linearisation(withoutRanges(linearisation.loop));
  freed.set(linearisation, found);
  return found;
}

/** A search from where everything starts; where that does not end, one from the rest of the loop without its ranges. */
function restWithModes(linearisation: Linearisation, given: Given): RestResult {
  const { states, memories, held } = linearisation.loop;
  const start = [
    ...states.map((one) => one.start),
    ...memories.map((one) => one.start),
    ...held.map(() => 0),
  ];
  const first = searchFrom(linearisation, given, start);
  if (first.kind === 'rest') return first;
  const free = searchFrom(withoutItsRanges(linearisation), given, start);
  if (free.kind === 'rest') {
    const { state, memory, held: kept } = free.point;
    const second = searchFrom(linearisation, given, [...state, ...memory, ...kept]);
    if (second.kind === 'rest') return second;
  }
  return first;
}

/** Newton's method with the least move (pseudo-inverse), so that free integrators stay where they start. */
function searchFrom(linearisation: Linearisation, given: Given, start: readonly number[]): RestResult {
  const { loop } = linearisation;
  let unknowns = [...start];
  let residual: number[] = [];
  const past: number[][] = [];
  for (let round = 0; round < mostRounds; round++) {
    const point = { ...split(loop, unknowns), mode: given.mode };
    const evaluation = new Evaluation(withReadings(loop, { ...given, ...point }), 'off');
    residual = residuals(linearisation, evaluation, point);
    if (!residual.every(Number.isFinite)) break;
    if (residual.every((value) => value === 0)) return { kind: 'rest', point };
    const slopes = slopesOfResiduals(linearisation, evaluation);
    if (isSmall(residual, slopes, unknowns)) return { kind: 'rest', point };
    const move = leastSquares(slopes, residual);
    past.push(unknowns);
    unknowns = unknowns.map((value, i) => value - move[i]);
    if (past.slice(-longestCircle, -1).some((one) => isSame(one, unknowns))) {
      if (residual.every((value) => Math.abs(value) < nothing)) return { kind: 'rest', point };
      break;
    }
  }
  return { kind: 'none', why: whyNone(loop, residual, past.length) };
}

function split(loop: Loop, unknowns: number[]): Omit<PointOfRest, 'mode'> {
  const memoryAt = loop.states.length;
  const heldAt = memoryAt + loop.memories.length;
  return {
    state: unknowns.slice(0, memoryAt),
    memory: unknowns.slice(memoryAt, heldAt),
    held: unknowns.slice(heldAt),
  };
}

function residuals({ roots }: Linearisation, evaluation: Evaluation, point: PointOfRest): number[] {
  return [
    ...roots.derivative.map((node) => evaluation.of(node)),
    ...roots.memory.map((node, i) => evaluation.of(node) - point.memory[i]),
    ...roots.held.map((node, i) => evaluation.of(node) - point.held[i]),
  ];
}

/** Slopes of the residuals in states, memories and held values, with the readings eliminated. */
function slopesOfResiduals(linearisation: Linearisation, evaluation: Evaluation): Matrix {
  const { loop } = linearisation;
  const [n, m, h] = [loop.states.length, loop.memories.length, loop.held.length];
  const total = n + m + h;
  const slopes = (rows: RowGroup): Matrix => {
    const direct = zeros(linearisation.roots[rows].length, total);
    place(direct, linearisation.slopes(rows, 'state', evaluation), 0, 0);
    place(direct, linearisation.slopes(rows, 'memory', evaluation), 0, n);
    place(direct, linearisation.slopes(rows, 'held', evaluation), 0, n + m);
    if (rows === 'reading') return direct;
    return add(direct, multiply(linearisation.slopes(rows, 'reading', evaluation), slopes('reading')));
  };
  const result = zeros(total, total);
  place(result, slopes('derivative'), 0, 0);
  place(result, slopes('memory'), n, 0);
  place(result, slopes('held'), n + m, 0);
  place(result, add(blockOf(result, n, n, m + h, m + h), identity(m + h), -1), n, n);
  return result;
}

/**
 * Small against the terms that make up each residual. An unknown counts with what would match the other terms of some
 * equation, where it is smaller: a speed that came out as 1e-17 instead of 0 is no unrest.
 */
function isSmall(residual: number[], slopes: Matrix, unknowns: number[]): boolean {
  const n = unknowns.length;
  const weighed = (sizes: ArrayLike<number>): number[] =>
    residual.map((_, i) => {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += Math.abs(slopes.data[i * n + j]) * sizes[j];
      return sum;
    });
  const terms = weighed(unknowns.map(Math.abs));
  const sizes = unknowns.map((value, j) =>
    terms.reduce((most, size, i) => {
      const slope = Math.abs(slopes.data[i * n + j]);
      return slope > 0 ? Math.max(most, size / slope) : most;
    }, Math.abs(value)),
  );
  const scales = weighed(sizes);
  return residual.every((value, i) => Math.abs(value) <= 1e-12 * scales[i]);
}

function isSame(a: readonly number[], b: readonly number[]): boolean {
  return a.every((value, i) => Math.abs(value - b[i]) <= 1e-9 * Math.abs(value));
}

/** The least move that solves slopes · move = residual; rows are brought to one size first, since their units differ. */
function leastSquares(slopes: Matrix, residual: number[]): number[] {
  const sizes = toRows(slopes).map((row) => Math.max(...row.map(Math.abs)) || 1);
  const rows = toRows(slopes).map((row, i) => row.map((value) => value / sizes[i]));
  const decomposition = new SingularValueDecomposition(new LibraryMatrix(rows), { autoTranspose: true });
  const scaled = residual.map((value, i) => value / sizes[i]);
  return decomposition.solve(LibraryMatrix.columnVector(scaled)).to1DArray();
}

function whyNone(loop: Loop, residual: number[], rounds: number): string {
  const names = [
    ...loop.states.map(({ name }) => `the rate of '${name}'`),
    ...loop.memories.map(({ name }) => `'${name}'`),
    ...loop.held.map(({ name }) => `'${name}'`),
  ];
  const worst = residual.reduce(
    (best, value, i) => (Math.abs(value) > Math.abs(residual[best]) ? i : best),
    0,
  );
  const value = residual[worst];
  return `no point of rest was found in ${rounds} rounds: ${names[worst]} still changes by ${value.toPrecision(3)}`;
}
