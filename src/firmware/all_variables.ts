import { attribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { type DataType, typeOf } from './dwarf/data_type.js';
import { declaredAt, isLasting, pathWithFile } from './dwarf/find_variable.js';
import { placeOf } from './dwarf/location.js';
import { entryWith, everyVariable, isDefinition, qualifiedName, type Variable } from './dwarf/variables.js';
import { allSymbols } from './elf/symbols.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import { removedByLinker } from './symbol_check.js';

/** A variable which the image holds. */
export interface ListedVariable {
  /** How a spec names it, with the file where the name alone is not enough. */
  path: string;
  type: DataType;
  declaredAt: { file: string; line: number } | undefined;
}

/**
 * All variables and constants which the image holds, in the order of its debug information, each once.
 * @throws FirmwareError `no_debug_information` where there is none
 */
export function allVariables(image: ElfImage): ListedVariable[] {
  if (!image.debug.present) {
    throw new FirmwareError(
      'no_debug_information',
      `${quoted(image.name)} has no debug information, so that its variables cannot be listed: build with -g and do not strip`,
    );
  }
  // With all symbols at hand each variable's own is found at once.
  allSymbols(image.symbolTable);
  const byPlace = new Map<string, Variable>();
  const origins = new Set<string>();
  for (const variable of everyVariable(image.debug)) {
    if (!isDefinition(variable) || !isLasting(variable)) continue;
    for (const origin of variable.chain.slice(1)) origins.add(keyOf(origin));
    const key = placeKey(image, variable);
    if (key !== undefined && !byPlace.has(key)) byPlace.set(key, variable);
  }
  const held = [...byPlace.values()].filter((variable) => !origins.has(keyOf(variable.entry)));
  return listed(held);
}

function listed(variables: Variable[]): ListedVariable[] {
  const counts = new Map<string, number>();
  for (const variable of variables)
    counts.set(qualifiedName(variable), (counts.get(qualifiedName(variable)) ?? 0) + 1);
  return variables.flatMap((variable) => {
    const typed = entryWith(variable, at.type);
    if (!typed) return [];
    const name = qualifiedName(variable);
    const path = (counts.get(name) ?? 0) > 1 ? pathWithFile(variable) : name;
    return [{ path, type: typeOf(typed), declaredAt: declaredAt(variable) }];
  });
}

/** Tells variables apart: by address, a constant without one by where it is declared; undefined for what is not there. */
function placeKey(image: ElfImage, variable: Variable): string | undefined {
  const place = placeOf(variable.entry, entryWith(variable, at.constValue));
  if (place.kind === 'none') return undefined;
  if (place.kind === 'memory')
    return isThere(image, variable, place.address) ? `at ${place.address}` : undefined;
  const declared = declaredAt(variable);
  return attribute(variable.entry, at.name) && declared
    ? `${declared.file}:${declared.line}:${qualifiedName(variable)}`
    : keyOf(variable.entry);
}

function isThere(image: ElfImage, variable: Variable, address: number): boolean {
  return removedByLinker(image, qualifiedName(variable), variable, address) === undefined;
}

function keyOf(entry: { unit: { section: string }; offset: number }): string {
  return `${entry.unit.section}/${entry.offset}`;
}
