import type { Reference } from './reference.js';

/** The machine code of one function of the control law. */
export interface LawCode {
  name: string;
  /** Bytes. */
  size: number;
  /** SHA-256 of what counts of its bytes. */
  digest: string;
}

/**
 * Why the control law cannot be taken for the latched one, in words, one for each function that changed and one for those that
 * the reference has no digest of, since they may have changed too; empty where it is the same.
 *
 * @param reference undefined where there is none.
 */
export function lawChanges(reference: Reference | undefined, law: readonly LawCode[]): string[] {
  const latched = ({ name }: LawCode) =>
    reference && Object.hasOwn(reference.law, name) ? reference.law[name] : undefined;
  const unknown = law.filter((one) => !latched(one)).map(({ name }) => name);
  const changed = law.flatMap((one) => {
    const [{ name, size, digest }, then] = [one, latched(one)];
    if (!then || then.digest === digest) return [];
    const sizes = then.size === size ? `still ${size} bytes` : `${then.size} → ${size} bytes`;
    return [`the machine code of ${name} is not the latched one (${sizes})`];
  });
  if (unknown.length === 0) return changed;
  return [...changed, `the latched reference knows no machine code of ${unknown.join(', ')}`];
}

/** More words are counted, not listed. */
const mostWords = 8;

/** What changed in how the compilers were called: "gone -Os, new -O2"; empty where nothing did. */
export function compilerChanges(then: readonly string[], now: readonly string[]): string {
  const words = (all: readonly string[]): Set<string> => new Set(all.flatMap((line) => line.split(/\s+/)));
  const [old, young] = [words(then), words(now)];
  return [
    ...listed(
      'gone',
      [...old].filter((word) => !young.has(word)),
    ),
    ...listed(
      'new',
      [...young].filter((word) => !old.has(word)),
    ),
  ].join(', ');
}

function listed(what: string, words: readonly string[]): string[] {
  if (words.length === 0) return [];
  const left = words.length - mostWords;
  return [`${what} ${words.slice(0, mostWords).join(' ')}${left > 0 ? ` and ${left} more` : ''}`];
}
