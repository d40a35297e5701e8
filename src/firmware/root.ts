import type { DeclaredAt } from './coefficient.js';
import { hex } from './cursor.js';
import { at } from './dwarf/codes.js';
import { type DataType, typeOf } from './dwarf/data_type.js';
import { ambiguous, declaredAt, findInFunction, findVariable, pathWithFile } from './dwarf/find_variable.js';
import { type Place, placeOf } from './dwarf/location.js';
import { entryWith, type Variable } from './dwarf/variables.js';
import { isData, symbolsNamed } from './elf/symbols.js';
import type { FirmwareError } from './failure.js';
import type { ElfImage } from './image.js';
import { noSuchSymbol } from './known_names.js';
import type { CoefficientPath, PathStep } from './path.js';
import { checkedSymbol, removedByLinker } from './symbol_check.js';
import { declaredOnly, rootOfSymbol, symbolFor } from './symbol_root.js';

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
  const found = definitions.length > 0 ? definitions : definitionsByFunction(image, path);
  if (found.length > 0) return rootsOfDefinitions(image, path, found);
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

/** Where the debug information lost the name of the function around a variable, the symbol table has both: `update.taps`. */
function definitionsByFunction(image: ElfImage, path: CoefficientPath): Variable[] {
  if (path.scopes.length === 0 || !image.debug.present) return [];
  const symbols = symbolsNamed(image.symbolTable, [...path.scopes, path.name].join('.')).filter(isData);
  if (symbols.length !== 1) return [];
  return findInFunction(image.debug, path.name).filter((variable) => {
    const place = placeOf(variable.entry, undefined);
    return place.kind === 'memory' && place.address === symbols[0].address;
  });
}

function rootsOfDefinitions(image: ElfImage, path: CoefficientPath, definitions: Variable[]): Root[] {
  const byPlace = new Map<string, { variable: Variable; place: Place }>();
  const removed: FirmwareError[] = [];
  for (const variable of definitions) {
    const place = placeOf(variable.entry, entryWith(variable, at.constValue));
    const trouble =
      place.kind === 'memory' ? removedByLinker(image, path.text, variable, place.address) : undefined;
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
