import type { JudgedPlant, ParameterValue } from '../verdict/run.js';
import { formatNumber, formatValue } from './format_value.js';
import { oneLine } from './plain_text.js';

/** A parameter's value in its own unit: "10 N*m*s/rad". */
export function parameterValueText({ value, unit }: Pick<ParameterValue, 'value' | 'unit'>): string {
  return formatValue(value, { unit, inDecibels: false });
}

/** How far a parameter is moved: "at its lower bound", "63 % of the way to its upper bound", "nominal". */
export function moveInWords(moved: number): string {
  if (moved === 0) return 'nominal';
  const bound = moved < 0 ? 'lower bound' : 'upper bound';
  const size = Math.abs(moved);
  if (size >= 1) return `at its ${bound}`;
  if (size > 0.995) return `just short of its ${bound}`;
  if (size < 0.005) return `less than 1 % of the way to its ${bound}`;
  return `${formatNumber(size * 100, 2)} % of the way to its ${bound}`;
}

/**
 * A plant as a person would tell it, what moved most first: "friction at its lower bound (10 N*m*s/rad), drive 63 % of
 * the way to its upper bound (191 N*m); nothing else moved". At most `most` parameters are named.
 */
export function plantInWords({ parameters }: Pick<JudgedPlant, 'parameters'>, most = 8): string {
  const own = parameters.filter(({ derived }) => !derived);
  const moved = own
    .filter((parameter) => parameter.moved !== 0)
    .sort((a, b) => Math.abs(b.moved) - Math.abs(a.moved));
  if (moved.length === 0) return 'the nominal plant';
  const named = moved
    .slice(0, most)
    .map((one) => `${oneLine(one.name)} ${moveInWords(one.moved)} (${parameterValueText(one)})`)
    .join(', ');
  return named + rest(moved.length - most, own.length - moved.length);
}

function rest(unnamed: number, unmoved: number): string {
  if (unnamed > 0) return `; ${unnamed} more moved less`;
  return unmoved > 0 ? '; nothing else moved' : '';
}
