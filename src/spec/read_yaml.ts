import {
  type Document,
  isAlias,
  isMap,
  isScalar,
  isSeq,
  LineCounter,
  type Pair,
  type ParsedNode,
  parseDocument,
  type Scalar,
  type YAMLMap,
  type YAMLSeq,
} from 'yaml';
import type { Problems } from './problems.js';
import type { Place } from './spec.js';
import type { BrokenTree, MapEntry, TextTree, Tree } from './tree.js';
import { yamlFaults } from './yaml_faults.js';

/** Longest spec text in characters; a spec is a page or two. */
const longest = 2_000_000;
const deepest = 20;

interface Source {
  text: string;
  placeOf: (offset: number) => Place;
  problems: Problems;
}

/**
 * Reads YAML text into a tree; undefined where the text is no YAML, so that nothing in it can be relied on (its
 * errors are then the only ones).
 */
export function readYaml(text: string, file: string, problems: Problems): Tree | undefined {
  if (text.length > longest) {
    problems.add(
      { file, line: 1, column: 1 },
      `the file has more than ${longest} characters; this is no spec`,
    );
    return undefined;
  }
  const lineCounter = new LineCounter();
  const placeOf = (offset: number): Place => {
    const { line, col } = lineCounter.linePos(Math.min(offset, text.length));
    return { file, line: Math.max(1, line), column: Math.max(1, col) };
  };
  const document = parsed(text, lineCounter);
  const faults = yamlFaults(document.errors, text);
  for (const fault of faults) problems.add(placeOf(fault.offset), fault.message);
  if (faults.some((fault) => fault.fatal)) return undefined;
  const source = { text, placeOf, problems };
  const tree = document.contents === null ? undefined : treeOf(document.contents, source, 0);
  if (tree !== undefined && tree.kind !== 'empty') return tree;
  problems.add(placeOf(0), 'the file is empty; a spec starts with `pawl: 1`');
  return undefined;
}

/** Scalars stay text: a spec knows quantities, not YAML's numbers, dates and truth values. */
function parsed(text: string, lineCounter: LineCounter): Document.Parsed {
  return parseDocument(text, {
    lineCounter,
    schema: 'failsafe',
    prettyErrors: false,
    uniqueKeys: true,
    logLevel: 'error',
  });
}

function treeOf(node: unknown, source: Source, depth: number): Tree {
  const parsedNode = node as ParsedNode;
  const place = source.placeOf(parsedNode.range[0]);
  const refused = refusal(parsedNode, depth);
  if (refused !== undefined) {
    source.problems.add(place, refused);
    return { kind: 'broken', place };
  }
  if (isMap(node)) return mapOf(node as YAMLMap, source, place, depth);
  if (isSeq(node)) return listOf(node as YAMLSeq, source, place, depth);
  return scalarOf(node as Scalar, source, place);
}

function refusal(node: ParsedNode, depth: number): string | undefined {
  if (isAlias(node))
    return `\`*${node.source}\` is a YAML alias; a spec says everything where it stands, so write it out`;
  if (node.anchor !== undefined)
    return `\`&${node.anchor}\` is a YAML anchor; a spec has none, so leave it out`;
  if (node.tag !== undefined && !node.tag.startsWith('tag:yaml.org,2002:')) {
    return `\`${node.tag}\` is a YAML tag; a spec has none, so leave it out`;
  }
  if (depth > deepest) return `nested more than ${deepest} deep`;
  return undefined;
}

function mapOf(map: YAMLMap, source: Source, place: Place, depth: number): Tree {
  const entries: MapEntry[] = [];
  for (const pair of map.items as Pair[]) {
    const last = entries.at(-1);
    if (
      pair.value === null &&
      last !== undefined &&
      (splitByComma(last.value) || last.value.kind === 'broken')
    ) {
      if (last.value.kind === 'text') last.value = brokenByComma(last.value, source);
      continue;
    }
    const entry = entryOf(pair, source, depth);
    if (entry !== undefined && !entries.some(({ key }) => key === entry.key)) entries.push(entry);
  }
  return { kind: 'map', entries, place };
}

function entryOf(pair: Pair, source: Source, depth: number): MapEntry | undefined {
  const key = pair.key as ParsedNode;
  const keyPlace = source.placeOf(key?.range?.[0] ?? 0);
  if (!isScalar(key) || typeof key.value !== 'string') {
    source.problems.add(keyPlace, 'a key must be a plain word');
    return undefined;
  }
  const value: Tree =
    pair.value === null ? { kind: 'empty', place: keyPlace } : treeOf(pair.value, source, depth + 1);
  // An empty value is reported at its key: there is nothing else to see.
  return { key: key.value, keyPlace, value: value.kind === 'empty' ? { ...value, place: keyPlace } : value };
}

function listOf(list: YAMLSeq, source: Source, place: Place, depth: number): Tree {
  const items = list.items.map((item) => treeOf(item, source, depth + 1));
  const split = items.find(splitByComma);
  if (split === undefined || list.flow !== true) return { kind: 'list', items, place };
  return brokenByComma(split as TextTree, source);
}

function scalarOf(scalar: Scalar, source: Source, place: Place): Tree {
  const [start, end] = scalar.range!;
  const text = String(scalar.value ?? '');
  if (text === '' && scalar.type === 'PLAIN') return { kind: 'empty', place };
  const written = source.text.slice(start, end);
  const body = bodyOf(written, text, scalar.type);
  const placeAt = (at: number): Place => source.placeOf(start + (body.exact ? body.skip + at : 0));
  return { kind: 'text', text, source: body.text, placeAt, place };
}

/**
 * The part of a scalar that an expression is read from. Line folds are white space to an expression, so the text of
 * the file itself can be read; only escapes force a look at the value, and then every place is the scalar's start.
 */
function bodyOf(
  written: string,
  value: string,
  type: Scalar.Type | undefined,
): { text: string; skip: number; exact: boolean } {
  if (type === 'BLOCK_FOLDED' || type === 'BLOCK_LITERAL') {
    const skip = written.indexOf('\n') + 1;
    return { text: written.slice(skip), skip, exact: true };
  }
  if (type === 'PLAIN') return { text: written, skip: 0, exact: true };
  const inner = written.slice(1, -1);
  const escaped = type === 'QUOTE_DOUBLE' ? inner.includes('\\') : inner.includes("''");
  return escaped ? { text: value, skip: 0, exact: false } : { text: inner, skip: 1, exact: true };
}

/** Whether a plain scalar of a flow collection was cut by a comma that belongs to a function call. */
function splitByComma(tree: Tree): boolean {
  if (tree.kind !== 'text') return false;
  return tree.source.split('(').length > tree.source.split(')').length;
}

function brokenByComma(tree: TextTree, source: Source): BrokenTree {
  source.problems.add(
    tree.place,
    `\`${tree.text}\` is cut off at a comma; inside { } and [ ] an expression with a comma or a [ needs quotes, as in value: "max(a, b)"`,
  );
  return { kind: 'broken', place: tree.place };
}
