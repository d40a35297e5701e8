import type { Complex } from '../linear/complex.js';
import type { LoopMargins } from '../linear/margins.js';
import { formatHeadroom, formatResultShort } from '../report/format_value.js';
import type { MarginBracket, ModulusBracket } from '../report/index.js';
import { limitNumbers } from '../report/requirement_in_words.js';
import type { JudgedPlant, RequirementRun } from '../verdict/run.js';

/** A loop's margins and its response over angular frequency (rad/s). */
export interface MarginsFound {
  margins: LoopMargins;
  response: (angularFrequency: number) => Complex;
}

/** On the two curves that are drawn: the nominal plant, and the worst one of the plot's first requirement. */
export type FoundOnCurves = Record<'nominal' | 'worst', MarginsFound>;

type Which = keyof FoundOnCurves;

/**
 * The bracket of a requirement on a gain, phase or delay margin. It stands on the worst curve where that is the
 * requirement's own worst plant, else on the nominal curve with the nominal plant's numbers.
 */
export function marginBrackets(run: RequirementRun, found: FoundOnCurves): MarginBracket[] {
  if (run.measure === 'gain_margin') return gainBracket(run, found);
  if (run.measure === 'phase_margin' || run.measure === 'delay_margin') return phaseBracket(run, found);
  return [];
}

function gainBracket(run: RequirementRun, found: FoundOnCurves): MarginBracket[] {
  const curve = curveOf(run, ({ gainMargin }) => gainMargin.ratio, found);
  const crossing = nearest(found[curve].margins.phaseCrossings, ({ factor }) => Math.max(factor, 1 / factor));
  if (!crossing) return [];
  const { frequency, factor } = crossing;
  return [
    { requirement: run.name, kind: 'gain', curve, frequency, start: 1 / factor, text: textOf(run, curve) },
  ];
}

function phaseBracket(run: RequirementRun, found: FoundOnCurves): MarginBracket[] {
  const isDelay = run.measure === 'delay_margin';
  const curve = curveOf(run, ({ delayMargin, phaseMargin }) => (isDelay ? delayMargin : phaseMargin), found);
  const crossing = nearest(found[curve].margins.gainCrossings, ({ frequency, phaseMargin }) =>
    isDelay ? (phaseMargin < 0 ? phaseMargin + 2 * Math.PI : phaseMargin) / frequency : Math.abs(phaseMargin),
  );
  if (!crossing) return [];
  const { frequency, phaseMargin } = crossing;
  const start = phaseMargin - Math.PI;
  return [{ requirement: run.name, kind: 'phase', curve, frequency, start, text: textOf(run, curve) }];
}

/** The round limit about −1 of a requirement on the modulus margin or on the sensitivity peak, which is its inverse. */
export function modulusBracket(run: RequirementRun, found: FoundOnCurves): ModulusBracket | undefined {
  const { measure, limit, name: requirement } = run;
  const radius =
    measure === 'modulus_margin' && 'at_least' in limit
      ? limit.at_least
      : measure === 'sensitivity_peak' && 'at_most' in limit
        ? 1 / limit.at_most
        : undefined;
  if (radius === undefined) return undefined;
  const curve = curveOf(
    run,
    ({ modulusMargin, sensitivityPeak }) =>
      measure === 'modulus_margin' ? modulusMargin : sensitivityPeak.value,
    found,
  );
  const { margins, response } = found[curve];
  const { frequency } = margins.sensitivityPeak;
  if (!frequency || !Number.isFinite(frequency)) return undefined;
  return { requirement, limit: radius, curve, nearest: response(frequency), text: textOf(run, curve) };
}

/** The worst plant of one requirement need not be that of another: the numbers tell whether the curve is its own. */
const sameShare = 1e-6;

function curveOf(
  { worst }: RequirementRun,
  of: (margins: LoopMargins) => number,
  found: FoundOnCurves,
): Which {
  if (worst.result.kind !== 'value') return 'nominal';
  const [own, drawn] = [worst.result.value, of(found.worst.margins)];
  return own === drawn || Math.abs(own - drawn) <= sameShare * Math.abs(own) ? 'worst' : 'nominal';
}

function textOf(run: RequirementRun, curve: Which): string {
  const plant: JudgedPlant = run[curve];
  const value = formatResultShort(plant.result, run, limitNumbers(run.limit));
  return `${curve} ${value}, headroom ${formatHeadroom(plant.headroom)}`;
}

function nearest<T>(items: readonly T[], distance: (item: T) => number): T | undefined {
  return items.reduce<T | undefined>(
    (best, item) => (best === undefined || distance(item) < distance(best) ? item : best),
    undefined,
  );
}
