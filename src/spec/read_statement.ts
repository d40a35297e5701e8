import { timeDimension } from './dimension.js';
import { readComparison, type ScaleGiven } from './read_comparison.js';
import { readQuantity } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Place } from './spec.js';
import type { Statement, StatementWindow } from './statement.js';
import { childOf, entriesOf, entryOf, itemsOf, type MapEntry, type MapTree, type Tree } from './tree.js';

/** The keys that say what kind of statement a mapping is, in the order in which they are looked for. */
const kinds = ['that', 'throughout', 'at_some_time', 'holds_up_to', 'when', 'all_of', 'one_of'] as const;
type Kind = (typeof kinds)[number];

/** Which keys may stand beside each. */
const beside: Record<Kind, readonly string[]> = {
  that: ['scale'],
  throughout: ['from', 'to', 'scale'],
  at_some_time: ['from', 'to', 'scale'],
  holds_up_to: ['holds', 'from', 'to', 'scale'],
  when: ['holds', 'scale'],
  all_of: ['scale'],
  one_of: ['scale'],
};

/**
 * Reads what a requirement says of signals over time: a comparison such as `angle < 2 mrad`, or a mapping with one of
 * `throughout`, `at_some_time`, `holds_up_to`, `when`, `all_of`, `one_of`. Undefined where it is wrong (then reported).
 * @param scales what `scale:` gives further out, the innermost last.
 * @param ahead whether it is looked at at several times, where nothing can be said `up to` something else.
 */
export function readStatement(
  tree: Tree | undefined,
  reading: Reading,
  scales: readonly ScaleGiven[] = [],
  ahead = false,
): Statement | undefined {
  if (tree?.kind === 'text') return readComparison(tree, scales, reading);
  if (tree?.kind !== 'map') return undefined;
  const given = kinds.filter((key) => entryOf(tree, key) !== undefined);
  if (given.length !== 1) {
    reportCount(tree, given, reading);
    return undefined;
  }
  const [kind] = given;
  for (const { key, keyPlace } of entriesOf(tree)) {
    if (key === kind || beside[kind].includes(key)) continue;
    reading.problems.add(
      keyPlace,
      `\`${key}\` has no meaning beside \`${kind}\`; expected ${beside[kind].join(', ')}`,
    );
  }
  return readKind(kind, tree, reading, [...scales, ...readScale(tree, reading)], ahead);
}

function reportCount(tree: MapTree, given: readonly Kind[], reading: Reading): void {
  if (reading.strange.has(tree)) return;
  const found =
    given.length === 0 ? 'says nothing' : `says ${given.map((key) => `\`${key}\``).join(' and ')}`;
  reading.problems.add(tree.place, `this statement ${found}; expected one of ${kinds.join(', ')}`);
}

function readScale(tree: MapTree, reading: Reading): ScaleGiven[] {
  const quantity = readQuantity(childOf(tree, 'scale'), undefined, '`scale`', reading);
  if (quantity === undefined) return [];
  if (quantity.value <= 0) reading.problems.add(quantity.place, '`scale` must be above 0');
  return [{ value: quantity.value, dimension: quantity.unit.dimension }];
}

function readKind(
  kind: Kind,
  tree: MapTree,
  reading: Reading,
  scales: readonly ScaleGiven[],
  ahead: boolean,
): Statement | undefined {
  const entry = entryOf(tree, kind)!;
  const place = entry.keyPlace;
  const inner = (at: Tree | undefined, later: boolean): Statement | undefined =>
    readStatement(at, reading, scales, later);
  switch (kind) {
    case 'that':
      return inner(entry.value, ahead);
    case 'throughout':
    case 'at_some_time': {
      const that = inner(entry.value, true);
      const window = readWindow(tree, reading);
      return that && { kind, that, place, ...window };
    }
    case 'holds_up_to':
      return readUpTo(tree, entry, reading, scales, ahead);
    case 'when': {
      const [when, holds] = [
        inner(entry.value, ahead),
        inner(needed(tree, 'holds', 'what holds then', place, reading), ahead),
      ];
      return when && holds && { kind, when, holds, place };
    }
    case 'all_of':
    case 'one_of': {
      const statements = itemsOf(entry.value).flatMap((item) => inner(item, ahead) ?? []);
      if (entry.value.kind === 'list' && entry.value.items.length > 0) return { kind, statements, place };
      reading.problems.add(entry.value.place, `\`${kind}\` is a list of statements in brackets`);
      return undefined;
    }
  }
}

function readUpTo(
  tree: MapTree,
  { value, keyPlace: place }: MapEntry,
  reading: Reading,
  scales: readonly ScaleGiven[],
  ahead: boolean,
): Statement | undefined {
  if (ahead) {
    const why =
      'inside `throughout`, `at_some_time` or another `holds_up_to` it would be looked at at many times';
    reading.problems.add(place, `\`holds_up_to\` stands outermost, or in all_of, one_of and when: ${why}`);
  }
  const kept = needed(tree, 'holds', 'what holds up to then', place, reading);
  const holds = readStatement(kept, reading, scales, true);
  const upTo = readStatement(value, reading, scales, true);
  const window = readWindow(tree, reading);
  return holds && upTo && { kind: 'holds_up_to', holds, upTo, place, ...window };
}

function needed(
  tree: MapTree,
  key: string,
  meaning: string,
  place: Place,
  reading: Reading,
): Tree | undefined {
  const found = childOf(tree, key);
  if (found === undefined) reading.problems.add(place, `this statement needs \`${key}:\`, ${meaning}`);
  return found;
}

function readWindow(tree: MapTree, reading: Reading): StatementWindow {
  const time = (key: string) => readQuantity(childOf(tree, key), timeDimension, `\`${key}\``, reading);
  const [from, to] = [time('from'), time('to')];
  if (from !== undefined && from.value < 0) reading.problems.add(from.place, '`from` must be 0 or more');
  if (to !== undefined && !(to.value > (from?.value ?? 0))) {
    reading.problems.add(to.place, '`to` must be later than `from`');
  }
  return { from: from?.value ?? 0, to: to?.value };
}
