import type { StoredRemark } from '../firmware/coefficient.js';
import type { CoefficientRead, SpecRun } from '../verdict/run.js';
import { indexText } from './coefficient_table.js';
import { counted } from './format_value.js';
import { oneLine, shortened } from './plain_text.js';

const mostOfAName = 48;
const mostWarnings = 10;

/** What is odd about one number, and about several. */
const words: Record<StoredRemark, [one: string, several: string]> = {
  not_a_number: ['is not a number', 'are not numbers'],
  infinite: ['is infinite', 'are infinite'],
  denormal: [
    'is denormal, smaller than its format holds in full precision',
    'are denormal, smaller than their format holds in full precision',
  ],
  erased: ['is the pattern of erased flash, all ones', 'are the pattern of erased flash, all ones'],
};

/** What is odd about a spec's run though nothing of it is broken: about its stored numbers, and requirements that guard nothing. */
export function warningsInWords({
  coefficients,
  requirements,
}: Pick<SpecRun, 'coefficients' | 'requirements'>): string[] {
  const idle = requirements.flatMap(({ name, guardsNothing }) =>
    guardsNothing === undefined
      ? []
      : [`warning: ${shortened(oneLine(name), mostOfAName)} guards nothing: ${oneLine(guardsNothing)}`],
  );
  const left = idle.length - mostWarnings;
  const shown = left > 0 ? [...idle.slice(0, mostWarnings), `warning: and ${left} more guard nothing`] : idle;
  return [...remarksInWords(coefficients), ...shown];
}

/** A line for each coefficient, and each thing that is odd about its stored bits: hardly any of them is meant. */
export function remarksInWords(coefficients: readonly CoefficientRead[]): string[] {
  const all = coefficients.flatMap(remarksOf);
  const left = all.length - mostWarnings;
  const shown = left > 0 ? [...all.slice(0, mostWarnings), `and ${counted(left, 'more warning')}`] : all;
  return shown.map((line) => `warning: ${line}`);
}

function remarksOf({ name, coefficient }: CoefficientRead): string[] {
  const { elements, shape } = coefficient;
  return (Object.keys(words) as StoredRemark[]).flatMap((remark) => {
    const odd = elements.flatMap((element, at) => (element.remark === remark ? [at] : []));
    if (odd.length === 0) return [];
    const [first] = odd;
    const shown = shortened(oneLine(name), mostOfAName);
    const where = shown + indexText(first, shape);
    const [one, several] = words[remark];
    const stored = `stored ${elements[first].stored}`;
    if (odd.length === 1) return [`${where} ${one} (${stored})`];
    const count =
      odd.length === elements.length ? `all ${counted(odd.length, 'number')}` : counted(odd.length, 'number');
    return [`${count} of ${shown} ${several} (${where}, ${stored})`];
  });
}
