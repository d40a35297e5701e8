import { workerData } from 'node:worker_threads';
import type { CoefficientValues } from '../loop/parts.js';
import { PlantEvaluator } from '../measure/evaluate_plant.js';
import type { Spec } from '../spec/spec.js';
import { answersOf, type PlantAnswer, type PlantTask } from './plant_answers.js';

// The pool wraps what it was given beside data of its own.
const { spec, coefficients }: { spec: Spec; coefficients: CoefficientValues } = Array.isArray(workerData)
  ? workerData[1]
  : workerData;
const evaluator = new PlantEvaluator(spec, coefficients);

/** Entry of a worker of the crew. */
export default function work(task: PlantTask): PlantAnswer[] {
  return answersOf(evaluator, spec.requirements, task);
}
