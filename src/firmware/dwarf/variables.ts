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

const kept = new WeakMap<DebugInformation, Map<string, Variable[]>>();

/** All variables of this simple name, definitions and declarations, from the units which can hold them; searched once. */
export function variablesNamed(debug: DebugInformation, name: string): Variable[] {
  const byName = kept.get(debug) ?? new Map<string, Variable[]>();
  kept.set(debug, byName);
  const found = byName.get(name) ?? searchVariables(debug, name);
  byName.set(name, found);
  return found;
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
  for (const { entry, scopes, inFunction } of entriesIn(root, [], false, 0)) {
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
): Generator<Surroundings & { entry: Entry }> {
  if (depth > deepestScope) return;
  for (const entry of childrenOf(parent, isOfInterest)) {
    if (entry.tag === tag.variable || (entry.tag === tag.member && isStaticMember(entry))) {
      yield { entry, scopes, inFunction };
    } else if (entry.hasChildren && isScope(entry.tag)) {
      const inside = inFunction || entry.tag === tag.subprogram || entry.tag === tag.lexicalBlock;
      yield* entriesIn(entry, [...scopes, ...scopeOf(entry)], inside, depth + 1);
    }
  }
}

function isOfInterest(code: number): boolean {
  return code === tag.variable || code === tag.member || isScope(code);
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
    if (root) for (const met of entriesIn(root, [], false, 0)) known.set(met.entry.offset, met);
    keptSurroundings.set(target.unit, known);
  }
  return known.get(target.offset) ?? { scopes: [], inFunction: false };
}
