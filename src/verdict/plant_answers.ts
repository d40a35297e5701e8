import type { PlantEvaluator } from '../measure/evaluate_plant.js';
import type { MeasureResult } from '../measure/measure.js';
import type { Requirement } from '../spec/spec.js';
import { settleSteps } from './settle_steps.js';

/** Plants to measure at so many halvings of the step; `settle` then halves on until no measure changes any more. */
export interface PlantTask {
  plants: Float64Array[];
  halvings: number;
  settle: boolean;
}

/** The results of one plant, one for each requirement, and the halvings that they stand for. */
export interface PlantAnswer {
  results: MeasureResult[];
  halvings: number;
}

/** Measures the plants of a task one after another. */
export function answersOf(
  evaluator: PlantEvaluator,
  requirements: readonly Requirement[],
  { plants, halvings, settle }: PlantTask,
): PlantAnswer[] {
  return plants.map((values) =>
    settle
      ? settleSteps(requirements, (finer) => evaluator.evaluate(values, finer), halvings)
      : { results: evaluator.evaluate(values, halvings), halvings },
  );
}
