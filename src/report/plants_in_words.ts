import type { SpecRun } from '../verdict/run.js';
import { formatCount } from './format_value.js';

/** Why plants are tried, in words; an origin that is not here is written as it is. */
const words: Readonly<Record<string, string>> = {
  saved: 'bad ones of earlier runs',
  single: 'with one parameter at a bound',
  corner: 'corners',
  spread: 'spread evenly',
  edge_biased: 'near edges',
  screening: 'to see which parameters matter',
  searched: 'found by the search for the worst',
};

/** How many plants a spec was tried on, whatever for. */
export function plantsTried({ plants }: Pick<SpecRun, 'plants'>): number {
  return Object.values(plants).reduce((sum, count) => sum + count, 0);
}

/** The plants by why they were tried: "1 nominal, 32 corners, 1,000 independent". */
export function plantsInWords(plants: SpecRun['plants']): string {
  return Object.entries(plants)
    .filter(([, count]) => count > 0)
    .map(([origin, count]) => `${formatCount(count)} ${words[origin] ?? origin.replaceAll('_', ' ')}`)
    .join(', ');
}
