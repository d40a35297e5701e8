import type { Coefficient, DeclaredAt, NumberFormat, StoredElement } from '../coefficient.js';
import { FirmwareError, quoted } from '../failure.js';
import { nearestNames } from '../nearest.js';
import { formatText } from '../number_format.js';
import type { CoefficientPath } from '../path.js';
import { remarked } from '../remark.js';
import { encoded } from './encode_number.js';

/** Values by name, as a source file or a program's output gives them: nothing here has an address. */
export type ValueNode =
  | { kind: 'number'; value: number | bigint; format: NumberFormat; type: string }
  | { kind: 'array'; elements: ValueNode[] }
  | { kind: 'record'; members: Map<string, ValueNode> }
  /** Something that has no value, and why. */
  | { kind: 'none'; why: string };

/** A named value and where it is declared. */
export interface NamedValue {
  node: ValueNode;
  declaredAt: DeclaredAt | undefined;
}

/**
 * Reads what a path leads to.
 * @throws FirmwareError naming the nearest names where it leads nowhere
 */
export function readValue(
  values: ReadonlyMap<string, NamedValue>,
  path: CoefficientPath,
  asked: NumberFormat | undefined,
  source: string,
): Coefficient {
  const name = [...path.scopes, path.name].join('::');
  const found = values.get(name);
  if (!found) {
    const near = nearestNames(name, values.keys());
    throw new FirmwareError(
      'no_such_symbol',
      `${quoted(source)} has no ${quoted(name)}${near.length > 0 ? `; nearest: ${near.map(quoted).join(', ')}` : ''}`,
    );
  }
  let node = found.node;
  let text = path.root;
  for (const step of path.steps) {
    const written = step.kind === 'index' ? `${text}[${step.index}]` : `${text}.${step.name}`;
    node = step.kind === 'index' ? elementAt(node, step.index, text) : memberAt(node, step.name, text);
    text = written;
  }
  const { shape, numbers } = flattened(node, text);
  return coefficientOf(path, shape, numbers, asked, found.declaredAt);
}

type NumberNode = ValueNode & { kind: 'number' };

function coefficientOf(
  path: CoefficientPath,
  shape: number[],
  numbers: NumberNode[],
  asked: NumberFormat | undefined,
  declaredAt: DeclaredAt | undefined,
): Coefficient {
  const format = asked ?? numbers[0].format;
  const elements = numbers.map(
    (node): StoredElement => ({ ...encoded(node, format, path.text), address: undefined }),
  );
  const written = `${numbers[0].type}${shape.map((length) => `[${length}]`).join('')}`;
  return {
    path: path.text,
    elements: remarked(elements, format),
    shape,
    type: asked ? `${written} as ${formatText(asked)}` : written,
    format,
    declaredAt,
  };
}

function elementAt(node: ValueNode, index: number, text: string): ValueNode {
  if (node.kind !== 'array')
    throw new FirmwareError('index_out_of_range', `${quoted(text)} is no array: leave out [${index}]`);
  const element = node.elements[index];
  if (element) return element;
  throw new FirmwareError(
    'index_out_of_range',
    `${quoted(text)} has ${node.elements.length} elements: [${index}] must be at most [${node.elements.length - 1}]`,
  );
}

function memberAt(node: ValueNode, name: string, text: string): ValueNode {
  if (node.kind === 'record') {
    const member = node.members.get(name);
    if (member) return member;
    const names = [...node.members.keys()];
    const near = nearestNames(name, names);
    throw new FirmwareError(
      'no_such_member',
      `${quoted(text)} has no member ${quoted(name)}; ${near.length > 0 ? `nearest: ${near.join(', ')}` : `it has ${names.slice(0, 8).join(', ')}`}`,
    );
  }
  throw new FirmwareError('no_such_member', `${quoted(text)} has no members, so no ${quoted(name)}`);
}

/** The numbers of a node in order, last index fastest. @throws FirmwareError for records and ragged tables */
function flattened(node: ValueNode, text: string): { shape: number[]; numbers: NumberNode[] } {
  if (node.kind === 'number') return { shape: [], numbers: [node] };
  if (node.kind === 'none')
    throw new FirmwareError('no_fixed_place', `${quoted(text)} has no value: ${node.why}`);
  if (node.kind === 'record') {
    const [first = 'member'] = node.members.keys();
    throw new FirmwareError(
      'not_a_number',
      `${quoted(text)} is no number: name one of its members, as in ${text}.${first}`,
    );
  }
  const parts = node.elements.map((element, i) => flattened(element, `${text}[${i}]`));
  if (parts.length === 0) throw new FirmwareError('not_a_number', `${quoted(text)} is an empty table`);
  const inner = parts[0].shape;
  if (parts.some((part) => part.shape.join() !== inner.join())) {
    throw new FirmwareError('not_a_number', `${quoted(text)} is a table whose rows have different lengths`);
  }
  return { shape: [parts.length, ...inner], numbers: parts.flatMap((part) => part.numbers) };
}

/** The paths of all numbers and tables of numbers, for wildcards. */
export function* pathsIn(
  values: ReadonlyMap<string, NamedValue>,
): Generator<{ path: string; lengths: number[] }> {
  for (const [name, { node }] of values) yield* pathsBelow(node, name, 0);
}

const deepest = 64;

function* pathsBelow(
  node: ValueNode,
  path: string,
  depth: number,
): Generator<{ path: string; lengths: number[] }> {
  if (depth > deepest || node.kind === 'none') return;
  if (node.kind === 'record') {
    for (const [name, member] of node.members) yield* pathsBelow(member, `${path}.${name}`, depth + 1);
  } else if (node.kind === 'number' || isTable(node))
    yield { path, lengths: node.kind === 'number' ? [] : flattened(node, path).shape };
  else
    for (const [i, element] of node.elements.entries())
      yield* pathsBelow(element, `${path}[${i}]`, depth + 1);
}

function isTable(node: ValueNode): boolean {
  try {
    return flattened(node, '').shape.length > 0;
  } catch (error) {
    if (error instanceof FirmwareError) return false;
    throw error;
  }
}
