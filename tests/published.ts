import { readFileSync } from 'node:fs';
import { expect } from 'vitest';

/** A figure of a published case: a number, `infinite`, a list (of lists), or true/false. */
export type Figure = number | boolean | string | Figure[];

export interface ExpectedFigure {
  value: Figure;
  unit: string;
  tolerance_relative?: number;
  tolerance_absolute?: number;
}

/** One case of reference/published/values.json; its README.md says what each field means. */
export interface PublishedCase {
  id: string;
  group: string;
  title: string;
  source: string;
  // The inputs differ from case to case: each test names the type of what it takes.
  // biome-ignore lint/suspicious/noExplicitAny: see above
  given: Record<string, any>;
  expect: Record<string, ExpectedFigure>;
}

const file = new URL('../reference/published/values.json', import.meta.url);
const cases: PublishedCase[] = JSON.parse(readFileSync(file, 'utf8'));
const byId = new Map(cases.map((entry) => [entry.id, entry]));

/** All cases of one group, for tests that treat them alike. */
export function publishedGroup(group: string): PublishedCase[] {
  return cases.filter((entry) => entry.group === group);
}

/** The case with this id. @throws when there is none. */
export function publishedCase(id: string): PublishedCase {
  const found = byId.get(id);
  if (!found) throw new Error(`there is no published case ${id}; there are ${[...byId.keys()].join(', ')}`);
  return found;
}

/**
 * Checks a computed figure against a published one at the case's own tolerance. Lists are compared entry by entry.
 * @param widened a wider tolerance of the same kind, for a reason that stands next to the check.
 */
export function expectPublished(id: string, name: string, actual: Figure, widened?: number): void {
  const figure = publishedCase(id).expect[name];
  if (!figure) throw new Error(`published case ${id} has no figure ${name}`);
  compare(`${id} ${name}`, actual, figure.value, figure, widened);
}

function compare(
  what: string,
  actual: Figure,
  value: Figure,
  figure: ExpectedFigure,
  widened: number | undefined,
): void {
  if (Array.isArray(value)) {
    expect(Array.isArray(actual), `${what} is a list`).toBe(true);
    const list = actual as Figure[];
    expect(list.length, `${what}: number of entries`).toBe(value.length);
    value.forEach((entry, i) => {
      compare(`${what}[${i}]`, list[i], entry, figure, widened);
    });
    return;
  }
  if (value === 'infinite' || typeof value !== 'number') {
    expect(actual, what).toBe(value === 'infinite' ? Number.POSITIVE_INFINITY : value);
    return;
  }
  const relative = figure.tolerance_relative;
  const tolerance =
    relative !== undefined
      ? (widened ?? relative) * Math.abs(value)
      : (widened ?? figure.tolerance_absolute ?? 0);
  const error = Math.abs((actual as number) - value);
  expect(error, `${what}: ${actual} against ${value}, tolerance ${tolerance}`).toBeLessThanOrEqual(tolerance);
}
