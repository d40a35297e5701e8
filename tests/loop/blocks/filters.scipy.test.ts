import { describe, expect, it } from 'vitest';
import { scipyAvailable } from '../../scipy.js';
import { type Law, noise, outputs, type Pair, responses } from './law.js';
import { answersOf, type Question } from './scipy.js';

const structures = ['direct_1', 'direct_2', 'transposed_2'];

/** An impulse, a step and noise, one after another. */
const stimulus = [1, ...Array(60).fill(0), ...Array(60).fill(1), ...noise(200)];

function list(numbers: readonly number[]): string {
  return `[${numbers.map((number) => `"${number}"`).join(', ')}]`;
}

/** Compares laws with what scipy answers; each law has a question of its own. */
async function expectAnswers(cases: { law: Law; question: Question }[], tolerance = 1e-12): Promise<void> {
  const answers = await answersOf(cases.map(({ question }) => ({ ...question, input: stimulus })));
  cases.forEach(({ law, question }, at) => {
    const actual = outputs(law, stimulus);
    const size = Math.max(1, ...answers[at].map(Math.abs));
    const worst = Math.max(...actual.map((value, k) => Math.abs(value - answers[at][k])));
    expect(answers[at]).toHaveLength(stimulus.length);
    expect(worst / size, `${law.signals.join('; ')} against ${JSON.stringify(question)}`).toBeLessThan(
      tolerance,
    );
  });
}

/** A polynomial (descending powers, first coefficient `lead`) whose roots lie inside the unit circle. */
function stablePolynomial(degree: number, lead: number, random: number[]): number[] {
  let polynomial = [lead];
  const times = (factor: number[]): void => {
    const result: number[] = Array(polynomial.length + factor.length - 1).fill(0);
    polynomial.forEach((p, i) => {
      factor.forEach((f, j) => {
        result[i + j] += p * f;
      });
    });
    polynomial = result;
  };
  for (let left = degree; left > 0; left -= 2) {
    const [radius, angle] = [0.9 * Math.abs(random.pop()!), Math.PI * random.pop()!];
    times(left === 1 ? [1, radius * Math.sign(angle)] : [1, -2 * radius * Math.cos(angle), radius * radius]);
  }
  return polynomial;
}

const filters = [3, 40, 77, 101, 2025, 31337].map((seed, at) => {
  const random = noise(60, seed);
  const degree = at + 1;
  return {
    numerator: random.splice(0, Math.max(1, degree + 1 - (at % 3))),
    denominator: stablePolynomial(degree, [1, -2.5, 0.4][at % 3], random),
  };
});

describe.skipIf(!scipyAvailable)('filters against scipy', () => {
  it('transfer_function gives the output of a random stable filter of order 1 to 6, in every structure', async () => {
    const cases = filters.flatMap(({ numerator, denominator }) =>
      structures.map((structure) => ({
        law: {
          signals: [
            `out: { transfer_function: { numerator: ${list(numerator)}, denominator: ${list(denominator)}, structure: ${structure} }, of: x }`,
          ],
        },
        question: { ask: 'filtered', numerator, denominator },
      })),
    );
    expect(cases).toHaveLength(18);
    await expectAnswers(cases);
  });

  it('transfer_function, linearised in its loop, has the response of its ratio of polynomials', async () => {
    const angles = [0.01, 0.2, 1, 2, 3.1];
    const answers = await answersOf<Pair[]>(
      filters.map(({ numerator, denominator }) => ({ ask: 'response', numerator, denominator, angles })),
    );
    for (const structure of structures) {
      filters.forEach(({ numerator, denominator }, at) => {
        const polynomials = `numerator: ${list(numerator)}, denominator: ${list(denominator)}`;
        const signals = [`out: { transfer_function: { ${polynomials}, structure: ${structure} }, of: x }`];
        responses({ signals }, angles).forEach(([re, im], k) => {
          const [expectedRe, expectedIm] = answers[at][k];
          const size = Math.hypot(expectedRe, expectedIm);
          expect(Math.hypot(re - expectedRe, im - expectedIm) / size).toBeLessThan(1e-10);
        });
      });
    }
  });

  it('biquads give the output of two sections, from the build or inline, with both feedback signs', async () => {
    const sections = [
      [0.2, -0.31, 0.17, -1.5, 0.7],
      [1.1, 0.4, -0.2, 0.3, 0.5],
    ];
    const negated = sections.map(([b0, b1, b2, a1, a2]) => [b0, b1, b2, -a1, -a2]);
    const question = { ask: 'sections', sections };
    const cases = structures.flatMap((structure) => [
      {
        law: {
          signals: [`out: { biquads: { sections: taps, structure: ${structure} }, of: x }`],
          coefficients: { taps: sections.flat() },
        },
        question,
      },
      {
        law: {
          signals: [
            `out: { biquads: { sections: ${list(negated.flat())}, structure: ${structure}, feedback_sign: plus }, of: x }`,
          ],
        },
        question,
      },
    ]);
    await expectAnswers(cases);
  });

  const rules = { backward: 'backward_diff', forward: 'euler', trapezoid: 'bilinear', exact: 'zoh' };
  for (const [rule, name] of Object.entries(rules)) {
    it(`low_pass and lead_lag are sampled by the ${rule} rule`, async () => {
      const of = (numerator: number[], denominator: number[]) => ({
        ask: 'discretised',
        rule: name,
        period: 0.1,
        numerator,
        denominator,
      });
      await expectAnswers([
        {
          law: { signals: [`out: { low_pass: { time_constant: 0.35 s, sum_by: ${rule} }, of: x }`] },
          question: of([1], [0.35, 1]),
        },
        {
          law: { signals: [`out: { low_pass: { time_constant: 0.5 Hz, sum_by: ${rule} }, of: x }`] },
          question: of([1], [1 / Math.PI, 1]),
        },
        {
          law: {
            signals: [`out: { lead_lag: { lead: 0.9 s, lag: 0.2 s, sum_by: ${rule} }, of: x, gain: 1.7 }`],
          },
          question: of([1.7 * 0.9, 1.7], [0.2, 1]),
        },
      ]);
    });
  }

  it('moving_average and a low_pass by weight are what their difference equations say', async () => {
    await expectAnswers([
      {
        law: { signals: ['out: { moving_average: 7, of: x }'] },
        question: { ask: 'filtered', numerator: Array(7).fill(1 / 7), denominator: [1, 0, 0, 0, 0, 0, 0] },
      },
      {
        law: { signals: ['out: { moving_average: 1, of: x }'] },
        question: { ask: 'filtered', numerator: [1], denominator: [1] },
      },
      {
        law: { signals: ['out: { low_pass: { weight: 0.3 }, of: x }'] },
        question: { ask: 'filtered', numerator: [0.3, 0], denominator: [1, -0.7] },
      },
    ]);
  });

  it('a notch of depth zero is the one that scipy designs', async () => {
    const cases = structures.map((structure) => ({
      law: {
        signals: [`out: { notch: { frequency: 1.3 Hz, width: 0.4 Hz, structure: ${structure} }, of: x }`],
      },
      question: { ask: 'notch', frequency: 1.3, width: 0.4, rate: 10 },
    }));
    await expectAnswers(cases);
  });
});

describe.skipIf(!scipyAvailable)('tables against scipy', () => {
  const points = [-0.8, -0.3, -0.1, 0.4, 0.45, 0.9];
  const values = [2, 2, 1.2, 3, 3.6, -1];
  const secondPoints = [-1, -0.2, 0.5, 1];
  const rows = points.map((point) =>
    secondPoints.map((second) => Math.sin(3 * point) + point * second * second),
  );

  for (const between of ['linear', 'cubic']) {
    it(`follow a ${between} curve and are held at its ends`, async () => {
      await expectAnswers([
        {
          law: {
            signals: [
              `out: { table: { points: ${list(points)}, values: ${list(values)}, between: ${between} }, of: x }`,
            ],
          },
          question: { ask: 'table', points, values, between },
        },
        {
          law: {
            signals: [`out: { table: { points: at, values: of, between: ${between} }, of: x }`],
            coefficients: { at: [0, 0.5], of: [3, -1] },
          },
          question: { ask: 'table', points: [0, 0.5], values: [3, -1], between },
        },
      ]);
    });

    it(`follow a ${between} surface over two signals`, async () => {
      const signals = [
        `out: { table: { points: ${list(points)}, values: [${rows.map(list).join(', ')}], between: ${between}, second: "x*x - 0.3", second_points: ${list(secondPoints)} }, of: x }`,
      ];
      const inside = noise(100).map((x) => (between === 'cubic' ? Math.max(-0.8, 0.9 * x) : x));
      const question = { ask: 'surface', points, values: rows, between, second_points: secondPoints };
      const second = inside.map((x) => x * x - 0.3);
      const [answer] = await answersOf([{ ...question, input: inside, second }]);
      outputs({ signals }, inside).forEach((value, k) => {
        expect(Math.abs(value - answer[k])).toBeLessThan(1e-12);
      });
    });
  }
});
