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
 * Why the control law cannot be taken for the latched one, in words, one for each function; empty where it is the same. A
 * function without a digest in the reference may have changed too.
 *
 * @param reference undefined where there is none.
 */
export function lawChanges(reference: Reference | undefined, law: readonly LawCode[]): string[] {
  return law.flatMap(({ name, size, digest }) => {
    const then = reference && Object.hasOwn(reference.law, name) ? reference.law[name] : undefined;
    if (!then) return [`the latched reference knows no machine code of ${name}`];
    if (then.digest === digest) return [];
    const sizes = then.size === size ? `still ${size} bytes` : `${then.size} → ${size} bytes`;
    return [`the machine code of ${name} is not the latched one (${sizes})`];
  });
}

/** What changed in how the compilers were called: "-Os is gone, -O2 is new"; empty where nothing did. */
export function compilerChanges(then: readonly string[], now: readonly string[]): string {
  const words = (all: readonly string[]): Set<string> => new Set(all.flatMap((line) => line.split(/\s+/)));
  const [old, young] = [words(then), words(now)];
  const gone = [...old].filter((word) => !young.has(word)).map((word) => `${word} is gone`);
  const added = [...young].filter((word) => !old.has(word)).map((word) => `${word} is new`);
  return [...gone, ...added].join(', ');
}
