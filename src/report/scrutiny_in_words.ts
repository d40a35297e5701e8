import type { RequirementRun, SpecRun } from '../verdict/run.js';
import { counted, formatCount, formatNumber } from './format_value.js';
import { oneLine } from './plain_text.js';
import { plantInWords } from './plant_in_words.js';

/** The counterexample nearest to nominal: "breaks with friction 37 % of the way to its upper bound (52.4 N*m*s/rad); …". */
export function shrunkInWords({ shrunk }: Pick<RequirementRun, 'shrunk'>): string | undefined {
  if (!shrunk) return undefined;
  const isNominal = shrunk.parameters.every(({ moved }) => moved === 0);
  return isNominal ? 'the nominal plant itself breaks it' : `breaks with ${plantInWords(shrunk)}`;
}

/** How far the bounds may grow: "1.38-fold", or "beyond 3-fold" where no break was found. */
export function reachShort({ reach }: Pick<RequirementRun, 'reach'>): string | undefined {
  if (!reach) return undefined;
  return reach.found
    ? `${formatNumber(reach.factor, 3)}-fold`
    : `beyond ${formatNumber(reach.factor, 3)}-fold`;
}

/** The reach as a sentence. */
export function reachInWords({ reach }: Pick<RequirementRun, 'reach'>): string | undefined {
  if (!reach) return undefined;
  const { factor, found } = reach;
  const fold = `${formatNumber(factor, 3)}-fold`;
  if (!found) return `no break was found with the bounds grown ${fold}`;
  if (factor === 0) return 'the nominal plant breaks';
  return factor <= 1
    ? `the bounds must shrink to ${fold} before no break is found`
    : `the bounds may grow ${fold} before a break is found`;
}

/** What moves the headroom by less than this from bound to bound, a twentieth of a point, does not matter. */
const leastEffect = 0.0005;

/** What matters most, in points of headroom from bound to bound: "friction 51.8, drive_lag 14.5". */
export function effectsInWords(
  { effects = [] }: Pick<RequirementRun, 'effects'>,
  most = 3,
): string | undefined {
  const named = effects.filter(({ headroom }) => headroom > leastEffect).slice(0, most);
  if (named.length === 0) return undefined;
  return named.map(({ name, headroom }) => `${oneLine(name)} ${formatNumber(headroom * 100, 3)}`).join(', ');
}

/** What a proof over the whole box came to, or why there is none. */
export function proofInWords({ proof }: Pick<RequirementRun, 'proof'>): string | undefined {
  switch (proof?.kind) {
    case undefined:
      return undefined;
    case 'proved':
      return `proved for every plant within the bounds (${counted(proof.boxes, 'box', 'boxes')})`;
    case 'refuted':
      return 'refuted by a plant within the bounds';
    case 'open':
      return proof.boxes === 0
        ? `not tried: ${oneLine(proof.why)}`
        : `open on ${formatNumber(proof.openShare * 100, 2)} % of the bounds (${counted(proof.boxes, 'box', 'boxes')}): ${oneLine(proof.why)}`;
  }
}

/** What searching, shrinking and reach took: "search 1,400, reach 318 runs of one requirement". */
export function effortInWords({ effort }: Pick<SpecRun, 'effort'>): string | undefined {
  if (!effort) return undefined;
  const parts = [
    ['search', effort.searched],
    ['shrinking', effort.shrinking],
    ['reach', effort.reach],
  ] as const;
  const used = parts.filter(([, runs]) => runs > 0).map(([name, runs]) => `${name} ${formatCount(runs)}`);
  return used.length === 0 ? undefined : `${used.join(', ')} runs of one requirement`;
}

/** One line for a spec on each of: reach, what matters most, proofs. */
export function scrutinyLines({ requirements }: Pick<SpecRun, 'requirements'>): string[] {
  const line = (
    title: string,
    of: (one: RequirementRun) => string | undefined,
    between: string,
  ): string[] => {
    const said = saidOnce(requirements, of);
    return said.length === 0 ? [] : [`${title}: ${said.join(between)}`];
  };
  return [
    ...line('reach of the bounds', reachShort, ', '),
    ...line('what matters most, in points of headroom', (one) => effectsInWords(one, 2), '; '),
    ...line('proof', proofInWords, '; '),
  ];
}

/** What is said of each requirement, with the names of all of which the same is said before it. */
function saidOnce(
  requirements: readonly RequirementRun[],
  of: (one: RequirementRun) => string | undefined,
): string[] {
  const names = new Map<string, string[]>();
  for (const one of requirements) {
    const words = of(one);
    if (words !== undefined) names.set(words, [...(names.get(words) ?? []), oneLine(one.name)]);
  }
  return [...names].map(([words, said]) => `${inARow(said)} ${words}`);
}

/** "A", "A and B", "A, B and C". */
function inARow(names: readonly string[]): string {
  const last = names[names.length - 1];
  return names.length === 1 ? last : `${names.slice(0, -1).join(', ')} and ${last}`;
}
