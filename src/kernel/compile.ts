import { AffineForm } from '../loop/affine.js';
import { Derivative } from '../loop/derivative.js';
import { inOrder, type Node } from '../loop/graph.js';
import type { Loop, TracedSignal } from '../loop/loop.js';
import { rateOf } from '../loop/rate.js';
import { type Layout, layOut } from './layout.js';
import { helpers, inArray, statements } from './source.js';
import { stiffStep } from './stiff_step.js';

/** A loop's equations as compiled functions over the array `m` which `layout` describes. */
export interface CompiledLoop {
  loop: Loop;
  layout: Layout;
  /**
   * Moves the continuous states by one step of the classical fourth-order method (Kutta 1901), all else constant, unless it is
   * too long. How fast the plant is against the step shows in its inner stages at no cost: 2·|c − b|/|b − a| is near h·|λ|
   * (E. Hairer and G. Wanner, 'Solving Ordinary Differential Equations II', 1996, section IV.2).
   * @param inverse one over the largest rate of each state so far; it is kept up to date.
   * @param most the largest speed against the step that is allowed.
   * @returns the speed against the step; where it is above `most`, or not a number, nothing has moved.
   */
  step: (m: Float64Array, h: number, inverse: Float64Array, most: number) => number;
  /**
   * The same by a method for fast poles next to slow ones.
   * @returns whether it moved; it leaves in `error` by how much a method of order three differs from it.
   */
  stiffStep: (m: Float64Array, h: number, error: Float64Array) => boolean;
  /** Writes the slopes of the rates in the states, row by row. */
  slopes: (m: Float64Array, slopes: Float64Array) => void;
  /** The rates as sums, where they are such between two jumps: the plant is linear then. */
  affine: AffineForm | undefined;
  /** Writes the values of the sources and then the switches of `affine`. */
  readSources: (m: Float64Array, values: Float64Array) => void;
  /** Takes anew the modes that go with the motion; undefined where there are none. */
  follow: ((m: Float64Array) => void) | undefined;
  /** Takes modes anew and corrects states, from the states as they are; undefined where the loop has neither. */
  settle: ((m: Float64Array) => void) | undefined;
  /** Whether settling would now make the plant jump: 1 or 0; undefined where nothing jumps. */
  jumps: ((m: Float64Array) => number) | undefined;
  /** For each task: samples its sensors. */
  sample: ((m: Float64Array) => void)[];
  /** For each task: computes its signals, its results into `pending`, and its memories. */
  compute: ((m: Float64Array) => void)[];
  /** Writes value and rate of each traced signal at places `at` and `at + 1` of its record. */
  record: (m: Float64Array, records: Float64Array[], at: number) => void;
}

/** Of a rate from one stage of a step to the next, against the largest rate so far. */
const leastChange = 1e-9;

/** Compiles a loop with traces of the named signals, in this order. */
export function compileLoop(loop: Loop, traced: readonly string[]): CompiledLoop {
  const signals = traced.map((name) => loop.signals.get(name)!);
  const sampled = signals.filter((signal) => signal.kind === 'sampled');
  const layout = layOut(loop, sampled.length);
  const tasks = loop.tasks.map((_, task) => task);
  const derivatives = loop.states.map(({ derivative }) => derivative);
  const rates = makeFunction('m, rates', listText(derivatives, layout, 'rates'));
  const slopes = makeFunction('m, slopes', listText(slopesOf(loop), layout, 'slopes'));
  const affine = AffineForm.of(derivatives, loop.modes);
  const sources = affine ? [...affine.sources, ...affine.switches] : [];
  return {
    loop,
    layout,
    step: makeFunction('m, h, inverse, most', stepText(loop, layout)),
    stiffStep: stiffStep({ rates, slopes }, layout.state, loop.states.length),
    slopes,
    affine,
    readSources: makeFunction('m, values', listText(sources, layout, 'values')),
    follow: loop.modes.some(({ taken }) => taken === 'with_motion')
      ? makeFunction('m', assignments(movedModes(loop, layout), layout))
      : undefined,
    settle:
      loop.modes.length + loop.corrections.length > 0
        ? makeFunction('m', settleText(loop, layout))
        : undefined,
    jumps: jumpConditions(loop).length > 0 ? makeFunction('m', jumpsText(loop, layout)) : undefined,
    sample: tasks.map((task) => makeFunction('m', sampleText(loop, layout, task))),
    compute: tasks.map((task) => makeFunction('m', computeText(loop, layout, task, sampled))),
    record: makeFunction('m, records, at', recordText(loop, layout, signals, sampled)),
  };
}

/** The only place where source text becomes a function; the text is written from the graph's own nodes. */
// biome-ignore lint/suspicious/noExplicitAny: a compiled function has whatever arguments its text says
function makeFunction(parameters: string, body: string[]): any {
  const text = `'use strict'; return (${parameters}) => {\n${body.join('\n')}\n};`;
  return new Function(...Object.keys(helpers), text)(...Object.values(helpers));
}

/** Four stages; stage k sees the states moved along the rates of the stage before. */
function stepText(loop: Loop, layout: Layout): string[] {
  const rates = loop.states.map(({ derivative }) => derivative);
  const lines = loop.states.map((_, i) => `const x${i} = m[${layout.state + i}];`);
  const stage = (name: string, state: (i: number) => string): void => {
    const fromArray = inArray(layout);
    const { lines: stageLines, results } = statements(
      rates,
      (leaf) => (leaf.leaf === 'state' ? state(leaf.index) : fromArray(leaf)),
      `${name}v`,
    );
    lines.push(...stageLines, ...results.map((result, i) => `const ${name}${i} = ${result};`));
  };
  stage('a', (i) => `x${i}`);
  stage('b', (i) => `x${i} + 0.5 * h * a${i}`);
  stage('c', (i) => `x${i} + 0.5 * h * b${i}`);
  lines.push('let p = 0, q = 0;');
  loop.states.forEach((_, i) => {
    lines.push(
      `const r${i} = Math.max(Math.abs(a${i}), Math.abs(b${i}));`,
      `const w${i} = r${i} * inverse[${i}] > 1 ? 1 / r${i} : inverse[${i}];`,
      `p = Math.max(p, Math.abs(b${i} - a${i}) * w${i}); q = Math.max(q, Math.abs(c${i} - b${i}) * w${i});`,
    );
  });
  // Differences that small are rounding.
  lines.push(`const speed = p < ${leastChange} ? 0 : 2 * q / p;`, 'if (!(speed <= most)) return speed;');
  stage('d', (i) => `x${i} + h * c${i}`);
  loop.states.forEach((_, i) => {
    lines.push(`inverse[${i}] = w${i};`);
    lines.push(`m[${layout.state + i}] = x${i} + h / 6 * (a${i} + 2 * (b${i} + c${i}) + d${i});`);
  });
  return [...lines, 'return speed;'];
}

/** Writes the values of expressions into the list of this name. */
function listText(nodes: readonly Node[], layout: Layout, list: string): string[] {
  const { lines, results } = statements(nodes, inArray(layout), 'v');
  return [...lines, ...results.map((result, i) => `${list}[${i}] = ${result};`)];
}

/** Of the states' rates in the states, row by row. */
function slopesOf(loop: Loop): Node[] {
  const derivative = new Derivative(loop.graph);
  return loop.states.flatMap((row) =>
    loop.states.map((_, column) => derivative.of(row.derivative, loop.graph.leaf('state', column))),
  );
}

function movedModes({ modes }: Loop, layout: Layout): { place: number; node: Node }[] {
  return modes.flatMap(({ taken, next }, i) =>
    taken === 'with_motion' ? [{ place: layout.mode + i, node: next }] : [],
  );
}

/** Pairs of values that differ when the plant is about to jump. */
function jumpConditions({ graph, modes, corrections }: Loop): [Node, Node][] {
  return [
    ...modes.flatMap(({ taken, next }, i): [Node, Node][] =>
      taken === 'at_jumps' ? [[graph.leaf('mode', i), next]] : [],
    ),
    ...corrections.map(({ state, value }): [Node, Node] => [graph.leaf('state', state), value]),
  ];
}

function jumpsText(loop: Loop, layout: Layout): string[] {
  const { lines, results } = statements(jumpConditions(loop).flat(), inArray(layout), 'v');
  const pairs = results.flatMap((result, i) => (i % 2 === 0 ? [`${result} !== ${results[i + 1]}`] : []));
  return [...lines, `return ${pairs.join(' || ')} ? 1 : 0;`];
}

/** All new values from the old ones, then all at once. */
function settleText(loop: Loop, layout: Layout): string[] {
  const targets = [
    ...loop.modes.map(({ next }, i) => ({ place: layout.mode + i, node: next })),
    ...loop.corrections.map(({ state, value }) => ({ place: layout.state + state, node: value })),
  ];
  return assignments(targets, layout);
}

/** Computes all nodes, then puts each in its place. */
function assignments(targets: { place: number; node: Node }[], layout: Layout): string[] {
  const { lines, results } = statements(
    targets.map(({ node }) => node),
    inArray(layout),
    'v',
  );
  return [...lines, ...targets.map(({ place }, at) => `m[${place}] = ${results[at]};`)];
}

function sampleText(loop: Loop, layout: Layout, task: number): string[] {
  const targets = loop.readings.flatMap((reading, i) =>
    reading.task === task ? [{ place: layout.reading + i, node: reading.sampled }] : [],
  );
  return assignments(targets, layout);
}

function computeText(
  loop: Loop,
  layout: Layout,
  task: number,
  sampled: Extract<TracedSignal, { kind: 'sampled' }>[],
): string[] {
  const targets: { place: number; node: Node }[] = [];
  loop.held.forEach((held, i) => {
    if (loop.channels[held.channel].task === task)
      targets.push({ place: layout.pending + i, node: held.value });
  });
  loop.memories.forEach((memory, i) => {
    if (memory.task === task) targets.push({ place: layout.memory + i, node: memory.next });
  });
  // Counting costs time, and so only what is asked for is counted.
  for (const node of inOrder(sampled.map(({ value }) => value))) {
    if (node.kind !== 'leaf' || node.leaf !== 'counter' || loop.counters[node.index].task !== task) continue;
    targets.push({ place: layout.counter + node.index, node: loop.counters[node.index].next });
  }
  sampled.forEach((signal, i) => {
    if (signal.task === task) targets.push({ place: layout.latest + i, node: signal.value });
  });
  return assignments(targets, layout);
}

function recordText(
  loop: Loop,
  layout: Layout,
  signals: TracedSignal[],
  sampled: Extract<TracedSignal, { kind: 'sampled' }>[],
): string[] {
  const zero = loop.graph.number(0);
  const roots = signals.flatMap((signal) =>
    signal.kind === 'sampled' ? [zero, zero] : [signal.value, rateOf(loop.graph, loop.states, signal.value)],
  );
  const { lines, results } = statements(roots, inArray(layout), 'v');
  signals.forEach((signal, i) => {
    const value =
      signal.kind === 'sampled' ? `m[${layout.latest + sampled.indexOf(signal)}]` : results[2 * i];
    lines.push(`const r${i} = records[${i}]; r${i}[at] = ${value}; r${i}[at + 1] = ${results[2 * i + 1]};`);
  });
  return lines;
}
