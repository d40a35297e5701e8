import { availableParallelism } from 'node:os';
import type { Tinypool } from 'tinypool';
import type { CoefficientValues } from '../loop/parts.js';
import type { Spec } from '../spec/spec.js';
import { type PlantAnswer, PlantMeasurer, type PlantTask } from './plant_answers.js';

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
  private readonly measurer: PlantMeasurer;
  private pool: Tinypool | undefined;

  /**
   * @param workers threads to use; one for the calling thread alone.
   * @throws {LoopError} where the build's numbers do not fit the spec.
   */
  constructor(
    private readonly spec: Spec,
    readonly coefficients: CoefficientValues,
    private readonly workers = Math.min(mostWorkers, availableParallelism()),
  ) {
    this.measurer = new PlantMeasurer(spec, coefficients);
  }

  /**
   * @param settle whether to halve the steps on until no measure changes any more, from `halvings` on.
   * @param wanted places of the requirements to measure; all of them where not given.
   * @returns the answers in the order of the plants.
   */
  async measure(
    plants: Float64Array[],
    halvings: number,
    settle: boolean,
    wanted?: readonly number[],
  ): Promise<PlantAnswer[]> {
    const inline = this.workers < 2 || (plants.length < worthSharing && !this.pool);
    if (inline) return this.measurer.answers({ plants, halvings, settle, wanted });
    const pool = await this.startedPool();
    const size = Math.min(batch, Math.max(1, Math.ceil(plants.length / this.workers)));
    const tasks: PlantTask[] = [];
    for (let first = 0; first < plants.length; first += size) {
      tasks.push({ plants: plants.slice(first, first + size), halvings, settle, wanted });
    }
    const answers: PlantAnswer[][] = await Promise.all(tasks.map((task) => pool.run(task)));
    return answers.flat();
  }

  /** One plant measured on the calling thread, at once. */
  measureHere(plant: Float64Array, halvings: number, wanted: readonly number[]): PlantAnswer {
    return this.measurer.answers({ plants: [plant], halvings, settle: false, wanted })[0];
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
