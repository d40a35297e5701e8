import type { CheckContext } from './check_context.js';
import { functionNamed, functions } from './functions.js';
import { aKind, type NameEntry, type NameKind, nameFault } from './names.js';
import { nearestName } from './nearest.js';
import { parseUnit } from './units.js';

/** Why a name means nothing where it stands: hidden there, mistyped, or not defined at all. */
export function missingName(name: string, entry: NameEntry | undefined, context: CheckContext): string {
  if (entry !== undefined) return hiddenName(entry, context);
  if (functionNamed(name) !== undefined || name === 'before') {
    return `\`${name}\` is a function: its arguments follow in parentheses`;
  }
  if (name === 'time') return '`time` cannot be used in an expression; what changes over time is an input';
  const visible = [...context.names.entries.values()].filter(({ kind }) => context.room.sees.includes(kind));
  const nearest = nearestName(
    name,
    visible.map((known) => known.name),
  );
  if (nearest !== undefined) return `no such name \`${name}\`; did you mean \`${nearest}\`?`;
  if (nameFault(name) !== undefined || isUnit(name)) {
    return `no such name \`${name}\`; a quantity stands in parentheses of its own, as in (0.5 mrad/s)`;
  }
  return `no such name \`${name}\`; ${context.room.words} sees ${list(context.room.sees)}`;
}

/** An unknown function, with the nearest known one. */
export function missingFunction(name: string, entry: NameEntry | undefined): string {
  if (entry !== undefined)
    return `\`${name}\` is ${aKind(entry.kind)}, not a function; a product is written with *`;
  const known = functions.map((description) => description.name);
  const nearest = nearestName(name, [...known, 'before']);
  const end = nearest === undefined ? `; known: ${known.join(', ')}` : `; did you mean \`${nearest}\`?`;
  return `no such function \`${name}\`${end}`;
}

function hiddenName(entry: NameEntry, context: CheckContext): string {
  const { room } = context;
  const what = `\`${entry.name}\` is ${aKind(entry.kind)}`;
  const sees = `${room.words} sees ${list(room.sees)}`;
  if (entry.kind === 'plant signal' && room.sees.includes('sensor')) {
    return `${what}, and a controller cannot see the true plant: let it read a sensor; ${sees}`;
  }
  if (entry.kind === 'parameter') return `${what}, which the firmware does not know; ${sees}`;
  if (entry.kind === 'coefficient') return `${what} of the firmware, which the plant does not know; ${sees}`;
  return `${what}; ${sees}`;
}

function isUnit(name: string): boolean {
  return parseUnit(name).kind === 'unit';
}

function list(kinds: readonly NameKind[]): string {
  const plural = kinds.map((kind) => `${kind}s`);
  return plural.length === 1 ? plural[0] : `${plural.slice(0, -1).join(', ')} and ${plural.at(-1)}`;
}
