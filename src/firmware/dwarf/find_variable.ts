import { FirmwareError, quoted } from '../failure.js';
import type { CoefficientPath } from '../path.js';
import { attribute, numberAttribute, referredEntry, textAttribute } from './attributes.js';
import { at, operation, tag } from './codes.js';
import type { DebugInformation } from './debug_information.js';
import { type Entry, rootOf } from './entry.js';
import { fileName } from './line_table.js';
import { entryWith, isDefinition, qualifiedName, type Variable, variablesNamed } from './variables.js';

/** The variables which a path can mean: definitions, and mere declarations apart. */
export interface Matches {
  definitions: Variable[];
  declarations: Variable[];
}

/** Finds what a path's variable can mean, by name, scopes and file. */
export function findVariable(debug: DebugInformation, path: CoefficientPath): Matches {
  const fitting = variablesNamed(debug, path.name).filter(
    (variable) =>
      fitsScopes(variable, path.scopes) && (path.file === undefined || isFrom(variable, path.file)),
  );
  const definitions = withoutOrigins(fitting.filter(isDefinition));
  // A constant of a function is meant only when nothing outside of functions has the name.
  const outside = definitions.filter((variable) => !variable.inFunction);
  const chosen = path.scopes.length === 0 && outside.length > 0 ? outside : definitions.filter(isLasting);
  return { definitions: chosen, declarations: fitting.filter((variable) => !isDefinition(variable)) };
}

/** The variables of this name which are declared within functions, whatever those are called. */
export function findInFunction(debug: DebugInformation, name: string): Variable[] {
  return variablesNamed(debug, name).filter((variable) => variable.inFunction && isDefinition(variable));
}

/** Where the variable is declared, from the definition if that says it. */
export function declaredAt(variable: Variable): { file: string; line: number } | undefined {
  const entry = entryWith(variable, at.declarationLine);
  const line = entry && numberAttribute(entry, at.declarationLine);
  const fileEntry = entryWith(variable, at.declarationFile);
  const index = fileEntry && numberAttribute(fileEntry, at.declarationFile);
  if (line === undefined || !fileEntry || index === undefined) return undefined;
  const file = fileName(fileEntry.unit, index);
  return file === undefined ? undefined : { file, line };
}

/** How a variable is told apart from its namesakes: `file.c:ns::name`. */
export function pathWithFile(variable: Variable): string {
  const file = sourceOf(variable);
  return `${file === undefined ? '' : `${file}:`}${qualifiedName(variable)}`;
}

/** The error for a name that several variables have. */
export function ambiguous(path: CoefficientPath, variables: Variable[]): FirmwareError {
  const places = variables.slice(0, 4).map((variable) => {
    const place = declaredAt(variable);
    return `${quoted(pathWithFile(variable))}${place ? ` (${place.file}:${place.line})` : ''}`;
  });
  const more = variables.length > 4 ? ` and ${variables.length - 4} more` : '';
  return new FirmwareError(
    'ambiguous_name',
    `${quoted(path.text)} can mean ${places.join(' or ')}${more}: write one of these`,
  );
}

function sourceOf(variable: Variable): string | undefined {
  const root = rootOf(variable.chain[variable.chain.length - 1].unit);
  const name = root && textAttribute(root, at.name);
  return name?.split(/[\\/]/).at(-1) ?? declaredAt(variable)?.file.split(/[\\/]/).at(-1);
}

function isFrom(variable: Variable, file: string): boolean {
  const root = rootOf(variable.chain[variable.chain.length - 1].unit);
  const sources = [root && textAttribute(root, at.name), declaredAt(variable)?.file];
  return sources.some((source) => source !== undefined && (source === file || source.endsWith(`/${file}`)));
}

/** The written scopes are the last ones of the variable; inline namespaces need not be written. */
function fitsScopes(variable: Variable, written: string[]): boolean {
  let next = written.length - 1;
  for (let i = variable.scopes.length - 1; i >= 0 && next >= 0; i--) {
    const scope = variable.scopes[i];
    if (sameName(scope.name, written[next])) next--;
    else if (!scope.optional) return false;
  }
  return next < 0;
}

function sameName(a: string, b: string): boolean {
  return a === b || a.replace(/\s+/g, '') === b.replace(/\s+/g, '');
}

/** Of a definition and the origin it refers to only the definition counts. */
function withoutOrigins(variables: Variable[]): Variable[] {
  const origins = new Set(variables.flatMap((variable) => variable.chain.slice(1).map(keyOf)));
  return variables.filter((variable) => !origins.has(keyOf(variable.entry)));
}

function keyOf(entry: { unit: { section: string }; offset: number }): string {
  return `${entry.unit.section}/${entry.offset}`;
}

/** A variable of a function counts when it is static; one on the stack or in a register comes and goes. */
export function isLasting(variable: Variable): boolean {
  if (!variable.inFunction) return true;
  const location = attribute(variable.entry, at.location)?.value;
  if (location instanceof Uint8Array) return addressOperations.includes(location[0]);
  const typed = entryWith(variable, at.type);
  return location === undefined && typed !== undefined && isConstant(typed);
}

const addressOperations: number[] = [operation.addr, operation.addrx, operation.gnuAddrIndex];

/** Whether the type is const-qualified, an array's elements included. */
function isConstant(typed: Entry): boolean {
  let entry: Entry | undefined = typed;
  for (let depth = 0; depth < 16; depth++) {
    entry = referredEntry(entry, at.type);
    if (!entry) return false;
    if (entry.tag === tag.constType) return true;
    if (entry.tag !== tag.typedef && entry.tag !== tag.volatileType && entry.tag !== tag.arrayType)
      return false;
  }
  return false;
}
