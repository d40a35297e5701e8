import { workerData } from 'node:worker_threads';
import { type PlantAnswer, PlantMeasurer, type PlantSetup, type PlantTask } from './plant_answers.js';

// The pool wraps what it was given beside data of its own.
const setup: PlantSetup = Array.isArray(workerData) ? workerData[1] : workerData;
const measurer = new PlantMeasurer(setup);

/** Entry of a worker of the crew. */
export default function work(task: PlantTask): PlantAnswer[] {
  return measurer.answers(task);
}
