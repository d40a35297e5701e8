import { describe, expect, it } from 'vitest';
import { scipyAvailable } from '../../scipy.js';
import { type Law, noise, outputs, stepper } from './law.js';
import { answersOf } from './scipy.js';

const period = 0.1;
const uses = ['this_sample', 'last_sample'] as const;

function rows(matrix: readonly (readonly number[])[]): string {
  return `[${matrix.map((row) => `[${row.map((entry) => `"${entry}"`).join(', ')}]`).join(', ')}]`;
}

/** A law that feeds back the estimates of an observer of `order` plain states, driven by itself. */
function observed(
  settings: string,
  feedback: readonly number[],
  { measured = ['x'], driven = true } = {},
): Law {
  const states = feedback.map((_, at) => `s${at + 1}`);
  return {
    signals: [
      ...states.map((state) => `${state}: { estimate: model }`),
      `model: { observer: { states: [${states.join(', ')}], measured: [${measured.join(', ')}], ${driven ? 'driven_by: out, ' : ''}${settings} } }`,
      `out: { state_feedback: { states: [${states.join(', ')}], gains: ${rows([feedback])} } }`,
    ],
    inputs: Object.fromEntries(measured.slice(1).map((name) => [name, '1'])),
  };
}

/** Random stable and unstable models, with covariances that are positive definite by making. */
function randomModel(order: number, outputCount: number, seed: number) {
  const random = noise(200, seed);
  const matrix = (height: number, width: number) =>
    Array.from({ length: height }, () => random.splice(0, width));
  const covariance = (size: number) => {
    const root = matrix(size, size);
    return root.map((one, i) =>
      root.map((other, j) => one.reduce((sum, value, k) => sum + value * other[k], 0) + (i === j ? 0.1 : 0)),
    );
  };
  return {
    state: matrix(order, order).map((row) => row.map((entry) => 1.2 * entry)),
    input: matrix(order, 1),
    output: matrix(outputCount, order),
    gain: matrix(order, 1).map(([entry]) => [0.4 * entry]),
    feedback: matrix(1, order)[0],
    disturbed: covariance(order),
    noise: covariance(outputCount),
  };
}

describe.skipIf(!scipyAvailable)('an observer against scipy', () => {
  for (const use of uses) {
    it(`gives the output of the same state equations, with ${use}`, async () => {
      for (const [order, seed] of [
        [1, 5],
        [2, 17],
        [3, 99],
      ]) {
        const { state, input, output, gain, feedback } = randomModel(order, 1, seed);
        const stimulus = noise(60, seed + 1);
        const [expected] = await answersOf([
          { ask: 'observed', state, input, output, gain, feedback, uses: use, input_signal: stimulus },
        ]);
        const law = observed(
          `state_matrix: ${rows(state)}, input_matrix: ${rows(input)}, output_matrix: ${rows(output)}, gain: ${rows(gain)}, uses: ${use}`,
          feedback,
        );
        const size = Math.max(...expected.map(Math.abs));
        outputs(law, stimulus).forEach((value, k) => {
          expect(Math.abs(value - expected[k]) / size).toBeLessThan(1e-12);
        });
      }
    });

    it(`works out the steady gain of random models, stable and not, with ${use}`, async () => {
      const models = [1, 2, 3, 4, 5, 6, 7, 8].map((seed) =>
        randomModel(1 + (seed % 4), 1 + (seed % 2), 1000 * seed + 11),
      );
      const answers = await answersOf<number[][]>(
        models.map((model) => ({ ask: 'steady_gain', ...model, uses: use })),
      );
      models.forEach(({ state, output, disturbed, noise: measurement }, at) => {
        const covariances = `process_covariance: ${rows(disturbed)}, measurement_covariance: ${rows(measurement)}`;
        const settings = `state_matrix: ${rows(state)}, output_matrix: ${rows(output)}, ${covariances}, uses: ${use}`;
        const measured = output.map((_, row) => (row === 0 ? 'x' : `y${row}`));
        // What the first measurement adds to an empty memory is a column of the gain.
        const law = observed(
          settings,
          state.map(() => 1),
          { measured, driven: false },
        );
        output.forEach((_, column) => {
          const states = state.map((__, row) => `s${row + 1}`);
          const step = stepper(law, states);
          const unit = output.map((__, other) => (other === column ? 1 : 0));
          const first = step(unit);
          const found = use === 'this_sample' ? first : step(output.map(() => 0));
          found.forEach((entry, row) => {
            expect(Math.abs(entry - answers[at][row][column])).toBeLessThan(1e-9);
          });
        });
      });
    });
  }
});

describe('an observer with state feedback', () => {
  const [half, whole] = [period * period * 0.5, period];
  const model = `state_matrix: [[1, ${period} s], [0, 1]], input_matrix: [${half} s^2, ${whole} s], output_matrix: [1, 0]`;
  const unit = { x: 'rad', v: 'rad/s', u: 'rad/s^2' };

  function closedLoop(gain: string, use: string): (position: number, speed: number) => number[] {
    const law: Law = {
      unit: unit.x,
      outUnit: unit.u,
      signals: [
        `position: { estimate: model, unit: ${unit.x} }`,
        `speed: { estimate: model, unit: ${unit.v} }`,
        `model: { observer: { states: [position, speed], measured: x, driven_by: out, ${model}, gain: ${gain}, uses: ${use} }, unit: ${unit.x} }`,
        // The gains that bring a double integrator to rest in two instants: 1/T² and 3/(2T) (Åström and Wittenmark 1997).
        `out: { state_feedback: { states: [position, speed], gains: [${1 / period ** 2} 1/s^2, ${1.5 / period} 1/s] }, unit: ${unit.u} }`,
      ],
    };
    const step = stepper(law);
    return (startPosition, startSpeed) => {
      let [position, speed] = [startPosition, startSpeed];
      return Array.from({ length: 8 }, () => {
        const [push] = step(position);
        const before = position;
        position += whole * speed + half * push;
        speed += whole * push;
        return before;
      });
    };
  }

  it('brings a double integrator to rest in as few instants as can be, in closed form', () => {
    // Estimates that use this sample are exact after two, those of the last sample after three.
    const withThis = closedLoop(`[1, ${1 / period} 1/s]`, 'this_sample')(0.7, -0.4);
    for (const position of withThis.slice(4)) expect(Math.abs(position)).toBeLessThan(1e-12);
    const withLast = closedLoop(`[2, ${1 / period} 1/s]`, 'last_sample')(0.7, -0.4);
    for (const position of withLast.slice(5)) expect(Math.abs(position)).toBeLessThan(1e-12);
    expect(Math.abs(withLast[3])).toBeGreaterThan(0.01);
  });

  it('has no surprise while the model is right', () => {
    const law: Law = {
      signals: [
        'out: { observer: { states: [level], measured: x, state_matrix: 0.5, output_matrix: 1, gain: 1, uses: this_sample } }',
        'level: { estimate: out }',
      ],
    };
    expect(outputs(law, [1, 0.5, 0.25, 0.5])).toEqual([1, 0, 0, 0.375]);
  });

  it('has none of a plant whose drive reaches the sensor at once, sampled before the drive changes', () => {
    // x' = −x + u, y = x + u/2, exactly discretised; the sample is taken while the last u still acts.
    const fall = Math.exp(-period);
    const model = `state_matrix: ${fall}, input_matrix: ${1 - fall}, output_matrix: 1, feedthrough: 0.5`;
    for (const [use, gain, after] of [
      ['this_sample', '1', 1],
      ['last_sample', `${fall}`, 1],
    ] as const) {
      const law: Law = {
        signals: [
          'level: { estimate: surprise }',
          `surprise: { observer: { states: [level], measured: x, driven_by: out, ${model}, gain: ${gain}, uses: ${use} } }`,
          'out: { value: wanted - 2*level }',
        ],
        inputs: { wanted: '1' },
      };
      const step = stepper(law, ['out', 'surprise', 'level']);
      let [x, u] = [0.8, 0];
      noise(12).forEach((wanted, k) => {
        const [drive, surprise, level] = step([x + 0.5 * u, wanted]);
        if (k >= after) {
          expect(Math.abs(surprise)).toBeLessThan(1e-14);
          expect(level).toBeCloseTo(x, 13);
        }
        x = fall * x + (1 - fall) * drive;
        u = drive;
      });
    }
  });

  it('has the steady gain of its covariances with a feedthrough or without', () => {
    const steady = (more: string): number[] =>
      outputs(
        {
          signals: [
            'out: { estimate: model }',
            `model: { observer: { states: [out], measured: x, driven_by: wanted, state_matrix: 0.9, input_matrix: 1, output_matrix: 2, process_covariance: 0.3, measurement_covariance: 0.2, uses: this_sample${more} } }`,
          ],
          inputs: { wanted: '1' },
        },
        noise(10).map((x) => [x, 0]),
      );
    expect(steady(', feedthrough: 0.7')).toEqual(steady(''));
  });

  it('takes targets for its states', () => {
    const law: Law = {
      signals: ['out: { state_feedback: { states: [x, 2*x], gains: [3, 4], targets: [wanted, 1] } }'],
      inputs: { wanted: '1' },
    };
    expect(outputs(law, [[0.5, 2]])).toEqual([3 * 1.5 + 4 * 0]);
  });
});
