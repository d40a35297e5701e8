import type { CheckContext } from './check_context.js';
import { isPlain, plainNumber, powerOf } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import { type FunctionDescription, functionNamed } from './functions.js';
import { missingFunction } from './missing_name.js';
import { type Checked, toOneScale, toScale, unknown } from './scales.js';
import type { Place } from './spec.js';

/** Checks a call whose arguments are checked: the function, their number, their dimensions. */
export function checkCall(name: string, given: Checked[], place: Place, context: CheckContext): Checked {
  if (name === 'before') return before(given, place, context);
  const description = functionNamed(name);
  if (description === undefined) {
    context.problems.add(place, missingFunction(name, context.names.entries.get(name)));
    context.names.incomplete = true;
    return unknown(place);
  }
  if (given.length < description.least || given.length > description.most) {
    context.problems.add(place, wrongCount(description, given.length));
    return unknown(place);
  }
  return byRule(description, given, place, context);
}

function byRule(
  description: FunctionDescription,
  given: Checked[],
  place: Place,
  context: CheckContext,
): Checked {
  const built = (parts: Checked[], result: Pick<Checked, 'dimension' | 'scale'>): Checked => ({
    expression: {
      kind: 'call',
      name: description.name,
      arguments: parts.map((part) => part.expression),
      place,
    },
    literal: false,
    ...result,
  });
  const [first] = given;
  switch (description.rule) {
    case 'plain':
      return built([plain(description.name, first, context)], { dimension: plainNumber, scale: 1 });
    case 'keep':
      return built(given, { dimension: first.dimension, scale: first.scale });
    case 'sign':
      return built(given, { dimension: plainNumber, scale: 1 });
    case 'root':
      return built(given, {
        dimension: first.dimension && powerOf(first.dimension, 0.5),
        scale: Math.sqrt(first.scale),
      });
    case 'same': {
      const parts = alike(given, place, context);
      return built(parts, commonUnit(parts));
    }
    case 'choice': {
      const branches = alike(given.slice(1), place, context);
      return built([plain('the condition of if', first, context), ...branches], commonUnit(branches));
    }
  }
}

function before(given: Checked[], place: Place, context: CheckContext): Checked {
  if (!context.room.mayLookBack) {
    context.problems.add(
      place,
      `before(…) is the value at the previous sampling instant, which only controllers have; this is ${context.room.words}`,
    );
    return unknown(place);
  }
  if (given.length !== 1) {
    context.problems.add(place, `before takes 1 argument, but ${given.length} are given`);
    return unknown(place);
  }
  const [of] = given;
  return {
    ...of,
    literal: false,
    adapt: undefined,
    expression: { kind: 'before', of: of.expression, place },
  };
}

/** A plain number without a scale, as transcendental functions need it. */
function plain(what: string, of: Checked, context: CheckContext): Checked {
  const { place } = of.expression;
  if (of.dimension !== undefined && !isPlain(of.dimension) && !of.zero) {
    context.problems.add(place, `${what} needs a plain number, but this is ${formatDimension(of.dimension)}`);
    return of;
  }
  return toScale(of, 1, place, context);
}

/** Brings all to the dimension and scale of the first that is not a literal. */
function alike(given: Checked[], place: Place, context: CheckContext): Checked[] {
  const lead = given.find((one) => !one.literal) ?? given.find((one) => !one.zero) ?? given[0];
  return given.map((one) => (one === lead ? one : toOneScale(lead, one, 'choose', place, context)[1]));
}

function commonUnit(parts: Checked[]): Pick<Checked, 'dimension' | 'scale'> {
  const lead = parts.find((part) => !part.zero) ?? parts[0];
  const known = parts.every((part) => part.dimension !== undefined);
  return { dimension: known ? lead.dimension : undefined, scale: lead.scale };
}

function wrongCount({ name, least, most }: FunctionDescription, given: number): string {
  const expected = least === most ? `${least}` : `${least} to ${most}`;
  return `${name} takes ${expected} argument${expected === '1' ? '' : 's'}, but ${given} ${given === 1 ? 'is' : 'are'} given`;
}
