import { FirmwareError, quoted } from './failure.js';

/** One step from a variable into it. */
export type PathStep =
  | { kind: 'member'; name: string }
  | { kind: 'index'; index: number }
  | { kind: 'follow'; name: string };

/** A variable and the way into it, as `file.c:ns::type::name.member[3]->other`. */
export interface CoefficientPath {
  text: string;
  /** The text up to the first step. */
  root: string;
  /** The source file that tells variables of the same name apart. */
  file: string | undefined;
  /** Namespaces, classes or the function around it, outermost first. */
  scopes: string[];
  name: string;
  steps: PathStep[];
}

/**
 * Takes a path apart.
 * @throws FirmwareError `bad_request` which shows where it stops to make sense
 */
export function parsePath(text: string): CoefficientPath {
  const trimmed = text.trim();
  const file = /^([^:<>[\]]+[^:]):(?!:)/.exec(trimmed);
  const rest = file ? trimmed.slice(file[0].length) : trimmed;
  const rootEnd = endOfRoot(rest);
  // What an anonymous namespace holds is named without it.
  const parts = splitScopes(rest.slice(0, rootEnd)).filter((part) => part !== '(anonymous namespace)');
  const name = parts.pop() ?? '';
  if (name === '' || parts.some((part) => part === '') || /\s/.test(name.split('<')[0]))
    throw notAPath(text, rest === '' ? 'a name is missing' : `${quoted(rest)} does not begin with a name`);
  return {
    text: trimmed,
    root: trimmed.slice(0, trimmed.length - rest.length + rootEnd),
    file: file?.[1],
    scopes: parts,
    name,
    steps: parseSteps(rest.slice(rootEnd), text),
  };
}

/** Where the variable's name ends: at the first `.`, `[` or `->` outside of template arguments. */
function endOfRoot(text: string): number {
  let depth = 0;
  for (let i = 0; i < text.length; i++) {
    const c = text[i];
    if (c === '-' && text[i + 1] === '>' && depth === 0) return i;
    if (c === '<' || c === '(') depth++;
    else if (c === '>' || c === ')') depth--;
    // A static variable of a function is called `taps.0` by some compilers.
    else if (depth === 0 && (c === '[' || (c === '.' && !/\d/.test(text[i + 1] ?? '')))) return i;
  }
  return text.length;
}

function splitScopes(text: string): string[] {
  const parts: string[] = [];
  let depth = 0;
  let start = 0;
  for (let i = 0; i < text.length; i++) {
    if (text[i] === '<' || text[i] === '(') depth++;
    else if (text[i] === '>' || text[i] === ')') depth--;
    else if (depth === 0 && text.startsWith('::', i)) {
      parts.push(text.slice(start, i).trim());
      start = i + 2;
      i++;
    }
  }
  parts.push(text.slice(start).trim());
  // A leading `::` is the global namespace.
  return parts.length > 1 && parts[0] === '' ? parts.slice(1) : parts;
}

function parseSteps(text: string, whole: string): PathStep[] {
  const steps: PathStep[] = [];
  const step = /\s*(?:\[\s*(0[xX][0-9a-fA-F]+|\d+)\s*\]|(\.|->)\s*([A-Za-z_$][\w$]*))/y;
  while (step.lastIndex < text.length) {
    const start = step.lastIndex;
    const found = step.exec(text);
    if (!found)
      throw notAPath(
        whole,
        `cannot go on at ${quoted(text.slice(start))}: expected .member, [index] or ->member`,
      );
    if (found[1] !== undefined) steps.push({ kind: 'index', index: Number(found[1]) });
    else steps.push({ kind: found[2] === '.' ? 'member' : 'follow', name: found[3] });
  }
  return steps;
}

function notAPath(text: string, trouble: string): FirmwareError {
  return new FirmwareError(
    'bad_request',
    `${quoted(text)} is no path to a coefficient: ${trouble}; an example is azimuth.gains.kp or notch[3]`,
  );
}
