import type { DeclaredAt } from './coefficient.js';
import { hex } from './cursor.js';
import { attribute, textAttribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { type DataType, sizeOf, typeOf } from './dwarf/data_type.js';
import { ambiguous, declaredAt, findVariable, pathWithFile } from './dwarf/find_variable.js';
import { type Place, placeOf } from './dwarf/location.js';
import { entryWith, type Variable } from './dwarf/variables.js';
import { isPlaced } from './elf/memory.js';
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
import { noSuchSymbol } from './known_names.js';
import type { CoefficientPath, PathStep } from './path.js';

/** The variable at the beginning of a path. */
export interface Root {
  /** The steps of the path that lead on from here. */
  steps: PathStep[];
  /** Undefined where the debug information says nothing of it. */
  type: DataType | undefined;
  place: Place;
  /** Bytes as the symbol table states them, undefined when it does not. */
  symbolSize: number | undefined;
  declaredAt: DeclaredAt | undefined;
}

/**
 * The variables which a path's beginning means: one, or several copies of one constant from a header, whose values must
 * then agree.
 * @throws FirmwareError when there is none, or when it is not clear which
 */
export function rootsOf(image: ElfImage, path: CoefficientPath): Root[] {
  const { definitions, declarations } = image.debug.present
    ? findVariable(image.debug, path)
    : { definitions: [], declarations: [] };
  if (definitions.length > 0) return rootsOfDefinitions(image, path, definitions);
  const symbol = symbolFor(image, path, declarations);
  if (symbol) {
    const [declared] = declarations;
    const typed = declared && entryWith(declared, at.type);
    return [
      {
        ...rootOfSymbol(image, path, symbol),
        type: typed && typeOf(typed),
        declaredAt: declared && declaredAt(declared),
      },
    ];
  }
  if (declarations.length > 0) throw declaredOnly(image, path, declarations[0]);
  throw noSuchSymbol(image, path);
}

function rootsOfDefinitions(image: ElfImage, path: CoefficientPath, definitions: Variable[]): Root[] {
  const byPlace = new Map<string, { variable: Variable; place: Place }>();
  const removed: FirmwareError[] = [];
  for (const variable of definitions) {
    const place = placeOf(variable.entry, entryWith(variable, at.constValue));
    const trouble =
      place.kind === 'memory' ? removedByLinker(image, path, variable, place.address) : undefined;
    if (trouble) removed.push(trouble);
    else
      byPlace.set(place.kind === 'memory' ? hex(place.address) : pathWithFile(variable), { variable, place });
  }
  const found = [...byPlace.values()];
  if (found.length === 0) throw removed[0];
  if (found.length > 1 && !areCopies(found.map(({ variable }) => variable))) {
    throw ambiguous(
      path,
      found.map(({ variable }) => variable),
    );
  }
  return found.map(({ variable, place }) => rootOfVariable(image, path, variable, place));
}

function rootOfVariable(image: ElfImage, path: CoefficientPath, variable: Variable, place: Place): Root {
  const typed = entryWith(variable, at.type);
  const type = typed && typeOf(typed);
  const symbol =
    place.kind === 'memory' ? checkedSymbol(image, path, variable, place.address, type) : undefined;
  return {
    steps: path.steps,
    type,
    place,
    symbolSize: symbol?.size || undefined,
    declaredAt: declaredAt(variable),
  };
}

/** Copies of a header's constant stand in several units, declared in the same line. */
function areCopies(variables: Variable[]): boolean {
  const places = variables.map((variable) => declaredAt(variable));
  return places.every(
    (place) => place !== undefined && place.file === places[0]?.file && place.line === places[0]?.line,
  );
}

/** Linkers mark what they dropped by an address of 0, −1 or −2, or leave one that lies nowhere. */
function removedByLinker(
  image: ElfImage,
  path: CoefficientPath,
  variable: Variable,
  address: number,
): FirmwareError | undefined {
  const isMark = address === 0 || address >= 2 ** (8 * variable.entry.unit.addressSize) - 2;
  const isThere = isMark ? isCoveredBySymbol(image, address) : isPlaced(image.elf, address);
  if (isThere) return undefined;
  const place = declaredAt(variable);
  return new FirmwareError(
    'garbage_collected',
    `${quoted(path.text)}${place ? `, declared in ${place.file}:${place.line},` : ''} is not in ${quoted(image.name)}: the linker dropped it since nothing uses it ` +
      '(--gc-sections); use it, or mark it __attribute__((used)) and KEEP its section',
  );
}

function isCoveredBySymbol(image: ElfImage, address: number): boolean {
  return allSymbols(image.elf).some(
    (symbol) =>
      isData(symbol) &&
      symbol.name !== '' &&
      address >= symbol.address &&
      address < symbol.address + symbol.size,
  );
}

/** The variable's own symbol, which must say the same as the debug information. */
function checkedSymbol(
  image: ElfImage,
  path: CoefficientPath,
  variable: Variable,
  address: number,
  type: DataType | undefined,
) {
  const { elf } = image;
  const linked = entryWith(variable, at.linkageName) ?? entryWith(variable, at.mipsLinkageName);
  const name =
    (linked && (textAttribute(linked, at.linkageName) ?? textAttribute(linked, at.mipsLinkageName))) ??
    variable.name;
  const named = symbolsNamed(elf, name).filter((symbol) => isData(symbol));
  const symbol = named.find((candidate) => candidate.address === address);
  const isExternal = variable.chain.some((entry) => attribute(entry, at.external));
  const [only] = named;
  if (!symbol && isExternal && named.length === 1 && !only.local) {
    throw new FirmwareError(
      'sources_disagree',
      `${quoted(path.text)}: the debug information of ${quoted(image.name)} places it at ${hex(address)}, the symbol table at ${hex(only.address)}; rebuild from clean`,
    );
  }
  const size =
    type && type.kind !== 'other' && !(type.kind === 'record' && type.size === undefined) ? sizeOf(type) : 0;
  if (symbol && symbol.size > 0 && symbol.size < size) {
    throw new FirmwareError(
      'sources_disagree',
      `${quoted(path.text)}: its type has ${size} bytes in the debug information of ${quoted(image.name)}, its symbol ${symbol.size}; rebuild from clean`,
    );
  }
  return symbol;
}

function symbolFor(image: ElfImage, path: CoefficientPath, declarations: Variable[]): ElfSymbol | undefined {
  const linked = declarations
    .map((variable) => entryWith(variable, at.linkageName))
    .find((entry) => entry !== undefined);
  const names = [
    linked && textAttribute(linked, at.linkageName),
    path.scopes.length === 0 ? path.name : undefined,
    path.text,
  ];
  for (const name of names) {
    if (name === undefined) continue;
    const named = symbolsNamed(image.elf, name).filter(
      (symbol) =>
        isData(symbol) && (path.file === undefined || fileOfSymbol(image.elf, symbol)?.endsWith(path.file)),
    );
    const places = new Map(named.map((symbol) => [symbol.address, symbol]));
    if (places.size > 1) throw ambiguousSymbols(image, path, [...places.values()]);
    if (places.size === 1) return named.find((symbol) => symbol.size > 0) ?? named[0];
  }
  return undefined;
}

function rootOfSymbol(image: ElfImage, path: CoefficientPath, symbol: ElfSymbol): Root {
  if (symbol.section === commonSection) {
    throw new FirmwareError(
      'no_contents',
      `${quoted(path.text)} in ${quoted(image.name)} is common data without a value; initialise it in the source`,
    );
  }
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
    const file = fileOfSymbol(image.elf, symbol);
    return `${quoted(file ? `${file}:${symbol.name}` : symbol.name)} (${hex(symbol.address)})`;
  });
  return new FirmwareError(
    'ambiguous_name',
    `${quoted(path.text)} can mean ${places.join(' or ')}: write one of these`,
  );
}

function declaredOnly(image: ElfImage, path: CoefficientPath, variable: Variable): FirmwareError {
  const place = declaredAt(variable);
  const where = place ? ` (${place.file}:${place.line})` : '';
  const why = hasSymbols(image.elf)
    ? 'the image does not hold it: it was removed, or its definition was not linked in'
    : 'the image has no symbol table that says where it is: keep the symbols (do not strip)';
  return new FirmwareError(
    'garbage_collected',
    `${quoted(path.text)}${where} is only declared in ${quoted(image.name)}; ${why}`,
  );
}
