import type { Place } from './spec.js';

/** A YAML document as the reader uses it: every part with its place; what was wrong already is `broken`. */
export type Tree = TextTree | MapTree | ListTree | EmptyTree | BrokenTree;

/** A scalar, always text: numbers and units are read by the slots that expect them. */
export interface TextTree {
  kind: 'text';
  /** What the scalar means: quotes and folds resolved. */
  text: string;
  /** What an expression is read from: as it stands in the file, so that places are exact. */
  source: string;
  /** The place of an index of `source`. */
  placeAt: (at: number) => Place;
  place: Place;
}

export interface MapTree {
  kind: 'map';
  entries: MapEntry[];
  place: Place;
}

export interface MapEntry {
  key: string;
  keyPlace: Place;
  value: Tree;
}

export interface ListTree {
  kind: 'list';
  items: Tree[];
  place: Place;
}

/** A key without a value. */
export interface EmptyTree {
  kind: 'empty';
  place: Place;
}

/** Already reported: whoever needs it stays silent. */
export interface BrokenTree {
  kind: 'broken';
  place: Place;
}

/** The entry of a mapping by its key; undefined also where the tree is no mapping. */
export function entryOf(tree: Tree | undefined, key: string): MapEntry | undefined {
  return entriesOf(tree).find((entry) => entry.key === key);
}

/** The value of a mapping by its key. */
export function childOf(tree: Tree | undefined, key: string): Tree | undefined {
  return entryOf(tree, key)?.value;
}

/** The entries of a mapping; none where the tree is no mapping. */
export function entriesOf(tree: Tree | undefined): MapEntry[] {
  return tree?.kind === 'map' ? tree.entries : [];
}

/** The items of a list; none where the tree is no list. */
export function itemsOf(tree: Tree | undefined): Tree[] {
  return tree?.kind === 'list' ? tree.items : [];
}

/** A scalar, or undefined. */
export function textOf(tree: Tree | undefined): TextTree | undefined {
  return tree?.kind === 'text' ? tree : undefined;
}
