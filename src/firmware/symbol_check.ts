import { hex } from './cursor.js';
import { attribute, textAttribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { type DataType, sizeOf } from './dwarf/data_type.js';
import { declaredAt } from './dwarf/find_variable.js';
import { entryWith, type Variable } from './dwarf/variables.js';
import { isPlaced } from './elf/memory.js';
import { commonSection, dataSymbolsAt, isData, symbolsNamed } from './elf/symbols.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import type { CoefficientPath } from './path.js';

/**
 * The error for a variable which the linker dropped: linkers mark that by an address of 0, −1 or −2, or leave one where nothing
 * or something else stands. Undefined when it is there.
 */
export function removedByLinker(
  image: ElfImage,
  path: string,
  variable: Variable,
  address: number,
): FirmwareError | undefined {
  const isMark = address === 0 || address >= 2 ** (8 * variable.entry.unit.addressSize) - 2;
  const isThere = isMark
    ? hasOwnSymbol(image, variable, address)
    : isPlaced(image.elf, address) && !isAnothers(image, variable, address);
  if (isThere) return undefined;
  const isCommon = symbolsNamed(image.symbolTable, symbolNameOf(variable)).some(
    (symbol) => symbol.section === commonSection,
  );
  if (isCommon) return commonData(image, path);
  const place = declaredAt(variable);
  return new FirmwareError(
    'garbage_collected',
    `${quoted(path)}${place ? `, declared in ${place.file}:${place.line},` : ''} is not in ${quoted(image.name)}: the linker dropped it since nothing uses it ` +
      '(--gc-sections); use it, or mark it __attribute__((used)) and KEEP its section',
  );
}

/** The error for data to which the linker gives memory, cleared, but no value. */
export function commonData(image: ElfImage, path: string): FirmwareError {
  return new FirmwareError(
    'no_contents',
    `${quoted(path)} in ${quoted(image.name)} is common data without a value; initialise it in the source`,
  );
}

/** Whether the symbol table gives the address to another variable, and not to this one. */
function isAnothers(image: ElfImage, variable: Variable, address: number): boolean {
  if (symbolsNamed(image.symbolTable, symbolNameOf(variable)).some((symbol) => symbol.address === address))
    return false;
  // Names of sections and of the linker's own begin with a character that no variable has.
  const covering = dataSymbolsAt(image.symbolTable, address).filter((symbol) => !/^[.$]/.test(symbol.name));
  return (
    covering.length > 0 &&
    !covering.some((symbol) => isNameOf(symbol.name, variable.name) || mergedGlobals.test(symbol.name))
  );
}

function hasOwnSymbol(image: ElfImage, variable: Variable, address: number): boolean {
  return dataSymbolsAt(image.symbolTable, address).some((symbol) => isNameOf(symbol.name, variable.name));
}

/** A compiler may put several variables into one, under a name of its own. */
const mergedGlobals = /MergedGlobals/;

/** Whether a symbol's name is made from a variable's: `taps.0`, `update.taps`, `kp.lto_priv.1`, `_ZN2ns2kpE`. */
function isNameOf(symbol: string, name: string): boolean {
  return (
    symbol.split('.').includes(name) ||
    (/^_[ZR]/.test(symbol) && symbol.includes(`${Buffer.byteLength(name)}${name}`))
  );
}

/** What the symbol table calls the variable. */
function symbolNameOf(variable: Variable): string {
  const linked = entryWith(variable, at.linkageName) ?? entryWith(variable, at.mipsLinkageName);
  return (
    (linked && (textAttribute(linked, at.linkageName) ?? textAttribute(linked, at.mipsLinkageName))) ??
    variable.name
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
  const named = symbolsNamed(image.symbolTable, symbolNameOf(variable)).filter((symbol) => isData(symbol));
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
