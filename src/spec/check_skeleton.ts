import { z } from 'zod';
import { nearestName, suggestion } from './nearest.js';
import type { Problems } from './problems.js';
import type { Place } from './spec.js';
import { childOf, entryOf, type MapEntry, type MapTree, type Tree } from './tree.js';

/** One complaint of the schema, as far as it is used here. */
type Issue = z.core.$ZodIssue;
type Path = readonly PropertyKey[];

/** Stands for a broken part: no schema accepts it, and the complaint is then dropped. */
const broken = Symbol('broken');

/** A key that no schema knows, and the mapping in which it stands. */
export interface UnknownKey {
  holder: Tree;
  entry: MapEntry;
  nearest: string | undefined;
}

/**
 * Holds a tree against the schema, reports what has the wrong shape, each at its place. Gives the unknown keys.
 * `explain` may say more of an unknown key than its nearest neighbour.
 */
export function checkSkeleton(
  tree: MapTree,
  schema: z.ZodType,
  problems: Problems,
  explain: (path: Path, key: string) => string | undefined,
): UnknownKey[] {
  const result = schema.safeParse(plainRoot(tree));
  const held: Held = { tree, schema, problems, explain, unknown: [] };
  const complaints = (result.error?.issues ?? []).flatMap((issue) => unfolded(issue, issue.path));
  const isUnknown = ({ issue }: Complaint) => issue.code === 'unrecognized_keys';
  for (const complaint of complaints.filter(isUnknown)) reportUnknownKeys(complaint, held);
  for (const complaint of complaints.filter((one) => !isUnknown(one))) reportShape(complaint, held);
  return held.unknown;
}

interface Held {
  tree: MapTree;
  schema: z.ZodType;
  problems: Problems;
  explain: (path: Path, key: string) => string | undefined;
  unknown: UnknownKey[];
}

/** An issue with its path from the root. */
interface Complaint {
  issue: Issue;
  path: Path;
}

function unfolded(issue: Issue, path: Path): Complaint[] {
  const branch = issue.code === 'invalid_union' ? fittingBranch(issue) : undefined;
  return branch?.flatMap((inner) => unfolded(inner, [...path, ...inner.path])) ?? [{ issue, path }];
}

/** The alternative that has the shape of what is written: its complaints lie deeper. */
function fittingBranch(issue: z.core.$ZodIssueInvalidUnion): Issue[] | undefined {
  return issue.errors.find(
    (branch) => !branch.some(({ code, path }) => code === 'invalid_type' && path.length === 0),
  );
}

function reportUnknownKeys({ issue, path }: Complaint, held: Held): void {
  const holder = treeAt(held.tree, path);
  const valid = keysOf(schemaAt(held.schema, path, held.tree));
  const where = path.length === 0 ? 'the spec' : whatIs(path.at(-1)!);
  for (const key of issue.code === 'unrecognized_keys' ? issue.keys : []) {
    const entry = entryOf(holder, key);
    if (holder === undefined || entry === undefined) continue;
    held.unknown.push({ holder, entry, nearest: nearestName(key, valid) });
    const fault = held.explain(path, key) ?? `unknown key \`${key}\` in ${where}${suggestion(key, valid)}`;
    held.problems.add(entry.keyPlace, fault);
  }
}

/** What seems missing but stands there mistyped is reported as mistyped only. */
function reportShape({ path }: Complaint, held: Held): void {
  const at = treeAt(held.tree, path);
  const holder = treeAt(held.tree, path.slice(0, -1));
  const mistyped = held.unknown.some((one) => one.holder === holder && one.nearest === path.at(-1));
  if (at?.kind === 'broken' || (at === undefined && mistyped)) return;
  held.problems.add(at?.place ?? ownerPlace(held.tree, path), shapeFault(path, at, expectedAt(held, path)));
}

function whatIs(step: PropertyKey): string {
  return typeof step === 'number' ? `item ${step + 1}` : `\`${String(step)}\``;
}

function shapeFault(path: Path, at: Tree | undefined, expected: string): string {
  const name = path.length === 0 ? 'the spec' : whatIs(path.at(-1)!);
  if (at === undefined) return `${name} is missing; expected ${expected}`;
  if (at.kind === 'empty') return `${name} is empty; expected ${expected}`;
  const list = at.kind === 'list' && at.items.length === 0 ? 'an empty list' : 'a list';
  const found = { text: 'a single value', map: 'a mapping', list, broken: '' }[at.kind];
  const shown = at.kind === 'text' ? `\`${at.text}\`` : found;
  return `${name} is ${shown}; expected ${expected}`;
}

/** What is missing is reported at the key of the mapping that should have it. */
function ownerPlace(tree: Tree, path: Path): Place {
  const owner = path.slice(0, -1);
  const key = owner.at(-1);
  const holder = treeAt(tree, owner.slice(0, -1));
  if (typeof key === 'string') return entryOf(holder, key)?.keyPlace ?? tree.place;
  return treeAt(tree, owner)?.place ?? tree.place;
}

function treeAt(tree: Tree | undefined, path: Path): Tree | undefined {
  let at = tree;
  for (const step of path) {
    if (at?.kind === 'broken') return at;
    at = at?.kind === 'list' && typeof step === 'number' ? at.items[step] : childOf(at, String(step));
  }
  return at;
}

function expectedAt(held: Held, path: Path): string {
  return describe(schemaAt(held.schema, path, held.tree)) ?? 'something else';
}

function describe(schema: z.core.$ZodType | undefined): string | undefined {
  const own = (schema as z.ZodType | undefined)?.description;
  return own ?? (schema instanceof z.ZodOptional ? describe(schema.unwrap()) : undefined);
}

/** Walks the schema along a path; of alternatives it takes the one that has the written shape. */
function schemaAt(schema: z.core.$ZodType, path: Path, tree: Tree | undefined): z.core.$ZodType | undefined {
  const inner = schema instanceof z.ZodOptional ? schema.unwrap() : schema;
  if (inner instanceof z.ZodUnion && (path.length > 0 || tree?.kind === 'map')) {
    const options = inner.options as z.core.$ZodType[];
    const wanted = tree?.kind === 'list' ? z.ZodArray : z.ZodObject;
    const option = options.find((candidate) => candidate instanceof wanted);
    if (option !== undefined) return schemaAt(option, path, tree);
    return path.length === 0 ? schema : undefined;
  }
  if (path.length === 0) return schema;
  const next = stepInto(inner, path[0]);
  const step = path[0];
  const below =
    tree?.kind === 'list' && typeof step === 'number' ? tree.items[step] : childOf(tree, String(step));
  return next === undefined ? undefined : schemaAt(next, path.slice(1), below);
}

function stepInto(schema: z.core.$ZodType, step: PropertyKey): z.core.$ZodType | undefined {
  if (schema instanceof z.ZodObject) return schema.shape[String(step)];
  if (schema instanceof z.ZodRecord) return schema.valueType;
  if (schema instanceof z.ZodArray) return schema.element;
  if (schema instanceof z.ZodTuple) return schema.def.items[Number(step)];
  return undefined;
}

function keysOf(schema: z.core.$ZodType | undefined): string[] {
  const inner = schema instanceof z.ZodOptional ? schema.unwrap() : schema;
  return inner instanceof z.ZodObject ? Object.keys(inner.shape) : [];
}

/** Empty sections count as left out. */
function plainRoot(tree: MapTree): unknown {
  return plainOf({ ...tree, entries: tree.entries.filter(({ value }) => value.kind !== 'empty') });
}

function plainOf(tree: Tree): unknown {
  switch (tree.kind) {
    case 'text':
      return tree.text;
    case 'empty':
      return null;
    case 'broken':
      return broken;
    case 'list':
      return tree.items.map(plainOf);
    case 'map':
      return Object.fromEntries(tree.entries.map(({ key, value }) => [key, plainOf(value)]));
  }
}
