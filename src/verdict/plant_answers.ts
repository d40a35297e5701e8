import type { CoefficientValues } from '../loop/parts.js';
import { PlantEvaluator } from '../measure/evaluate_plant.js';
import type { LatchedNumbers, MeasureResult } from '../measure/measure.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { settleSteps } from './settle_steps.js';

/** What plants are measured with. */
export interface PlantSetup {
  spec: Spec;
  coefficients: CoefficientValues;
  /** What coefficients are compared with, where a requirement asks for their change. */
  latched?: LatchedNumbers;
}

/** Plants to measure at so many halvings of the step; `settle` then halves on until no measure changes any more. */
export interface PlantTask {
  plants: Float64Array[];
  halvings: number;
  settle: boolean;
  /** Places of the requirements that are asked for; all of them where not given. */
  wanted?: readonly number[];
}

/** The results of one plant, one for each requirement asked for, and the halvings that they stand for. */
export interface PlantAnswer {
  results: MeasureResult[];
  halvings: number;
}

/** Measures plants against all requirements of a spec, or against some of them alone, which then is all that is run. */
export class PlantMeasurer {
  private readonly parts = new Map<
    string,
    { evaluator: PlantEvaluator; requirements: readonly Requirement[] }
  >();

  /** @throws {LoopError} where the build's numbers do not fit the spec. */
  constructor(private readonly setup: PlantSetup) {
    this.part(undefined);
  }

  /** Measures the plants of a task one after another. */
  answers({ plants, halvings, settle, wanted }: PlantTask): PlantAnswer[] {
    const { evaluator, requirements } = this.part(wanted);
    return plants.map((values) =>
      settle
        ? settleSteps(requirements, (finer) => evaluator.evaluate(values, finer), halvings)
        : { results: evaluator.evaluate(values, halvings), halvings },
    );
  }

  /** For each requirement whether every signal that it follows stays as it is in its scenario, on this plant. */
  stayStill(plant: Float64Array): boolean[] {
    return this.part(undefined).evaluator.staysStill(plant);
  }

  private part(wanted: readonly number[] | undefined) {
    const key = wanted?.join() ?? 'all';
    let part = this.parts.get(key);
    if (!part) {
      const { spec, coefficients, latched } = this.setup;
      const requirements = wanted?.map((index) => spec.requirements[index]) ?? spec.requirements;
      const evaluator = new PlantEvaluator({ ...spec, requirements }, coefficients, latched);
      part = { evaluator, requirements };
      this.parts.set(key, part);
    }
    return part;
  }
}
