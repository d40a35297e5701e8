import type { Place, SpecError } from './spec.js';

/** Collects what is wrong, so that one reading finds every error. */
export interface Problems {
  add: (place: Place, message: string) => void;
  /** Sorted by place, each once, at most one for a place. */
  all: () => SpecError[];
}

/** An empty collection. */
export function newProblems(): Problems {
  const errors: SpecError[] = [];
  return {
    add: (place, message) => {
      errors.push({ place, message });
    },
    all: () => sorted(errors),
  };
}

/** One line: `file:line:column: what is wrong, what was expected, the nearest valid name`. */
export function formatSpecError({ place, message }: SpecError): string {
  return `${place.file}:${place.line}:${place.column}: ${message}`;
}

/** Of several errors at one place the first is the cause, the others would be follow-ups. */
function sorted(errors: readonly SpecError[]): SpecError[] {
  const first = new Map<string, SpecError>();
  for (const error of errors) {
    const key = `${error.place.file}:${error.place.line}:${error.place.column}`;
    if (!first.has(key)) first.set(key, error);
  }
  return [...first.values()].sort(
    (a, b) =>
      (a.place.file < b.place.file ? -1 : a.place.file > b.place.file ? 1 : 0) ||
      a.place.line - b.place.line ||
      a.place.column - b.place.column,
  );
}
