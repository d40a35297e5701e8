import fc from 'fast-check';
import { expect, test } from 'vitest';
import { cyclesOf } from '../../src/spec/dependencies.js';
import { errorsOf } from './loading.js';
import { smallSpec } from './small_spec.js';

/** Two controllers, of which the outer gives its output to the inner; `settings` of the outer as given. */
function cascade(outer: string, outerSettings = 'every: 10 ms', innerSettings = 'every: 1 ms'): string {
  return [
    'pawl: 1',
    'loop: a cascade',
    'inputs: { goal: { unit: V } }',
    'plant: { out: { lag: 10 ms, of: drive, unit: V } }',
    'sensors: { seen: { of: out, unit: V } }',
    'controllers:',
    '  inner:',
    `    ${innerSettings}`,
    '    signals:',
    '      command: { value: wanted - seen, unit: V }',
    '  outer:',
    ...outerSettings.split('\n').map((line) => `    ${line}`),
    '    signals:',
    `      wanted: { value: ${outer}, unit: V }`,
    'actuators: { drive: { of: command, unit: V } }',
    'scenarios: { step: { lasts: 1 s, inputs: { goal: { step: 1 V, at: 0.1 s } } } }',
    'requirements: [{ name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 % }]',
  ].join('\n');
}

const askForDelay =
  'a.pawl.yaml:10:7: `command` ← `wanted` ← `command`: each needs the next at the same sampling instant: let one of them use before(…), or give a controller a delay';

test('a chain of controllers has an order, whatever the order in the file', () => {
  expect(errorsOf(cascade('goal - seen'))).toEqual([]);
});

test('controllers that need each other at one instant have none', () => {
  expect(errorsOf(cascade('goal - command'))).toEqual([askForDelay]);
});

test('the previous value of a signal is there already', () => {
  expect(errorsOf(cascade('goal - before(command)'))).toEqual([]);
  expect(errorsOf(cascade('goal - before(command) - 0*command'))).toEqual([askForDelay]);
  expect(
    errorsOf(smallSpec({ signals: 'command: { value: k*(goal - seen) + before(command)/2, unit: V }' })),
  ).toEqual([]);
});

test('what comes after a delay is not needed at the same instant', () => {
  expect(errorsOf(cascade('goal - command', 'every: 10 ms\ndelay: 1 ms'))).toEqual([]);
  expect(errorsOf(cascade('goal - command', 'every: 10 ms\ndelay: 0 s'))).toEqual([askForDelay]);
  expect(errorsOf(cascade('goal - command', 'every: 10 ms\ndelay: 0'))).toEqual([askForDelay]);
});

test('a delay does not part the signals of one controller', () => {
  const signals =
    'command: { value: k*(goal - seen) + other, unit: V }\nother: { value: command/2, unit: V }';
  expect(errorsOf(smallSpec({ signals, settings: 'every: 1 ms\ndelay: 100 us' }))).toEqual([
    expect.stringContaining('`command` ← `other` ← `command`'),
  ]);
});

test('a controller may hear another controller alone, but not itself alone', () => {
  const text = cascade('before(wanted) + (1 V)');
  expect(errorsOf(text)).toEqual([
    'a.pawl.yaml:11:3: controller `outer` never gets a signal: none of its signals depends on a sensor, an input or another controller',
  ]);
  expect(errorsOf(cascade('before(command) + (1 V)'))).toEqual([]);
});

test('a state breaks a cycle of the plant: what it integrates or lags may depend on it', () => {
  const plants = [
    'out: { integral: (drive - out)/(1 s), unit: V }',
    'out: { lag: 10 ms, of: drive - other, unit: V }\nother: { value: 2*out, unit: V }',
    'out: { integral: other/(1 s), unit: V }\nother: { lag: 1 s, of: drive - out, unit: V }',
    'out: { lag: 10 ms, of: drive, unit: V, range: [-1 V, high] }\nhigh: { value: (2 V) - 0*drive, unit: V }',
  ];
  for (const plant of plants) expect(errorsOf(smallSpec({ plant })), plant).toEqual([]);
});

test('three signals in a ring, and two rings, are each told once', () => {
  const plant = [
    'out: { value: b + drive, unit: V }',
    'b: { value: c, unit: V }',
    'c: { value: out, unit: V }',
    'd: { value: e, unit: V }',
    'e: { value: 2*d, unit: V }',
  ].join('\n');
  expect(errorsOf(smallSpec({ plant })).map((line) => line.replace(/: each.*/, ''))).toEqual([
    'a.pawl.yaml:14:3: `out` ← `b` ← `c` ← `out`',
    'a.pawl.yaml:17:3: `d` ← `e` ← `d`',
  ]);
});

const graphs = fc.array(fc.tuple(fc.nat(9), fc.nat(9)), { maxLength: 25 }).map((edges) => {
  const graph = new Map<string, string[]>(Array.from({ length: 10 }, (_, at) => [`${at}`, []]));
  for (const [from, to] of edges) graph.get(`${from}`)!.push(`${to}`);
  return graph;
});

/** Whether nodes can be taken away one after the other, each when nothing that is left points from it (Kahn 1962). */
function hasOrder(graph: ReadonlyMap<string, readonly string[]>): boolean {
  const left = new Set(graph.keys());
  for (let taken = true; taken; ) {
    const free = [...left].filter((name) => graph.get(name)!.every((next) => !left.has(next)));
    for (const name of free) left.delete(name);
    taken = free.length > 0;
  }
  return left.size === 0;
}

test('a cycle is found exactly where there is no order', () => {
  fc.assert(
    fc.property(graphs, (graph) => {
      expect(cyclesOf(graph).length === 0).toBe(hasOrder(graph));
    }),
    { numRuns: 500 },
  );
});

test('what is called a cycle is one: each name is followed by the next, and the last by the first', () => {
  fc.assert(
    fc.property(graphs, (graph) => {
      for (const cycle of cyclesOf(graph)) {
        cycle.forEach((name, at) => {
          expect(graph.get(name)).toContain(cycle[(at + 1) % cycle.length]);
        });
        expect(new Set(cycle).size).toBe(cycle.length);
      }
    }),
  );
});

test('a long chain of signals is walked without recursion', () => {
  const graph = new Map(Array.from({ length: 5_000 }, (_, at) => [`${at}`, [`${at + 1}`]]));
  expect(cyclesOf(graph)).toEqual([]);
  graph.set('4999', ['0']);
  expect(cyclesOf(graph)[0]).toHaveLength(5_000);
});
