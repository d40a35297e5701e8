import { closest, distance } from 'fastest-levenshtein';

/** "; did you mean 'check'?" where one of the words is near enough to have been meant, or nothing. */
export function nearestOf(word: string, words: readonly string[]): string {
  if (words.length === 0) return '';
  const nearest = closest(word, words);
  return distance(word, nearest) <= Math.max(2, word.length / 3)
    ? `; did you mean '${nearest}'?`
    : `; there are ${words.join(', ')}`;
}
