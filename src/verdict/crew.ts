import { setMaxListeners } from 'node:events';
import { availableParallelism } from 'node:os';
import type { Tinypool } from 'tinypool';
import { type PlantAnswer, PlantMeasurer, type PlantSetup, type PlantTask } from './plant_answers.js';

/** Plants for one worker at a time: enough to hide the cost of handing them over, few enough to share evenly. */
const batch = 16;
/** With fewer plants the start of workers costs more than it gains. */
const worthSharing = 64;
/** On the calling thread an interrupt is heard after so many plants. */
const inlineBatch = 4;
const mostWorkers = 16;

/** Who wants to know how far a crew is, or to stop it. */
export interface Watch {
  /** Told of the runs of plants that are done, one or some at a time. */
  done?: (plants: number) => void;
  /** Aborted when the work shall end; what is under way then throws its reason. */
  signal?: AbortSignal;
}

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
    readonly setup: PlantSetup,
    private readonly workers = Math.min(mostWorkers, availableParallelism()),
    private readonly watch: Watch = {},
  ) {
    this.measurer = new PlantMeasurer(setup);
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
    const size = inline ? inlineBatch : Math.min(batch, Math.max(1, Math.ceil(plants.length / this.workers)));
    const tasks: PlantTask[] = [];
    for (let first = 0; first < plants.length; first += size) {
      tasks.push({ plants: plants.slice(first, first + size), halvings, settle, wanted });
    }
    return inline ? this.measureOneByOne(tasks) : this.measureInPool(tasks);
  }

  /** One plant measured on the calling thread, at once. */
  measureHere(plant: Float64Array, halvings: number, wanted: readonly number[]): PlantAnswer {
    return this.measurer.answers({ plants: [plant], halvings, settle: false, wanted })[0];
  }

  /** For each requirement whether every signal that it follows stays as it is in its scenario, on this plant. */
  stayStill(plant: Float64Array): boolean[] {
    return this.measurer.stayStill(plant);
  }

  /** Ends the workers. */
  async dismiss(): Promise<void> {
    await this.pool?.destroy();
  }

  private async measureOneByOne(tasks: readonly PlantTask[]): Promise<PlantAnswer[]> {
    const answers: PlantAnswer[] = [];
    for (const task of tasks) {
      this.watch.signal?.throwIfAborted();
      answers.push(...this.measurer.answers(task));
      this.watch.done?.(task.plants.length);
      // So that an interrupt is heard between two batches.
      if (this.watch.signal) await new Promise((resolve) => setImmediate(resolve));
    }
    return answers;
  }

  private async measureInPool(tasks: readonly PlantTask[]): Promise<PlantAnswer[]> {
    const pool = await this.startedPool();
    const { signal, done } = this.watch;
    signal?.throwIfAborted();
    const answers = Promise.all(
      tasks.map(async (task) => {
        const found: PlantAnswer[] = await pool.run(task);
        done?.(task.plants.length);
        return found;
      }),
    );
    return (await orAborted(answers, signal)).flat();
  }

  private async startedPool(): Promise<Tinypool> {
    if (this.pool) return this.pool;
    const { Tinypool } = await import('tinypool');
    this.pool = new Tinypool({
      filename: new URL('./plant_worker.js', import.meta.url).href,
      runtime: 'worker_threads',
      minThreads: this.workers,
      maxThreads: this.workers,
      workerData: this.setup,
    });
    return this.pool;
  }
}

/** The result, unless the signal is aborted before: then its reason is thrown. */
async function orAborted<T>(work: Promise<T>, signal: AbortSignal | undefined): Promise<T> {
  if (!signal) return work;
  // Many batches wait at once, and each listens: that is no leak.
  setMaxListeners(0, signal);
  let stop = (): void => {};
  const aborted = new Promise<never>((_, reject) => {
    stop = () => reject(signal.reason);
    signal.addEventListener('abort', stop, { once: true });
  });
  try {
    return await Promise.race([work, aborted]);
  } finally {
    signal.removeEventListener('abort', stop);
  }
}
