import { plainNumber } from './dimension.js';
import { evaluateExpression } from './evaluate_expression.js';
import { aKind, derivedRoom } from './names.js';
import { suggestion } from './nearest.js';
import { readExpression } from './read_expression.js';
import { readShare } from './read_quantity.js';
import { isWhole, type Reading } from './reading.js';
import type { Correlation, Expression, ParameterDefinition } from './spec.js';
import { childOf, itemsOf, type TextTree, type Tree, textOf } from './tree.js';

/** `only_where:` conditions on the parameters, one or a list; the nominal plant must fulfil each. */
export function readConditions(
  tree: Tree | undefined,
  parameters: readonly ParameterDefinition[],
  reading: Reading,
): Expression[] | undefined {
  if (tree === undefined) return undefined;
  const parts = tree.kind === 'list' ? itemsOf(tree) : [tree];
  const slot = { dimension: plainNumber, scale: 1, what: '`only_where`' };
  const conditions = parts.flatMap(
    (part) => readExpression(part, slot, { room: derivedRoom, convertsFreely: true }, reading) ?? [],
  );
  const nominal = new Map(parameters.map((parameter) => [parameter.name, parameter.nominal]));
  for (const condition of conditions.filter(isWhole)) {
    const value = evaluateExpression(condition, (name) => nominal.get(name) ?? Number.NaN);
    if (value !== 0) continue;
    reading.problems.add(
      condition.place,
      'the nominal plant does not fulfil this condition; expected one that holds with every parameter at its nominal value',
    );
  }
  return conditions;
}

/** `correlations:` rank correlations of pairs of parameters. */
export function readCorrelations(
  tree: Tree | undefined,
  parameters: readonly ParameterDefinition[],
  reading: Reading,
): Correlation[] | undefined {
  if (tree === undefined) return undefined;
  const correlations = itemsOf(tree).flatMap((item) => readCorrelation(item, parameters, reading) ?? []);
  const pairs = new Set<string>();
  for (const { of, with: other, place } of correlations) {
    const pair = [of, other].sort().join(' and ');
    if (pairs.has(pair)) reading.problems.add(place, `the correlation of ${pair} is given twice`);
    pairs.add(pair);
  }
  return correlations;
}

function readCorrelation(
  item: Tree,
  parameters: readonly ParameterDefinition[],
  reading: Reading,
): Correlation | undefined {
  const [of, other] = ['of', 'with'].map((key) => textOf(childOf(item, key)));
  const coefficientTree = childOf(item, 'coefficient');
  const coefficient = readShare(coefficientTree, '`coefficient`', reading);
  if (of === undefined || other === undefined || coefficient === undefined) return undefined;
  if (!(Math.abs(coefficient) < 1)) {
    reading.problems.add(
      coefficientTree!.place,
      `a correlation lies between -1 and 1, ends excluded, but is ${coefficient}`,
    );
    return undefined;
  }
  if (of.text === other.text) {
    reading.problems.add(other.place, `\`${of.text}\` cannot be correlated with itself`);
    return undefined;
  }
  const known = [of, other].map((name) => isFree(name, parameters, reading));
  return known.every(Boolean) ? { of: of.text, with: other.text, coefficient, place: item.place } : undefined;
}

function isFree(name: TextTree, parameters: readonly ParameterDefinition[], reading: Reading): boolean {
  const parameter = parameters.find((one) => one.name === name.text);
  if (parameter !== undefined && parameter.derived === undefined) return true;
  const entry = reading.names.entries.get(name.text);
  const found = parameter
    ? 'follows from others'
    : entry === undefined
      ? 'is not defined'
      : `is ${aKind(entry.kind)}`;
  const free = parameters.filter(({ derived }) => derived === undefined).map((one) => one.name);
  reading.problems.add(
    name.place,
    `a correlation is between free parameters, but \`${name.text}\` ${found}${suggestion(name.text, free)}`,
  );
  return false;
}
