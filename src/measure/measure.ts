import type { SignalTrace } from '../kernel/trace.js';
import type { LoopMargins } from '../linear/margins.js';
import type { MeasureDescription } from '../spec/vocabulary.js';

/** What a measure gives for one plant; SI. */
export type MeasureResult =
  /** A number; infinite where the definition says so. `note` says what a reader should know of it. */
  | { kind: 'value'; value: number; note?: string }
  /** The event never came (a response that never settles): fails any limit; `left` ranks how far away it stayed. */
  | { kind: 'never'; why: string; left: number }
  /** The trace left the finite numbers at `time` (s). */
  | { kind: 'overflow'; why: string; time: number }
  /** The measure cannot be formed. */
  | { kind: 'unformed'; why: string };

/** The single step of a target: at `time` (s) from one value to another (SI), held until `until` (s). */
export interface TargetStep {
  time: number;
  before: number;
  after: number;
  until: number;
}

/** What a measure of a trace may look at. */
export interface TraceContext {
  of: SignalTrace;
  /** The trace of `to`, where the measure has one. */
  to: SignalTrace | undefined;
  /** The step of `to`, where it makes exactly one. */
  step: TargetStep | undefined;
  /** Ends of the range of `of` and the size of one step of it (SI), where it has them. */
  range: { low: number; high: number; resolution: number } | undefined;
  /** Time of the scenario's first event, s. */
  firstEvent: number;
  /** Values of the measure's own keys, SI. */
  quantity: (name: string) => number | undefined;
}

/** A measure of a trace in a scenario. */
export interface TraceMeasure {
  description: MeasureDescription & { basis: 'trace' };
  measure: (context: TraceContext) => MeasureResult;
}

/** A measure of the loop opened at a signal. */
export interface LoopMeasure {
  description: MeasureDescription & { basis: 'loop' };
  measure: (margins: LoopMargins) => MeasureResult;
}

export type Measure = TraceMeasure | LoopMeasure;

export const unformed = (why: string): MeasureResult => ({ kind: 'unformed', why });

export const measured = (value: number, note?: string): MeasureResult =>
  Number.isNaN(value)
    ? unformed('the result is not a number')
    : { kind: 'value', value, ...(note ? { note } : {}) };
