import { suggestion } from './nearest.js';
import type { Reading } from './reading.js';
import type { Requirement, Waiver } from './spec.js';
import { childOf, itemsOf, type TextTree, type Tree, textOf } from './tree.js';

/** `waivers:` broken requirements that are let through for a time, each by name, with a reason and a last day. */
export function readWaivers(
  tree: Tree | undefined,
  requirements: readonly Requirement[],
  reading: Reading,
): Waiver[] {
  const lines = new Map<string, number>();
  return itemsOf(tree).flatMap((item) => {
    const [requirement, reason, until] = ['requirement', 'reason', 'until'].map((key) =>
      textOf(childOf(item, key)),
    );
    if (!requirement || !reason || !until) return [];
    checkName(requirement, requirements, lines, reading);
    if (reason.text.trim() === '')
      reading.problems.add(reason.place, 'a waiver needs a reason in plain words');
    checkDate(until, reading);
    return [
      { requirement: requirement.text, reason: reason.text, until: until.text, place: requirement.place },
    ];
  });
}

function checkName(
  { text, place }: TextTree,
  requirements: readonly Requirement[],
  lines: Map<string, number>,
  reading: Reading,
): void {
  const names = requirements.map(({ name }) => name);
  if (!names.includes(text)) {
    reading.problems.add(place, `unknown requirement \`${text}\`${suggestion(text, names)}`);
  }
  const earlier = lines.get(text);
  if (earlier === undefined) lines.set(text, place.line);
  else reading.problems.add(place, `the waiver of \`${text}\` is already at line ${earlier}; one is enough`);
}

/** A day of the calendar as ISO 8601 writes it. */
function checkDate({ text, place }: TextTree, reading: Reading): void {
  const isShaped = /^\d{4}-\d{2}-\d{2}$/.test(text);
  const date = new Date(`${text}T00:00:00Z`);
  if (isShaped && !Number.isNaN(date.getTime()) && date.toISOString().startsWith(text)) return;
  reading.problems.add(place, `\`${text}\` is no date; the last day of a waiver is written as 2027-03-01`);
}
