import { attribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { rootOf } from './dwarf/entry.js';
import { qualifiedName, variablesOf } from './dwarf/variables.js';
import { debugLinkOf } from './elf/debug_link.js';
import { demangledData } from './elf/demangle.js';
import { allSymbols, hasSymbols, isData } from './elf/symbols.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage } from './image.js';
import { nearestNames } from './nearest.js';
import type { CoefficientPath } from './path.js';

/** Enough names to offer a near one; an error must not take long. */
const mostNames = 50_000;

/** The error for a name that the image does not have, with the names that may have been meant and the cure. */
export function noSuchSymbol(image: ElfImage, path: CoefficientPath): FirmwareError {
  const wanted = [...path.scopes, path.name].join('::');
  const split = splitOff(image);
  if (split)
    return new FirmwareError(
      'no_debug_information',
      `no variable ${quoted(wanted)} can be found in ${quoted(image.name)}: ${split}`,
    );
  if (!image.debug.present && !hasSymbols(image.symbolTable)) {
    return new FirmwareError(
      'no_debug_information',
      `no variable ${quoted(wanted)} can be found in ${quoted(image.name)}: it has neither symbols nor debug information; build with -g and do not strip`,
    );
  }
  const near = nearNames(image, path, wanted);
  const offered = near.length > 0 ? `; nearest: ${near.map(quoted).join(', ')}` : '';
  const where = path.file === undefined ? '' : ` of ${quoted(path.file)}`;
  return new FirmwareError(
    'no_such_symbol',
    `${quoted(image.name)} has no variable ${quoted(wanted)}${where}${offered}`,
  );
}

/** Names a few letters apart, and those which have the same last part in another scope. */
function nearNames(image: ElfImage, path: CoefficientPath, wanted: string): string[] {
  const known = knownNames(image);
  const elsewhere = [...known].filter((name) => name.endsWith(`::${path.name}`)).slice(0, 3);
  return [...new Set([...nearestNames(wanted, known), ...elsewhere])].slice(0, 3);
}

/** Why the debug information is elsewhere, and how to give it. */
function splitOff(image: ElfImage): string | undefined {
  const link = image.debug.present ? undefined : debugLinkOf(image.elf);
  if (link) {
    return `its debug information was split off into ${quoted(link.fileName)}, which was not found; put that beside the image, or give it as debug file`;
  }
  const isSplit = image.debug.units().some((unit) => {
    const root = rootOf(unit);
    return (
      root !== undefined && (attribute(root, at.dwoName) ?? attribute(root, at.gnuDwoName)) !== undefined
    );
  });
  return isSplit ? 'its debug information is kept in .dwo files; build without -gsplit-dwarf' : undefined;
}

const kept = new WeakMap<ElfImage, Set<string>>();

function knownNames(image: ElfImage): Set<string> {
  const names = kept.get(image) ?? new Set(listNames(image));
  kept.set(image, names);
  return names;
}

function* listNames(image: ElfImage): Generator<string> {
  for (const symbol of allSymbols(image.symbolTable))
    if (isData(symbol) && symbol.name !== '') yield demangledData(symbol.name)?.join('::') ?? symbol.name;
  let count = 0;
  for (const unit of image.debug.units()) {
    for (const variable of variablesOf(unit)) {
      yield qualifiedName(variable);
      if (++count > mostNames) return;
    }
  }
}
