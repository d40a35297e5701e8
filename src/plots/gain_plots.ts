import type { LoopView } from '../measure/loop_view.js';
import { formatHeadroom, formatResultShort } from '../report/format_value.js';
import type { GainPlot, TightestPlace } from '../report/index.js';
import { limitNumbers } from '../report/requirement_in_words.js';
import type { Requirement } from '../spec/spec.js';
import type { RequirementRun } from '../verdict/run.js';
import { bandSizes, thinnedPlants } from './band_plants.js';
import { affordable, type Clock } from './fineness.js';
import { crossingsOf, frequenciesAbout } from './frequencies.js';
import { bandOf, gainFence, lookedAt } from './gain_fences.js';
import { extremePlace, type SizeAt, sizeOf } from './loop_sizes.js';
import type { OpenedLoop } from './opened_loops.js';
import { valuesOfPlant } from './plant_values.js';
import { boundsOver } from './samples.js';

/** So many worst plants are told apart in one picture; those of the requirements that are shown first. */
const mostWorst = 3;

/** A requirement with what was found for it and the loop of its worst plant. */
interface Judged {
  requirement: Requirement;
  run: RequirementRun;
  worst: LoopView;
}

/**
 * The sensitivity, the following gain and the loop gain of an opened loop, each where a requirement limits it.
 * @param wide plants whose responses make the band, or some of them.
 */
export function gainPlots(opened: OpenedLoop, wide: readonly Float64Array[], now: Clock): GainPlot[] {
  const nominal = viewOf(opened, valuesOfPlant(opened.runs[0].nominal));
  if (!nominal) return [];
  const judged = opened.requirements.flatMap((requirement, at): Judged[] => {
    const run = opened.runs[at];
    const worst = viewOf(opened, valuesOfPlant(run.worst));
    return worst ? [{ requirement, run, worst }] : [];
  });
  return responses.flatMap((response) =>
    meanings.flatMap((meaning) => {
      const those = judged.filter(({ requirement }) => isDrawn(requirement, { response, meaning }, nominal));
      return those.length > 0 ? [plotOf(opened, { response, meaning }, nominal, those, wide, now)] : [];
    }),
  );
}

const responses = ['sensitivity', 'following', 'loop'] as const;
const meanings = ['response', 'any_signal', 'sine'] as const;

/** What is drawn of a loop. */
type Kind = Pick<GainPlot, 'response' | 'meaning'>;

function isDrawn(
  requirement: Requirement,
  { response, meaning }: Kind,
  { changes, period }: LoopView,
): boolean {
  const about = lookedAt(requirement);
  if (about?.response !== response || gainFence(requirement, Math.PI / period).length === 0) return false;
  if (changes === 1) return meaning === 'response';
  return meaning === (about.band ? 'sine' : 'any_signal');
}

function plotOf(
  opened: OpenedLoop,
  kind: Kind,
  nominal: LoopView,
  judged: readonly Judged[],
  wide: readonly Float64Array[],
  now: Clock,
): GainPlot {
  // Singular values repeat themselves beyond half the frequency of the cycle.
  const end = Math.PI / (kind.meaning === 'any_signal' ? nominal.equations.period! : nominal.period);
  const fences = judged.flatMap(({ requirement }) => gainFence(requirement, end));
  const peaks = judged.flatMap((one) => peakOf(one, kind, end) ?? []);
  const mattering = [nominal, ...judged.map(({ worst }) => worst)].flatMap(crossingsOf);
  const frequencies = frequenciesAbout(
    [...mattering, ...peaks.map(({ frequency }) => frequency)],
    end,
    // A limit without an end of its own goes on beyond the picture.
    fences.flatMap(({ from, to }) => [from, to]).filter((frequency) => frequency < end),
  );
  const sizes = (view: LoopView | undefined): number[] => sizesOver(view, kind, frequencies);
  const latched = opened.latched(valuesOfPlant(opened.runs[0].nominal));
  const worst = worstCurves(judged, sizes);
  const own = sizes(nominal);
  const most = affordable(bandSizes, () => sizes(viewOf(opened, valuesOfPlant(opened.runs[0].nominal))), now);
  const band = thinnedPlants(wide, most ?? 0).map((plant) => sizes(viewOf(opened, plant)));
  return {
    requirements: judged.map(({ requirement }) => requirement.name),
    ...{ ...kind, at: opened.at, changes: nominal.changes, frequencies },
    ...boundsOver(
      band.length > 0 ? [own, ...worst.map(({ values }) => values), ...band] : [],
      frequencies.length,
    ),
    nominal: own,
    ...(latched && { latched: sizes(latched) }),
    worst,
    fences,
    tightest: peaks,
  };
}

function viewOf({ of }: OpenedLoop, plant: Float64Array): LoopView | undefined {
  const found = of(plant);
  return found.kind === 'loop' ? found.loop : undefined;
}

/** Not-a-number where there is no loop; nor has an unstable one any sensitivity. */
function sizesOver(view: LoopView | undefined, kind: Kind, frequencies: readonly number[]): number[] {
  const { response, meaning } = kind;
  const isOpen = response === 'loop';
  const sizeAt: SizeAt = view && (isOpen || view.stable) ? sizeOf(view, response, meaning) : () => Number.NaN;
  return frequencies.map(sizeAt);
}

/** The worst plants that are not nominal, each once. */
function worstCurves(judged: readonly Judged[], sizes: (view: LoopView) => number[]): GainPlot['worst'] {
  const byPlant = new Map<string, { requirements: string[]; view: LoopView }>();
  for (const { requirement, run, worst } of judged) {
    const isNominal = run.worst.parameters.every(({ moved }) => moved === 0);
    if (isNominal) continue;
    const key = valuesOfPlant(run.worst).join(' ');
    const found = byPlant.get(key) ?? { requirements: [], view: worst };
    found.requirements.push(requirement.name);
    byPlant.set(key, found);
  }
  return [...byPlant.values()]
    .slice(0, mostWorst)
    .map(({ requirements, view }) => ({ requirements, values: sizes(view) }));
}

/** Where the worst plant of a requirement comes nearest to its limit, or goes furthest beyond it. */
function peakOf(
  { requirement, run, worst }: Judged,
  { response, meaning }: Kind,
  end: number,
): TightestPlace | undefined {
  const { result, headroom } = run.worst;
  if (result.kind !== 'value' || (response !== 'loop' && !worst.stable)) return undefined;
  const { extreme } = lookedAt(requirement)!;
  const { frequency, value } = extremePlace(
    sizeOf(worst, response, meaning),
    bandOf(requirement, end),
    extreme,
  );
  if (!(value > 0)) return undefined;
  const number = formatResultShort(result, run, limitNumbers(run.limit));
  const text = `worst ${number}, headroom ${formatHeadroom(headroom)}`;
  return { requirement: requirement.name, frequency, value, text };
}
