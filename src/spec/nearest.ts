import { distance } from 'fastest-levenshtein';

/**
 * The valid name nearest to a mistyped one, or undefined where none is near: at most one edit for every three
 * letters begun, capitals and underscores not counted at full weight.
 */
export function nearestName(mistyped: string, valid: Iterable<string>): string | undefined {
  let best: { name: string; edits: number } | undefined;
  const plain = withoutStyle(mistyped);
  for (const name of valid) {
    const allowed = allowedEdits(mistyped, name);
    if (allowed < 0) continue;
    const edits = Math.min(distance(mistyped, name), distance(plain, withoutStyle(name)) + 0.5);
    if (edits > allowed) continue;
    if (best === undefined || edits < best.edits) best = { name, edits };
  }
  return best?.name;
}

/** Words for the end of an error: the nearest name, or else the list of what is valid where that is short. */
export function suggestion(mistyped: string, valid: readonly string[]): string {
  const nearest = nearestName(mistyped, valid);
  if (nearest !== undefined) return `; did you mean \`${nearest}\`?`;
  if (valid.length === 0 || valid.length > 14) return '';
  return `; valid here: ${valid.join(', ')}`;
}

/** Long junk is not compared at all, so that the cost stays bounded. */
function allowedEdits(a: string, b: string): number {
  const [shorter, longer] = [Math.min(a.length, b.length), Math.max(a.length, b.length)];
  if (longer > 60) return -1;
  // Of single letters any is one edit from any other: there only the capital counts as near.
  return longer === 1 ? 0.5 : Math.ceil(shorter / 3);
}

function withoutStyle(name: string): string {
  return name.toLowerCase().replaceAll(/[_\s-]/g, '');
}
