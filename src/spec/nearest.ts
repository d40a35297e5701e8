import { distance } from 'fastest-levenshtein';

/**
 * The valid name nearest to a mistyped one, or undefined where none is near: at most one edit for every three
 * letters (at least one), capitals and underscores not counted at full weight.
 */
export function nearestName(mistyped: string, valid: Iterable<string>): string | undefined {
  let best: { name: string; edits: number } | undefined;
  const plain = withoutStyle(mistyped);
  for (const name of valid) {
    const edits = Math.min(distance(mistyped, name), distance(plain, withoutStyle(name)) + 0.5);
    if (edits > allowedEdits(mistyped, name)) continue;
    if (best === undefined || edits < best.edits) best = { name, edits };
  }
  return best?.name;
}

/** Words for the end of an error: the nearest name, or else the list of what is valid where that is short. */
export function suggestion(mistyped: string, valid: readonly string[]): string {
  const nearest = nearestName(mistyped, valid);
  if (nearest !== undefined) return `; did you mean \`${nearest}\`?`;
  if (valid.length === 0 || valid.length > 12) return '';
  return `; valid here: ${valid.join(', ')}`;
}

/** Long junk is not compared at all, so that the cost stays bounded. */
function allowedEdits(a: string, b: string): number {
  if (Math.max(a.length, b.length) > 60) return -1;
  return Math.max(1, Math.min(a.length, b.length) / 3);
}

function withoutStyle(name: string): string {
  return name.toLowerCase().replaceAll(/[_\s-]/g, '');
}
