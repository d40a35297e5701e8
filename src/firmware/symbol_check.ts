import { hex } from './cursor.js';
import { attribute, textAttribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { type DataType, sizeOf } from './dwarf/data_type.js';
import { declaredAt } from './dwarf/find_variable.js';
import { entryWith, type Variable } from './dwarf/variables.js';
import { isPlaced } from './elf/memory.js';
import { allSymbols, isData, symbolsNamed } from './elf/symbols.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import type { CoefficientPath } from './path.js';

/**
 * The error for a variable which the linker dropped: linkers mark that by an address of 0, −1 or −2, or leave one that lies
 * nowhere. Undefined when it is there.
 */
export function removedByLinker(
  image: ElfImage,
  path: string,
  variable: Variable,
  address: number,
): FirmwareError | undefined {
  const isMark = address === 0 || address >= 2 ** (8 * variable.entry.unit.addressSize) - 2;
  const isThere = isMark ? isCoveredBySymbol(image, address) : isPlaced(image.elf, address);
  if (isThere) return undefined;
  const place = declaredAt(variable);
  return new FirmwareError(
    'garbage_collected',
    `${quoted(path)}${place ? `, declared in ${place.file}:${place.line},` : ''} is not in ${quoted(image.name)}: the linker dropped it since nothing uses it ` +
      '(--gc-sections); use it, or mark it __attribute__((used)) and KEEP its section',
  );
}

function isCoveredBySymbol(image: ElfImage, address: number): boolean {
  return allSymbols(image.symbolTable).some(
    (symbol) =>
      isData(symbol) &&
      symbol.name !== '' &&
      address >= symbol.address &&
      address < symbol.address + symbol.size,
  );
}

/**
 * The variable's own symbol, which must say the same as the debug information.
 * @throws FirmwareError `sources_disagree` when it does not
 */
export function checkedSymbol(
  image: ElfImage,
  path: CoefficientPath,
  variable: Variable,
  address: number,
  type: DataType | undefined,
) {
  const linked = entryWith(variable, at.linkageName) ?? entryWith(variable, at.mipsLinkageName);
  const name =
    (linked && (textAttribute(linked, at.linkageName) ?? textAttribute(linked, at.mipsLinkageName))) ??
    variable.name;
  const named = symbolsNamed(image.symbolTable, name).filter((symbol) => isData(symbol));
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
