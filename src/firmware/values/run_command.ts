import { FirmwareError, quoted } from '../failure.js';
import type { ProgramLimits } from '../process_group.js';
import { outputOf } from '../run_program.js';
import type { NamedValue, ValueNode } from './value_tree.js';
import type { ValuesImage } from './values_image.js';

/** A program which prints coefficients. */
export interface CommandRequest extends Partial<ProgramLimits> {
  /** Program and arguments; no shell is involved. */
  command: readonly string[];
  cwd: string;
}

const defaultSeconds = 60;
const deepest = 64;

/**
 * Runs a program that prints one JSON object: numbers, tables of numbers, and objects of those. A number without a format is a
 * float64.
 * @throws FirmwareError `build_failed` when it fails, `malformed_image` when its output is no such object
 */
export async function openCommand(request: CommandRequest): Promise<ValuesImage> {
  const name = request.command.join(' ');
  const text = await outputOf({ ...request, timeLimitSeconds: request.timeLimitSeconds ?? defaultSeconds });
  return { kind: 'command', name, bytes: Buffer.from(text), values: valuesOfJson(text, name) };
}

/** The values in a JSON text. @throws FirmwareError `malformed_image` when it is no object */
export function valuesOfJson(text: string, name: string): Map<string, NamedValue> {
  let parsed: unknown;
  try {
    parsed = JSON.parse(text);
  } catch (cause) {
    throw new FirmwareError(
      'malformed_image',
      `the output of ${quoted(name)} is not JSON: ${(cause as Error).message}`,
    );
  }
  const node = nodeOf(parsed, 0);
  if (node.kind !== 'record') {
    throw new FirmwareError(
      'malformed_image',
      `the output of ${quoted(name)} is no JSON object; expected { "kp": 1.25, … }`,
    );
  }
  return new Map([...node.members].map(([key, member]) => [key, { node: member, declaredAt: undefined }]));
}

function nodeOf(value: unknown, depth: number): ValueNode {
  if (depth > deepest) return { kind: 'none', why: `it is nested deeper than ${deepest}` };
  if (typeof value === 'number')
    return { kind: 'number', value, format: { kind: 'float', bits: 64 }, type: 'number' };
  if (Array.isArray(value))
    return { kind: 'array', elements: value.map((element) => nodeOf(element, depth + 1)) };
  if (typeof value === 'object' && value !== null) {
    return {
      kind: 'record',
      members: new Map(Object.entries(value).map(([key, member]) => [key, nodeOf(member, depth + 1)])),
    };
  }
  return { kind: 'none', why: `the program printed ${JSON.stringify(value)}, expected a number` };
}
