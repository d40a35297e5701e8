import { describe, expect, it } from 'vitest';
import { evaluateExpression } from '../../src/spec/evaluate_expression.js';
import { errorsOf, specOf } from '../spec/loading.js';
import { smallSpec } from '../spec/small_spec.js';
import { name, number, operation, place } from './parameters.js';

const plant = 'out: { lag: 10 ms, of: drive + offset*gear*share, unit: V }';
const offset = 'offset: { nominal: 2 V, from: 1 V, to: 5 V';
const gear = 'gear: { nominal: 3, spread: 1 }';
const share = 'share: { nominal: 0.5, spread: 10 % }';

function parametersOf(first: string, rest = '') {
  return specOf(smallSpec({ plant, parameters: [first, gear, share].join('\n'), rest })).parameters;
}

function errors(first: string, rest = ''): string[] {
  return errorsOf(smallSpec({ plant, parameters: [first, gear, share].join('\n'), rest }));
}

describe('how parameters are spread', () => {
  it.each([
    ['}', undefined],
    [', distribution: uniform }', { kind: 'uniform' }],
    [', distribution: triangular }', { kind: 'triangular' }],
    [', distribution: log_uniform }', { kind: 'log_uniform' }],
    [', distribution: normal, deviation: 0.5 V }', { kind: 'normal', deviation: 0.5 }],
    [', distribution: normal, deviation: 10 % }', { kind: 'normal', deviation: 0.2 }],
  ])('%s', (words, distribution) => {
    expect(parametersOf(`${offset}${words}`)[0]).toMatchObject({ low: 1, high: 5 });
    expect(parametersOf(`${offset}${words}`)[0].distribution).toEqual(distribution);
  });

  it('values: in ascending order, the bounds at their ends', () => {
    expect(parametersOf('offset: { nominal: 2 V, values: [5 V, 1 V, 2 V] }')[0]).toMatchObject({
      low: 1,
      high: 5,
      distribution: { kind: 'values', values: [1, 2, 5] },
    });
  });

  it.each([
    [`${offset}, distribution: gaussian }`, 'unknown distribution `gaussian`'],
    [`${offset}, distribution: norml, deviation: 1 V }`, 'did you mean `normal`?'],
    [`${offset}, distribution: normal }`, 'a normal distribution needs `deviation:`'],
    [`${offset}, deviation: 1 V }`, '`deviation` belongs to `distribution: normal` alone'],
    [`${offset}, distribution: normal, deviation: 0 V }`, 'a standard deviation must be above 0'],
    [`${offset}, distribution: normal, deviation: 1 s }`, '`deviation` must be in V, but this is s'],
    ['offset: { nominal: 2 V, from: 0 V, to: 5 V, distribution: log_uniform }', 'needs bounds above 0'],
    [
      'offset: { nominal: 2 V, values: [1 V, 3 V] }',
      'the nominal value of `offset` is not one of its values',
    ],
    ['offset: { nominal: 2 V, values: [2 V, 2 V] }', 'hold one of them twice'],
    ['offset: { nominal: 2 V, values: [2 V, 3 V], distribution: normal }', 'cannot have `distribution`'],
    ['offset: { spread: 2 V }', 'parameter `offset` has no nominal value'],
  ])('is refused: %s', (words, message) => {
    expect(errors(words).join('\n')).toContain(message);
  });
});

describe('derived parameters', () => {
  it('follow from others by an expression in SI', () => {
    const [derived] = parametersOf('offset: { value: gear*(0.5 V), unit: V }');
    expect(derived).toMatchObject({ name: 'offset', nominal: 1.5, low: 1.5, high: 1.5 });
    expect(evaluateExpression(derived.derived!, () => 4)).toBe(2);
  });

  it.each([
    ['offset: { value: gear*(0.5 s), unit: V }', '`value`'],
    ['offset: { value: gear*(0.5 V), unit: V, spread: 3 V }', 'expected value and unit alone'],
    ['offset: { value: drive, unit: V }', 'drive'],
    ['offset: { value: offset*2, unit: V }', 'offset'],
  ])('are refused: %s', (words, message) => {
    const found = errors(words);
    expect(found).not.toEqual([]);
    expect(found.join('\n')).toContain(message);
  });
});

describe('what holds between parameters', () => {
  const given = `${offset} }`;
  const perturbation = (words: string): string => `perturbation: { ${words} }`;

  it('conditions, one or several, and the budget of the search', () => {
    const { perturbation: found } = specOf(
      smallSpec({
        plant,
        parameters: [given, gear, share].join('\n'),
        rest: perturbation('search: 70, only_where: ["offset < gear*(1 V)", "share < 0.9"]'),
      }),
    );
    expect(found.search).toBe(70);
    expect(found.onlyWhere).toHaveLength(2);
    expect(evaluateExpression(found.onlyWhere![1], () => 0.95)).toBe(0);
  });

  it('correlations', () => {
    const { perturbation: found } = specOf(
      smallSpec({
        plant,
        parameters: [given, gear, share].join('\n'),
        rest: perturbation('correlations: [{ of: offset, with: gear, coefficient: -0.4 }]'),
      }),
    );
    expect(found.correlations).toMatchObject([{ of: 'offset', with: 'gear', coefficient: -0.4 }]);
  });

  it.each([
    ['only_where: "offset > gear*(1 V)"', 'the nominal plant does not fulfil this condition'],
    ['only_where: "offset > gear"', 'cannot'],
    ['correlations: [{ of: offset, with: ger, coefficient: 0.4 }]', 'did you mean `gear`?'],
    ['correlations: [{ of: offset, with: offset, coefficient: 0.4 }]', 'cannot be correlated with itself'],
    ['correlations: [{ of: offset, with: gear, coefficient: 1 }]', 'lies between -1 and 1'],
    [
      'correlations: [{ of: offset, with: gear, coefficient: 0.1 }, { of: gear, with: offset, coefficient: 0.2 }]',
      'is given twice',
    ],
    ['search: many', '`search` must be a whole number'],
  ])('is refused: %s', (words, message) => {
    expect(errors(given, perturbation(words)).join('\n')).toContain(message);
  });
});

describe('the value of an expression', () => {
  it('has every operator', () => {
    const of = (operator: Parameters<typeof operation>[1]): number =>
      evaluateExpression(operation(name('x'), operator, number(3)), () => 2);
    expect(['+', '-', '*', '/', '^'].map((one) => of(one as '+'))).toEqual([5, -1, 6, 2 / 3, 8]);
    expect(['<', '<=', '>', '>=', '==', '!='].map((one) => of(one as '<'))).toEqual([1, 1, 0, 0, 0, 1]);
  });

  it('has calls, negation and choice, and rounds halves away from zero', () => {
    const call = (of: string, ...values: number[]): number =>
      evaluateExpression({ kind: 'call', name: of, arguments: values.map(number), place }, () => 0);
    expect(call('round', -2.5)).toBe(-3);
    expect(call('round', 2.5)).toBe(3);
    expect(call('hypot', 3, 4)).toBe(5);
    expect(call('if', 0, 1, 2)).toBe(2);
    expect(evaluateExpression({ kind: 'negate', of: number(2), place }, () => 0)).toBe(-2);
  });
});
