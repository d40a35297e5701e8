import type { CoefficientValues } from '../../loop/parts.js';
import { ParameterSpace } from '../../perturb/parameter_space.js';
import type { Spec } from '../../spec/spec.js';
import { Crew } from '../crew.js';
import { judge } from '../judge.js';
import type { JudgedSpec, JudgeOptions } from '../judge_spec.js';
import type { ComparedResult, JudgedPlant } from '../run.js';
import type { TriedPlant } from '../tally.js';
import { tryPlants } from '../try_plants.js';

/** What the latched coefficients give for one requirement under today's spec. */
export interface Rerun {
  compared: ComparedResult;
  /** The plant it was found on: SI, in the order of the spec. */
  plant: Float64Array;
}

/**
 * Runs the latched coefficients on the plants that today's were tried on: those that every requirement is tried on, and
 * today's worst. Steps are settled as they are for today's worst plants.
 *
 * @returns for each requirement its worst, or for one that must only hold at the nominal plant what that gave.
 * @throws {LoopError} where the latched numbers do not fit today's spec.
 */
export async function rerunLatched(
  spec: Spec,
  latched: CoefficientValues,
  today: JudgedSpec,
  { workers, saved = [], watch, latchedCrew }: JudgeOptions,
): Promise<Rerun[]> {
  const setup = { spec, coefficients: latched };
  const crew = latchedCrew?.(setup) ?? new Crew(setup, workers, watch);
  try {
    const space = new ParameterSpace(spec.parameters, spec.perturbation);
    const { tallies, halvings } = await tryPlants(spec, space, crew, saved);
    const reruns: Rerun[] = [];
    for (const [index, { holdsFor }] of spec.requirements.entries()) {
      const own = holdsFor === 'nominal' ? tallies[index].nominal! : tallies[index].worst[0];
      const todays = plantValues(today.requirements[index].worst);
      const settled = await crew.measure([own.plant.values, todays], halvings, true, [index]);
      const found = settled.map(({ results: [result] }, at): TriedPlant => {
        const values = at === 0 ? own.plant.values : todays;
        const plant = { origin: own.plant.origin, values };
        return { plant, result, judgement: judge(spec.requirements[index], result) };
      });
      reruns.push(rerunOf(found[1].judgement.rank < found[0].judgement.rank ? found[1] : found[0]));
    }
    return reruns;
  } finally {
    await crew.dismiss();
  }
}

/** The values of a judged plant, in the order of the spec. */
export function plantValues({ parameters }: JudgedPlant): Float64Array {
  return Float64Array.from(parameters, ({ value }) => value);
}

function rerunOf({ plant, result, judgement }: TriedPlant): Rerun {
  const headroom = 'headroom' in judgement ? judgement.headroom : undefined;
  return { compared: { result, headroom }, plant: plant.values };
}
