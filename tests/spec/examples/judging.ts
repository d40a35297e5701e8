import { plantsNeeded, upperBoundOfShare } from '../../../src/perturb/binomial_bound.js';
import { parseUnit } from '../../../src/spec/units.js';
import { judge } from '../../../src/verdict/judge.js';
import { specOf } from '../../loop/spec_of.js';
import { valueOfFormula } from './formula.js';

/** How a limit and a measured value make a headroom. */
export interface HeadroomExample {
  unit: string;
  limit: string;
  value: number;
  /** In per cent. */
  formula: string;
}

/** One of each kind of limit. */
export const headroomExamples: readonly HeadroomExample[] = [
  { unit: '%', limit: 'at_most: 25 %', value: 16.3, formula: '100·(25 − 16.3)/25' },
  { unit: 'deg', limit: 'at_least: 40 deg', value: 38, formula: '100·(38 − 40)/40' },
  { unit: 'A', limit: 'between: [1 A, 2 A]', value: 1.25, formula: '100·(1.25 − 1)/0.5' },
  { unit: 'mV', limit: 'at_most: 0 mV, scale: 2 mV', value: -0.5, formula: '100·(0 + 0.5)/2' },
];

/** The headroom that pawl gives, %. */
export function headroomOf({ unit, limit, value }: HeadroomExample): number {
  const spec = specOf(`firmware: { image: a.elf, coefficients: { k: { at: k, unit: "${unit}" } } }
requirements: [{ name: R, measure: coefficient_value, of: k, ${limit} }]`);
  const [requirement] = spec.requirements;
  const judgement = judge(requirement, { kind: 'value', value: value * scaleOf(unit) });
  if (judgement.kind === 'unjudged') throw new Error(judgement.why);
  return 100 * judgement.headroom!;
}

function scaleOf(unit: string): number {
  const parsed = parseUnit(unit);
  if (parsed.kind === 'fault') throw new Error(parsed.message);
  return parsed.unit.scale;
}

/** The table of headrooms. */
export function headroomTable(): string {
  const rows = headroomExamples.map((example) => {
    const { unit, limit, value, formula } = example;
    const headroom = Number(valueOfFormula(formula).toPrecision(4));
    return `| \`${limit}\` | ${value} ${unit} | ${headroom} % | \`${formula}\` | ${headroom < 0 ? 'broken' : 'met'} |`;
  });
  return ['| limit | measured | headroom | by hand | verdict |', '|---|---|---|---|---|', ...rows].join('\n');
}

/** Random plants of which none breaks a requirement that holds for a share of them. */
export const shareExample = { share: 0.99, confidence: 0.95, plants: 299, formula: '0.05^(1/299)' };

/** The share that can be said to meet it, and how many plants are needed at least. */
export function shareClaimed({ share, confidence, plants }: typeof shareExample) {
  return {
    claimed: 1 - upperBoundOfShare(0, plants, confidence),
    needed: plantsNeeded(1 - share, confidence),
  };
}

/** The same in words. */
export function shareText(): string {
  const { share, confidence, plants, formula } = shareExample;
  const claimed = (100 * valueOfFormula(formula)).toPrecision(4);
  return `With \`holds_for: ${100 * share} %\` and a confidence of ${100 * confidence} %, ${plants} random plants that all meet a requirement are just enough: at least ${claimed} % of all plants meet it, \`${formula}\` (Clopper and Pearson 1934).`;
}
