import type { StoredNumbers } from '../loop/parts.js';
import type { BoundPoint, Statement } from '../spec/statement.js';
import type { MeasureDescription } from '../spec/vocabulary.js';
import type { Curve } from './curve.js';
import type { LoopView } from './loop_view.js';

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

/** A stretch of a scenario, s. */
export interface Window {
  from: number;
  until: number;
}

/** What a measure of a trace may look at. */
export interface TraceContext {
  /** The curve of `of`, for a measure that has it. */
  of: Curve;
  /** The curve of `to`, where the measure has one. */
  to: Curve | undefined;
  /** The step of `to`, where it makes exactly one. */
  step: TargetStep | undefined;
  /** Ends of the range of `of` and the size of one step of it (SI), where it has them. */
  range: { low: number; high: number; resolution: number } | undefined;
  /** Time between the changes of `of`, s; undefined where it moves at any time. */
  period: number | undefined;
  /** Time of the scenario's first event, s. */
  firstEvent: number;
  /** From the key `from`, else the first event, to the key `until`, else the end of the scenario. */
  window: Window;
  /** Values of the measure's own keys, SI. */
  quantity: (name: string) => number | undefined;
  /** Corners of the measure's bounds by key. */
  bounds: Record<string, readonly BoundPoint[]>;
  /** What the requirement says of signals over time, where the measure has a statement. */
  statement: Statement | undefined;
  /** Any signal in the statement. */
  signal: (name: string) => Curve;
  /** Value of a parameter in this plant, SI. */
  parameter: (name: string) => number;
}

/** A measure of a trace in a scenario. */
export interface TraceMeasure {
  description: MeasureDescription & { basis: 'trace' };
  measure: (context: TraceContext) => MeasureResult;
}

/** What a measure of the loop may look at: the loop opened at a signal, and the values of the measure's own keys (SI). */
export interface LoopContext {
  loop: LoopView;
  quantity: (name: string) => number | undefined;
}

/** A measure of the loop opened at a signal. */
export interface LoopMeasure {
  description: MeasureDescription & { basis: 'loop' };
  measure: (context: LoopContext) => MeasureResult;
}

/** What a measure of the build may look at: the numbers of one coefficient. */
export interface FirmwareContext {
  /** The coefficient's name. */
  name: string;
  /** At least one, in the order in which they are stored, in the coefficient's own unit. */
  values: readonly number[];
  /** A number in that unit as one in SI. */
  si: (value: number) => number;
  /** The same as they are stored, with their format; undefined where a scale or an offset made others of them. */
  stored: StoredNumbers | undefined;
  /** As many numbers of the latched reference, in the same unit, or why there are none. */
  latched: readonly number[] | string;
}

/** The numbers of the latched reference by coefficient, or why there are none to compare with, in words for people. */
export type LatchedNumbers = ReadonlyMap<string, readonly number[] | string>;

/** A measure of the build's numbers alone, whatever the plant. */
export interface FirmwareMeasure {
  description: MeasureDescription & { basis: 'firmware' };
  measure: (context: FirmwareContext) => MeasureResult;
}

export type Measure = TraceMeasure | LoopMeasure | FirmwareMeasure;

export const isTraceMeasure = (measure: Measure): measure is TraceMeasure =>
  measure.description.basis === 'trace';

export const isLoopMeasure = (measure: Measure): measure is LoopMeasure =>
  measure.description.basis === 'loop';

export const isFirmwareMeasure = (measure: Measure): measure is FirmwareMeasure =>
  measure.description.basis === 'firmware';

export const unformed = (why: string): MeasureResult => ({ kind: 'unformed', why });

export const measured = (value: number, note?: string): MeasureResult =>
  Number.isNaN(value)
    ? unformed('the result is not a number')
    : // A zero is a zero, whatever its sign.
      { kind: 'value', value: value + 0, ...(note ? { note } : {}) };
