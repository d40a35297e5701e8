import { workerData } from 'node:worker_threads';
import type { CoefficientValues } from '../loop/parts.js';
import type { Spec } from '../spec/spec.js';
import { type PlantAnswer, PlantMeasurer, type PlantTask } from './plant_answers.js';

// The pool wraps what it was given beside data of its own.
const { spec, coefficients }: { spec: Spec; coefficients: CoefficientValues } = Array.isArray(workerData)
  ? workerData[1]
  : workerData;
const measurer = new PlantMeasurer(spec, coefficients);

/** Entry of a worker of the crew. */
export default function work(task: PlantTask): PlantAnswer[] {
  return measurer.answers(task);
}
