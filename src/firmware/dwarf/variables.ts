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
      for (const variable of variablesOf(unit)) if (variable.name === name) fresh.push(variable);
    }
    found.push(...fresh);
    waiting = fresh
      .filter((variable) => !isDefinition(variable) && variable.entry.unit.section === '.debug_info')
      .flatMap((variable) => unitsReferringTo(debug, variable.entry.offset));
    waiting = [...new Set(waiting)].filter((unit) => !seen.has(unit));
  }
  return found;
}

/** All variables of a unit, in the order of the file. */
export function* variablesOf(unit: Unit): Generator<Variable> {
  const root = rootOf(unit);
  if (root) yield* variablesIn(root, [], false, 0);
}

function* variablesIn(
  parent: Entry,
  scopes: Scope[],
  inFunction: boolean,
  depth: number,
): Generator<Variable> {
  if (depth > deepestScope) return;
  for (const entry of childrenOf(parent)) {
    if (entry.tag === tag.variable || (entry.tag === tag.member && isStaticMember(entry))) {
      const variable = describe(entry, scopes, inFunction);
      if (variable) yield variable;
    } else if (entry.hasChildren && isScope(entry.tag)) {
      const inside = inFunction || entry.tag === tag.subprogram || entry.tag === tag.lexicalBlock;
      yield* variablesIn(entry, [...scopes, ...scopeOf(entry)], inside, depth + 1);
    }
  }
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

function describe(entry: Entry, scopes: Scope[], inFunction: boolean): Variable | undefined {
  const chain = chainOf(entry);
  const named = chain.find((link) => attribute(link, at.name) !== undefined);
  const name = named && textAttribute(named, at.name);
  if (!name) return undefined;
  const around = named === entry ? { scopes, inFunction } : scopesAround(named);
  return { name, entry, chain, ...around };
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

/** The scopes around an entry that was reached by a reference, found by descending towards it from its unit. */
function scopesAround(target: Entry): { scopes: Scope[]; inFunction: boolean } {
  const scopes: Scope[] = [];
  let inFunction = false;
  let parent = rootOf(target.unit);
  for (let depth = 0; parent && depth < deepestScope; depth++) {
    const around = childTowards(parent, target);
    if (!around) break;
    if (isScope(around.tag)) scopes.push(...scopeOf(around));
    inFunction ||= around.tag === tag.subprogram || around.tag === tag.lexicalBlock;
    parent = around;
  }
  return { scopes, inFunction };
}

/** The child which the target lies in; undefined when it is a child itself. */
function childTowards(parent: Entry, target: Entry): Entry | undefined {
  let around: Entry | undefined;
  for (const child of childrenOf(parent)) {
    if (child.offset === target.offset) return undefined;
    if (child.offset > target.offset) break;
    around = child;
  }
  return around?.hasChildren ? around : undefined;
}
