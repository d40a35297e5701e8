import { queueLength, type Schedule } from '../loop/schedule.js';
import type { CompiledLoop } from './compile.js';
import type { Action } from './timeline.js';

/** Runs the tasks of one plant: samples, computes, and delivers results after their delays. */
export class TaskRunner {
  private readonly computed: Int32Array;
  private readonly channels: ChannelQueue[];
  private readonly noisesOf: number[][];

  /**
   * @param noise draws for each noise source, one for each sampling instant of its task.
   * @param m the array of the running plant, as the layout says.
   */
  constructor(
    private readonly compiled: CompiledLoop,
    schedule: Schedule,
    private readonly noise: Float64Array[],
    private readonly m: Float64Array,
  ) {
    const { loop, layout } = compiled;
    this.computed = new Int32Array(loop.tasks.length);
    this.channels = schedule.channels.map(({ task, delay }, channel) => {
      const own = loop.held.flatMap((held, i) => (held.channel === channel ? [i] : []));
      return new ChannelQueue(task, delay, own, queueLength(schedule, channel), layout);
    });
    this.noisesOf = loop.tasks.map((_, task) =>
      loop.noises.flatMap((owner, i) => (owner === task ? [i] : [])),
    );
  }

  perform({ changes, deliver, compute }: Action): void {
    const { m, compiled } = this;
    for (const { kind, index, value } of changes) m[compiled.layout[kind] + index] = value;
    for (const task of compute) this.sample(task);
    for (const channel of deliver) this.channels[channel].deliver(m);
    for (const task of compute) {
      compiled.compute[task](m);
      for (const channel of this.channels) if (channel.task === task) channel.send(m);
    }
  }

  private sample(task: number): void {
    const { m, compiled } = this;
    for (const source of this.noisesOf[task]) {
      m[compiled.layout.noise + source] = this.noise[source][this.computed[task]];
    }
    this.computed[task]++;
    compiled.sample[task](m);
  }
}

/** Results under way by one channel. */
class ChannelQueue {
  private readonly values: Float64Array;
  private sent = 0;
  private delivered = 0;

  /** @param own indices of the held values that go by this channel. */
  constructor(
    readonly task: number,
    private readonly delay: number,
    private readonly own: readonly number[],
    length: number,
    private readonly layout: { pending: number; held: number },
  ) {
    this.values = new Float64Array(own.length * length);
  }

  /** Puts the results just computed on their way; without delay they take effect at once. */
  send(m: Float64Array): void {
    const { pending, held } = this.layout;
    if (this.delay === 0) {
      for (const i of this.own) m[held + i] = m[pending + i];
      return;
    }
    for (const i of this.own) this.values[this.sent++] = m[pending + i];
    if (this.sent === this.values.length) this.sent = 0;
  }

  deliver(m: Float64Array): void {
    for (const i of this.own) m[this.layout.held + i] = this.values[this.delivered++];
    if (this.delivered === this.values.length) this.delivered = 0;
  }
}
