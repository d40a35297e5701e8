import { unformed } from '../measure/measure.js';
import { ParameterSpace } from '../perturb/parameter_space.js';
import { Crew, type Watch } from './crew.js';
import type { PlantAnswer, PlantSetup } from './plant_answers.js';
import { tryPlants } from './try_plants.js';

/** One part of several that together try all plants: its number counts from 1. */
export interface Share {
  part: number;
  of: number;
}

/** What was asked of a crew at one time: how many plants, and the answers for those that belong to the part. */
export interface PartialRound {
  plants: number;
  halvings: number;
  answers: PlantAnswer[];
}

/**
 * Tries the share of a spec's plants that belongs to a part. The steps are settled as in a whole run, on the same few
 * plants, which every part measures.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export async function tryShare(
  setup: PlantSetup,
  saved: readonly Float64Array[],
  share: Share,
  watch?: Watch,
): Promise<PartialRound[]> {
  const { spec } = setup;
  const crew = new ShareCrew(setup, share, watch);
  try {
    await tryPlants(spec, new ParameterSpace(spec.parameters, spec.perturbation), crew, saved);
    return crew.rounds;
  } finally {
    await crew.dismiss();
  }
}

/** Every how manieth plant of a round belongs to a part: neighbours take equally long. */
function belongs({ part, of }: Share, place: number): boolean {
  return place % of === part - 1;
}

/** Measures only the plants of its part, and keeps what it found; the tallies made of its answers mean nothing. */
class ShareCrew extends Crew {
  readonly rounds: PartialRound[] = [];

  constructor(
    setup: PlantSetup,
    private readonly share: Share,
    watch?: Watch,
  ) {
    super(setup, undefined, watch);
    this.foreign = {
      results: setup.spec.requirements.map(() => unformed('it belongs to another part')),
      halvings: 0,
    };
  }

  private readonly foreign: PlantAnswer;

  override async measure(
    plants: Float64Array[],
    halvings: number,
    settle: boolean,
    wanted?: readonly number[],
  ): Promise<PlantAnswer[]> {
    if (settle) return super.measure(plants, halvings, settle, wanted);
    const own = plants.filter((_, place) => belongs(this.share, place));
    const answers = await super.measure(own, halvings, settle, wanted);
    this.rounds.push({ plants: plants.length, halvings, answers });
    const left = answers.slice();
    return plants.map((_, place) => (belongs(this.share, place) ? left.shift()! : this.foreign));
  }
}

/** The parts of a run do not belong together. */
export class PartsDisagree extends Error {}

/** Takes what parts have measured, and measures the rest: what settles the steps, the search, the shrinking. */
export class JoiningCrew extends Crew {
  private round = 0;

  /** @param parts the rounds of every part, in the order of the parts. */
  constructor(
    setup: PlantSetup,
    private readonly parts: readonly (readonly PartialRound[])[],
    watch?: Watch,
  ) {
    super(setup, undefined, watch);
  }

  override async measure(
    plants: Float64Array[],
    halvings: number,
    settle: boolean,
    wanted?: readonly number[],
  ): Promise<PlantAnswer[]> {
    if (settle || wanted) return super.measure(plants, halvings, settle, wanted);
    const round = this.round++;
    const own = this.parts.map((rounds) => rounds[round]);
    if (own.some((one) => one?.plants !== plants.length || one.halvings !== halvings))
      throw new PartsDisagree(`the parts have not measured the plants of this spec in round ${round + 1}`);
    const left = own.map(({ answers }) => answers.slice());
    return plants.map((_, place) => {
      const answer = left[place % left.length].shift();
      if (!answer) throw new PartsDisagree(`a part lacks plants of round ${round + 1}`);
      return answer;
    });
  }
}
