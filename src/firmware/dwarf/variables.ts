import { attribute, hasFlag, referredEntry, textAttribute } from './attributes.js';
import { at, tag } from './codes.js';
import type { DebugInformation, Unit } from './debug_information.js';
import { childrenOf, type Entry, rootOf } from './entry.js';
import { unitsMentioning, unitsReferringTo } from './mentions.js';

/** A namespace, class or function around a variable. */
export interface Scope {
  name: string;
  /** An inline namespace: it need not be written. */
  optional: boolean;
}

/** A variable, static member or constant as the debug information describes it. */
export interface Variable {
  name: string;
  scopes: Scope[];
  /** Declared within a function's body. */
  inFunction: boolean;
  /** The entry which was met. */
  entry: Entry;
  /** The same entry and those it refers to as its declaration or origin, nearest first. */
  chain: Entry[];
}

/** A definition refers to its declaration, and that perhaps to an origin; more is damage. */
const longestChain = 6;
const deepestScope = 128;

/** The written name with all scopes, as in `ns::type::member`. */
export function qualifiedName(variable: Variable): string {
  return [...variable.scopes.map((scope) => scope.name), variable.name].join('::');
}

/** The first value of an attribute along the chain from the definition to its declaration. */
export function entryWith(variable: Variable, name: number): Entry | undefined {
  return variable.chain.find((entry) => attribute(entry, name) !== undefined);
}

/** Whether the entry says where the variable is or what it holds. */
export function isDefinition(variable: Variable): boolean {
  return (
    attribute(variable.entry, at.location) !== undefined || entryWith(variable, at.constValue) !== undefined
  );
}

/** Variables by simple name; complete once all units were read. */
interface NameIndex {
  byName: Map<string, Variable[]>;
  isComplete: boolean;
}

const kept = new WeakMap<DebugInformation, NameIndex>();

function indexOf(debug: DebugInformation): NameIndex {
  const index = kept.get(debug) ?? { byName: new Map<string, Variable[]>(), isComplete: false };
  kept.set(debug, index);
  return index;
}

/** All variables of this simple name, definitions and declarations, from the units which can hold them; searched once. */
export function variablesNamed(debug: DebugInformation, name: string): Variable[] {
  const { byName, isComplete } = indexOf(debug);
  const found = byName.get(name) ?? (isComplete ? [] : searchVariables(debug, name));
  byName.set(name, found);
  return found;
}

/** All variables of all units, in the order of the file; afterwards each is found by its name at once. */
export function everyVariable(debug: DebugInformation): Variable[] {
  const every = debug.units().flatMap((unit) => [...variablesOf(unit)]);
  const index = indexOf(debug);
  if (index.isComplete) return every;
  index.byName.clear();
  for (const variable of every) {
    const same = index.byName.get(variable.name);
    if (same) same.push(variable);
    else index.byName.set(variable.name, [variable]);
  }
  index.isComplete = true;
  return every;
}

function searchVariables(debug: DebugInformation, name: string): Variable[] {
  const found: Variable[] = [];
  const seen = new Set<Unit>();
  let waiting = unitsMentioning(debug, name);
  // A definition without a name refers to the named entry, perhaps from another unit (link-time optimisation).
  while (waiting.length > 0) {
    const fresh: Variable[] = [];
    for (const unit of waiting) {
      seen.add(unit);
      fresh.push(...variablesOf(unit, name));
    }
    found.push(...fresh);
    waiting = fresh
      .filter((variable) => !isDefinition(variable) && variable.entry.unit.section === '.debug_info')
      .flatMap((variable) => unitsReferringTo(debug, variable.entry.offset));
    waiting = [...new Set(waiting)].filter((unit) => !seen.has(unit));
  }
  return found;
}

/** All variables of a unit, or those of one simple name, in the order of the file. */
export function* variablesOf(unit: Unit, wanted?: string): Generator<Variable> {
  const root = rootOf(unit);
  if (!root) return;
  for (const { entry, scopes, inFunction } of entriesIn(root, [], false, 0, interestIn(root))) {
    const variable = describe(entry, scopes, inFunction, wanted);
    if (variable) yield variable;
  }
}

/** The entries of variables and static members below an entry, with what is around them. */
function* entriesIn(
  parent: Entry,
  scopes: Scope[],
  inFunction: boolean,
  depth: number,
  interest: (code: number) => boolean,
): Generator<Surroundings & { entry: Entry }> {
  if (depth > deepestScope) return;
  for (const entry of childrenOf(parent, interest)) {
    if (entry.tag === tag.variable || (entry.tag === tag.member && isStaticMember(entry))) {
      yield { entry, scopes, inFunction };
    } else if (entry.hasChildren && isScope(entry.tag)) {
      const inside = inFunction || entry.tag === tag.subprogram || entry.tag === tag.lexicalBlock;
      yield* entriesIn(entry, [...scopes, ...scopeOf(entry)], inside, depth + 1, interest);
    }
  }
}

/** Languages without static members, by their numbers in DWARF 5, table 7.17: C89, C, C99, C11, and C17 of the later list. */
const plainC = [0x01, 0x02, 0x0c, 0x1d, 0x2c];

/** Which entries of a unit can be variables or hold some: in C no struct does, and they are most of a unit. */
function interestIn(root: Entry): (code: number) => boolean {
  const language = attribute(root, at.language)?.value;
  return plainC.includes(Number(language ?? 0)) ? isOfInterestInC : isOfInterest;
}

function isOfInterest(code: number): boolean {
  return code === tag.variable || code === tag.member || isScope(code);
}

function isOfInterestInC(code: number): boolean {
  return (
    code === tag.variable || code === tag.subprogram || code === tag.lexicalBlock || code === tag.namespace
  );
}

function isScope(code: number): boolean {
  return (
    code === tag.namespace ||
    code === tag.structureType ||
    code === tag.classType ||
    code === tag.unionType ||
    code === tag.subprogram ||
    code === tag.lexicalBlock
  );
}

function isStaticMember(entry: Entry): boolean {
  return (
    hasFlag(entry, at.external) ||
    hasFlag(entry, at.declaration) ||
    attribute(entry, at.constValue) !== undefined
  );
}

function describe(
  entry: Entry,
  scopes: Scope[],
  inFunction: boolean,
  wanted: string | undefined,
): Variable | undefined {
  const chain = chainOf(entry);
  const named = chain.find((link) => attribute(link, at.name) !== undefined);
  const name = named && textAttribute(named, at.name);
  if (!name || (wanted !== undefined && name !== wanted)) return undefined;
  const around = named === entry ? { scopes, inFunction } : surroundingsOf(named);
  return { name, entry, chain, scopes: around.scopes, inFunction: around.inFunction };
}

function chainOf(entry: Entry): Entry[] {
  const chain = [entry];
  while (chain.length < longestChain) {
    const last = chain[chain.length - 1];
    const next = referredEntry(last, at.specification) ?? referredEntry(last, at.abstractOrigin);
    if (!next) break;
    chain.push(next);
  }
  return chain;
}

function scopeOf(entry: Entry): Scope[] {
  const named = chainOf(entry).find((link) => attribute(link, at.name) !== undefined);
  const name = named && textAttribute(named, at.name);
  return name ? [{ name, optional: hasFlag(entry, at.exportSymbols) }] : [];
}

interface Surroundings {
  scopes: Scope[];
  inFunction: boolean;
}

const keptSurroundings = new WeakMap<Unit, Map<number, Surroundings>>();

/** The scopes around an entry that was reached by a reference. */
function surroundingsOf(target: Entry): Surroundings {
  let known = keptSurroundings.get(target.unit);
  if (!known) {
    known = new Map();
    const root = rootOf(target.unit);
    if (root)
      for (const met of entriesIn(root, [], false, 0, interestIn(root))) known.set(met.entry.offset, met);
    keptSurroundings.set(target.unit, known);
  }
  return known.get(target.offset) ?? { scopes: [], inFunction: false };
}
