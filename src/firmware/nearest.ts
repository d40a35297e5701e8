import { distance } from 'fastest-levenshtein';

/** More names than this are not compared: an error must not take long. */
const mostCompared = 200_000;

/**
 * Up to three names that someone may have meant, nearest first: few letters apart, or the wanted name is a part of them.
 */
export function nearestNames(wanted: string, known: Iterable<string>): string[] {
  const lower = wanted.toLowerCase();
  const most = Math.max(2, Math.floor(wanted.length / 3));
  const scored = new Map<string, number>();
  let compared = 0;
  for (const name of known) {
    if (++compared > mostCompared) break;
    if (scored.has(name) || name.length > 200) continue;
    const score = scoreOf(lower, name.toLowerCase(), most);
    if (score <= most) scored.set(name, score);
  }
  return [...scored]
    .sort((a, b) => a[1] - b[1] || a[0].localeCompare(b[0], 'en'))
    .slice(0, 3)
    .map(([name]) => name);
}

function scoreOf(wanted: string, name: string, most: number): number {
  if (wanted.length >= 3 && name.includes(wanted)) return 1;
  if (Math.abs(name.length - wanted.length) > most) return most + 1;
  return distance(wanted, name);
}
