import { describe, expect, it } from 'vitest';
import { TraceStore } from '../../src/kernel/run_plant.js';
import { Linearisation } from '../../src/linear/linearise.js';
import { pointOfRest } from '../../src/linear/point_of_rest.js';
import { expandLoop } from '../../src/loop/expand.js';
import { scheduleOf } from '../../src/loop/schedule.js';
import { ScenarioEvents } from '../../src/measure/scenario_events.js';
import { ScenarioRun } from '../../src/measure/scenario_run.js';
import { specOf } from '../loop/spec_of.js';
import { askScipy, scipyAvailable } from '../scipy.js';

const script = new URL('./reference_traces.py', import.meta.url);
interface Law {
  period: number;
  delay: number;
  kp: number;
  ki: number;
  target: number;
  samples: number;
}

interface LinearCase extends Law {
  kind: 'linear';
  a: number[][];
  b: number[];
  c: number[];
}

interface NonlinearCase extends Law {
  kind: 'nonlinear';
  plant: Record<'drive' | 'viscous' | 'coulomb' | 'smooth' | 'weight' | 'inertia' | 'lag', number>;
}

/** A repeatable sequence of numbers from 0 to 1 (D. H. Lehmer's generator with Park and Miller's factor, 1988). */
function repeatable(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 0x7fffffff;
    return state / 0x7fffffff;
  };
}

function law(random: () => number, scale: number): Law {
  const period = [0.01, 0.02, 0.05][Math.floor(random() * 3)];
  const delay = Math.round(random() * 250) * (period / 100);
  return { period, delay, kp: scale * random(), ki: scale * random(), target: 1 + random(), samples: 200 };
}

/** A random plant of order 1 to 6 whose poles lie on both sides, not too far on the right. */
function linearCase(random: () => number, k: number): LinearCase {
  const n = 1 + (k % 6);
  const entry = (): number => Math.round((random() * 8 - 4) * 1000) / 1000;
  const a = Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (_, j) => entry() - (i === j ? 3 : 0)),
  );
  const list = (): number[] => Array.from({ length: n }, entry);
  return { kind: 'linear', ...law(random, 2), a, b: list(), c: list() };
}

function nonlinearCase(random: () => number): NonlinearCase {
  const between = (low: number, high: number): number => low + (high - low) * random();
  const plant = {
    drive: between(5, 20),
    viscous: between(0.5, 2),
    coulomb: between(0.1, 1),
    smooth: between(0.05, 0.3),
    weight: between(0, 3),
    inertia: between(0.2, 1),
    lag: between(0.02, 0.2),
  };
  return { kind: 'nonlinear', ...law(random, 0.5), samples: 100, plant };
}

function plantText(one: LinearCase | NonlinearCase): string {
  if (one.kind === 'linear') {
    const { a, b, c } = one;
    const rows = a.map((row) => `[${row.join(', ')}]`).join(', ');
    return `  y: { state_equations: { state_matrix: [${rows}], input_matrix: [${b.join(', ')}], output_matrix: [${c.join(', ')}] }, of: drive }`;
  }
  const p = one.plant;
  const pull = `${p.drive}*lagged - ${p.viscous}*speed - ${p.coulomb}*tanh(speed/${p.smooth}) - ${p.weight}*sin(y)`;
  return `  lagged: { lag: ${p.lag} s, of: drive }
  speed: { integral: (${pull})/(${p.inertia} s) }
  y: { integral: speed/(1 s) }`;
}

/** The plant's output at each sampling instant. */
function traced(one: LinearCase | NonlinearCase, halvings: number): number[] {
  const spec = specOf(`
inputs: { target: {} }
plant:
${plantText(one)}
sensors: { gauge: { of: y } }
controllers:
  axis:
    every: ${one.period} s
    delay: ${one.delay} s
    signals: { push: { pid: { kp: ${one.kp}, ki: ${one.ki} 1/s }, of: target - gauge } }
actuators: { drive: { of: push } }
scenarios: { jump: { lasts: ${one.period * one.samples} s, inputs: { target: { step: ${one.target}, at: 0 s } } } }
requirements: [{ name: top, measure: largest_value, of: y, in: jump, at_most: 9 }]
`);
  const [scenario] = spec.scenarios;
  const loop = expandLoop(spec, new Map(), { scenario });
  const schedule = scheduleOf(loop, []);
  const rest = pointOfRest(new Linearisation(loop), [], loop.inputRest);
  if (rest.kind === 'none') throw new Error(rest.why);
  const runner = new ScenarioRun(
    loop,
    scenario,
    new ScenarioEvents(loop, scenario),
    ['y'],
    1,
    new TraceStore(),
  );
  const run = runner.run(new Float64Array(0), rest.point, schedule, halvings);
  return Array.from({ length: one.samples }, (_, k) => {
    const time = k * one.period;
    const piece = run.times.findIndex((start, i) => i < run.pieces && Math.abs(start - time) < 1e-9);
    return run.records[0][4 * piece];
  });
}

describe.skipIf(!scipyAvailable)('traces against scipy (Virtanen and others, 2020)', () => {
  const random = repeatable(20261201);
  const linear = Array.from({ length: 60 }, (_, k) => linearCase(random, k));
  const nonlinear = Array.from({ length: 12 }, () => nonlinearCase(random));

  async function reference(cases: (LinearCase | NonlinearCase)[]): Promise<number[][]> {
    return askScipy(script, cases);
  }

  /** Largest error of a trace against the size that it has reached so far: an unstable loop forgets its small beginnings. */
  function error(actual: number[], expected: number[]): number {
    let size = 0;
    return expected.reduce((most, value, k) => {
      size = Math.max(size, Math.abs(value));
      return size === 0 ? most : Math.max(most, Math.abs(actual[k] - value) / size);
    }, 0);
  }

  it('of 60 random linear loops, stable and not, agree to 1e-9', async () => {
    const expected = await reference(linear);
    let stable = 0;
    linear.forEach((one, k) => {
      expect(error(traced(one, 0), expected[k]), `loop ${k}`).toBeLessThan(1e-9);
      if (Math.abs(expected[k][199]) < 10) stable++;
    });
    expect(stable).toBeGreaterThan(10);
    expect(stable).toBeLessThan(60);
  });

  it('of 12 smooth nonlinear loops agree to 1e-6', async () => {
    const expected = await reference(nonlinear);
    nonlinear.forEach((one, k) => {
      expect(error(traced(one, 5), expected[k]), `loop ${k}`).toBeLessThan(1e-6);
    });
  });
});
