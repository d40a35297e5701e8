import { readFile } from 'node:fs/promises';
import { isAbsolute, relative, resolve } from 'node:path';
import { FirmwareError } from '../failure.js';
import type { ProgramLimits } from '../process_group.js';
import { outputOf } from '../run_program.js';
import type { NamedValue, ValueNode } from '../values/value_tree.js';
import type { ValuesImage } from '../values/values_image.js';
import { Declarations } from './c_declarations.js';
import { constantExpression } from './c_expression.js';
import { markerOf, type Token, tokensOf } from './c_token.js';
import { type DataModel, formatOf, usualModel } from './c_type.js';
import { TokenReader } from './token_reader.js';

/** A C or C++ source or header, and how to preprocess it. */
export interface SourceRequest extends Partial<ProgramLimits> {
  /** Path of the file, in `cwd`. */
  path: string;
  cwd: string;
  includePaths?: readonly string[];
  /** As after `-D`: `NAME` or `NAME=value`. */
  defines?: readonly string[];
  /** The preprocessor and its own arguments; `cc` by default. Its target decides what the headers say. */
  compiler?: readonly string[];
  /** Widths of types on the target; those of a 32-bit target by default. */
  dataModel?: Partial<DataModel>;
}

const defaultSeconds = 30;
const mark = 'pawl_macro_';

/**
 * Reads the constants of a source file: object-like macros, enumerators and initialised data, all through the real
 * preprocessor. What cannot be reckoned is an error only for whoever asks for it.
 * @throws FirmwareError `build_failed` when the preprocessor fails
 */
export async function openSource(request: SourceRequest): Promise<ValuesImage> {
  const model = { ...usualModel, ...request.dataModel };
  const text = await preprocess(request, `#include "${resolve(request.cwd, request.path)}"\n`, ['-dD']);
  const declarations = new Declarations(tokensOf(text, request.path), model);
  const values = new Map<string, NamedValue>();
  for (const [name, value] of declarations.values) values.set(name, withPlace(value, request.cwd));
  const macros = macrosOf(text);
  const expanded = await expandedMacros(request, [...macros.keys()]);
  for (const [name, place] of macros) {
    const tokens = expanded.get(name) ?? [];
    if (tokens.length > 0)
      values.set(name, withPlace({ node: macroValue(tokens, declarations), declaredAt: place }, request.cwd));
  }
  return {
    kind: 'source',
    name: request.path,
    bytes: await readFile(resolve(request.cwd, request.path)),
    values,
  };
}

async function preprocess(request: SourceRequest, input: string, flags: string[]): Promise<string> {
  const language = /\.(cc|cpp|cxx|hpp|hh|hxx|C|H)$/.test(request.path) ? 'c++' : 'c';
  const command = [
    ...(request.compiler ?? ['cc']),
    '-E',
    ...flags,
    '-x',
    language,
    ...(request.includePaths ?? []).map((path) => `-I${path}`),
    ...(request.defines ?? []).map((define) => `-D${define}`),
    '-',
  ];
  const timeLimitSeconds = request.timeLimitSeconds ?? defaultSeconds;
  const text = await outputOf({
    command,
    cwd: request.cwd,
    input,
    timeLimitSeconds,
    interrupted: request.interrupted,
  });
  // Messages and reports name no folder of one machine.
  return text.replaceAll(`"${resolve(request.cwd)}/`, '"');
}

/** Object-like macros that the source and its own headers define, in order; the system's and the compiler's are left out. */
function macrosOf(text: string): Map<string, { file: string; line: number }> {
  const macros = new Map<string, { file: string; line: number }>();
  let place = { file: '<built-in>', line: 0, isSystem: true };
  for (const line of text.split('\n')) {
    const marker = markerOf(line);
    if (marker) {
      place = { ...marker, line: marker.line - 1, isSystem: marker.isSystem || marker.file.startsWith('<') };
      continue;
    }
    place = { ...place, line: place.line + 1 };
    const defined = /^#\s*(define|undef)\s+([A-Za-z_]\w*)(?=\s|$)/.exec(line);
    if (defined?.[1] === 'undef') macros.delete(defined[2]);
    else if (defined && !place.isSystem) macros.set(defined[2], { file: place.file, line: place.line });
  }
  return macros;
}

/** What the preprocessor makes of each macro, in one more run. */
async function expandedMacros(request: SourceRequest, names: string[]): Promise<Map<string, Token[]>> {
  if (names.length === 0) return new Map();
  const uses = names.map((name, i) => `${mark}${i} ${name}`).join('\n');
  const text = await preprocess(request, `#include "${resolve(request.cwd, request.path)}"\n${uses}\n`, [
    '-P',
  ]);
  const expanded = new Map<string, Token[]>();
  for (const line of text.split('\n')) {
    const found = new RegExp(`^${mark}(\\d+) ?(.*)$`).exec(line);
    const name = found && names[Number(found[1])];
    if (found && name) expanded.set(name, tokensOf(found[2], name));
  }
  return expanded;
}

function macroValue(tokens: Token[], declarations: Declarations): ValueNode {
  const reader = new TokenReader(tokens);
  try {
    const { type, value } = constantExpression(reader, declarations);
    if (!reader.atEnd) throw reader.failure('more than one expression');
    return { kind: 'number', value, format: formatOf(type), type: type.name };
  } catch (error) {
    if (!(error instanceof FirmwareError)) throw error;
    return { kind: 'none', why: error.message };
  }
}

/** Places below the folder are written from there, so that reports name no folder of one machine. */
function withPlace(value: NamedValue, cwd: string): NamedValue {
  const { declaredAt } = value;
  if (!declaredAt) return value;
  const file = relative(cwd, resolve(cwd, declaredAt.file));
  return {
    ...value,
    declaredAt: { ...declaredAt, file: file.startsWith('..') || isAbsolute(file) ? declaredAt.file : file },
  };
}
