import { availableParallelism } from 'node:os';
import type { Tinypool } from 'tinypool';
import type { CoefficientValues } from '../loop/parts.js';
import { PlantEvaluator } from '../measure/evaluate_plant.js';
import type { Spec } from '../spec/spec.js';
import { answersOf, type PlantAnswer, type PlantTask } from './plant_answers.js';

/** Plants for one worker at a time: enough to hide the cost of handing them over, few enough to share evenly. */
const batch = 16;
/** With fewer plants the start of workers costs more than it gains. */
const worthSharing = 64;
const mostWorkers = 16;

/**
 * Measures plants on all cores. A plant's results depend on the plant alone, and they come back in the order of the plants,
 * so nothing depends on how many workers there are.
 */
export class Crew {
  private readonly evaluator: PlantEvaluator;
  private pool: Tinypool | undefined;

  /**
   * @param workers threads to use; one for the calling thread alone.
   * @throws {LoopError} where the build's numbers do not fit the spec.
   */
  constructor(
    private readonly spec: Spec,
    private readonly coefficients: CoefficientValues,
    private readonly workers = Math.min(mostWorkers, availableParallelism()),
  ) {
    this.evaluator = new PlantEvaluator(spec, coefficients);
  }

  async measure(plants: Float64Array[], halvings: number, settle: boolean): Promise<PlantAnswer[]> {
    const inline = this.workers < 2 || (plants.length < worthSharing && !this.pool);
    if (inline) return answersOf(this.evaluator, this.spec.requirements, { plants, halvings, settle });
    const pool = await this.startedPool();
    const tasks: PlantTask[] = [];
    for (let first = 0; first < plants.length; first += batch) {
      tasks.push({ plants: plants.slice(first, first + batch), halvings, settle });
    }
    const answers: PlantAnswer[][] = await Promise.all(tasks.map((task) => pool.run(task)));
    return answers.flat();
  }

  /** Ends the workers. */
  async dismiss(): Promise<void> {
    await this.pool?.destroy();
  }

  private async startedPool(): Promise<Tinypool> {
    if (this.pool) return this.pool;
    const { Tinypool } = await import('tinypool');
    this.pool = new Tinypool({
      filename: new URL('./plant_worker.js', import.meta.url).href,
      runtime: 'worker_threads',
      minThreads: this.workers,
      maxThreads: this.workers,
      workerData: { spec: this.spec, coefficients: this.coefficients },
    });
    return this.pool;
  }
}
