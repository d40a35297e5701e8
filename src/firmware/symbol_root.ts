import { hex } from './cursor.js';
import { textAttribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { declaredAt } from './dwarf/find_variable.js';
import { entryWith, type Variable } from './dwarf/variables.js';
import { demangledData } from './elf/demangle.js';
import {
  allSymbols,
  commonSection,
  type ElfSymbol,
  fileOfSymbol,
  hasSymbols,
  isData,
  symbolsNamed,
} from './elf/symbols.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import type { CoefficientPath } from './path.js';
import type { Root } from './root.js';
import { commonData } from './symbol_check.js';

/**
 * The symbol that a path without a definition in the debug information means.
 * @throws FirmwareError `ambiguous_name` when there are several
 */
export function symbolFor(
  image: ElfImage,
  path: CoefficientPath,
  declarations: Variable[],
): ElfSymbol | undefined {
  const linked = declarations
    .map((variable) => entryWith(variable, at.linkageName))
    .find((entry) => entry !== undefined);
  const linkedName = linked && textAttribute(linked, at.linkageName);
  const plainName = path.scopes.length === 0 ? path.name : undefined;
  for (const name of [linkedName, plainName, path.text]) {
    const symbol = name === undefined ? undefined : oneOf(image, path, symbolsNamed(image.symbolTable, name));
    if (symbol) return symbol;
  }
  return oneOf(image, path, mangledSymbols(image, path));
}

/** The one place which the symbols stand for, undefined when there are none. */
function oneOf(image: ElfImage, path: CoefficientPath, symbols: ElfSymbol[]): ElfSymbol | undefined {
  const named = symbols.filter(
    (symbol) =>
      isData(symbol) &&
      (path.file === undefined || fileOfSymbol(image.symbolTable, symbol)?.endsWith(path.file)),
  );
  const places = new Map(named.map((symbol) => [symbol.address, symbol]));
  if (places.size > 1) throw ambiguousSymbols(image, path, [...places.values()]);
  return named.find((symbol) => symbol.size > 0) ?? named[0];
}

/** The symbols whose demangled C++ name ends as the path is written. */
function mangledSymbols(image: ElfImage, path: CoefficientPath): ElfSymbol[] {
  const written = [...path.scopes, path.name].map(compact);
  return allSymbols(image.symbolTable).filter((symbol) => {
    if (!symbol.name.startsWith('_Z') || !symbol.name.includes(path.name)) return false;
    const parts = demangledData(symbol.name)?.map(compact);
    return parts !== undefined && parts.slice(-written.length).join('::') === written.join('::');
  });
}

function compact(name: string): string {
  return name.replace(/\s+/g, '');
}

/** A variable of which only the symbol table knows. @throws FirmwareError for common data, which has no value */
export function rootOfSymbol(image: ElfImage, path: CoefficientPath, symbol: ElfSymbol): Root {
  if (symbol.section === commonSection) throw commonData(image, path.text);
  return {
    steps: symbol.name === path.text ? [] : path.steps,
    type: undefined,
    place: { kind: 'memory', address: symbol.address },
    symbolSize: symbol.size || undefined,
    declaredAt: undefined,
  };
}

function ambiguousSymbols(image: ElfImage, path: CoefficientPath, symbols: ElfSymbol[]): FirmwareError {
  const places = symbols.slice(0, 4).map((symbol) => {
    const file = fileOfSymbol(image.symbolTable, symbol);
    return `${quoted(file ? `${file}:${symbol.name}` : symbol.name)} (${hex(symbol.address)})`;
  });
  return new FirmwareError(
    'ambiguous_name',
    `${quoted(path.text)} can mean ${places.join(' or ')}: write one of these`,
  );
}

/** The error for a variable that the image declares but does not hold. */
export function declaredOnly(image: ElfImage, path: CoefficientPath, variable: Variable): FirmwareError {
  const place = declaredAt(variable);
  const where = place ? ` (${place.file}:${place.line})` : '';
  const why = hasSymbols(image.symbolTable)
    ? 'the image does not hold it: it was removed, or its definition was not linked in'
    : 'the image has no symbol table that says where it is: keep the symbols (do not strip)';
  return new FirmwareError(
    'garbage_collected',
    `${quoted(path.text)}${where} is only declared in ${quoted(image.name)}; ${why}`,
  );
}
