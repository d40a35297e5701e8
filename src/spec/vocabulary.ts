import type { Dimension } from './spec.js';

/** The folders' rooms in which a signal can be defined. */
export type Room = 'plant' | 'controller';

/** The dimensions of a signal and of what it takes (`of`), from which a setting's dimension follows. */
export interface SignalDimensions {
  output: Dimension;
  /** Of `of`; plain numbers where the block takes no input. */
  input: Dimension;
}

/**
 * One setting of a block.
 * `expression`: a number, quantity or expression of the stated dimension.
 * `time_constant`: a time, or a corner frequency in Hz or rad/s which is turned into one (1/(2π f), 1/ω).
 * `corner`: an angular frequency in rad/s, or a frequency in Hz which is multiplied by 2π, or nothing else.
 * `coefficients`: the name of a coefficient array of the build, or of one coefficient.
 * `word`: one of the stated words.
 */
export type SettingDescription = { name: string; optional: boolean; meaning: string } & (
  | { kind: 'expression'; dimension: (of: SignalDimensions) => Dimension }
  | { kind: 'time_constant' | 'corner' | 'coefficients' }
  | { kind: 'word'; words: readonly string[] }
);

/** What the spec reader must know of a block. A single setting with the block's own name means `key: value`. */
export interface BlockDescription {
  key: string;
  rooms: readonly Room[];
  /** Whether the block takes a signal by `of:`. */
  takesInput: boolean;
  /** Whether `gain:` may stand beside the key (it has dimension output/input). */
  takesGain: boolean;
  /**
   * Whether `of` must have the dimension of the signal itself, as in a filter of gain one. Where `takesGain`, this holds
   * whenever no gain is given, and need not be said.
   */
  inputLikeOutput?: boolean;
  /**
   * Whether the output is a state (an integral, a lag): it does not depend on its input at the same instant, and so
   * breaks a cycle of signals. Without it every setting and `of` count as needed at once.
   */
  outputIsState?: boolean;
  settings: readonly SettingDescription[];
  /** One line for the reference: the equation, in words and symbols. */
  meaning: string;
}

/**
 * One key of a measure.
 * `signal`: any signal that has a trace; `target`: an input or signal to which the response is compared;
 * `loop_point`: a sensor, controller or actuator signal where the loop is opened; `quantity`: a number with a dimension;
 * `share`: a plain number such as `5 %`.
 */
export type MeasureKey = { name: string; optional: boolean; meaning: string } & (
  | { kind: 'signal' | 'target' | 'loop_point' | 'share' }
  | { kind: 'quantity'; dimension: (of: Dimension) => Dimension }
);

/** What the spec reader must know of a measure. */
export interface MeasureDescription {
  name: string;
  /** `trace` measures need `in:` (a scenario); `loop` measures may have `around:`. */
  basis: 'trace' | 'loop';
  keys: readonly MeasureKey[];
  /** Dimension of the result, from the dimension of the `of` signal (plain for a loop measure). */
  dimension: (of: Dimension) => Dimension;
  /** Limits in dB are amplitude ratios: only where the result is a ratio. */
  ratio: boolean;
  /** `lower`: a smaller value is better. */
  better: 'lower' | 'higher';
  /**
   * Measures whose window must contain exactly one change of the target signal and outlast the limit by half
   * (settling_time) say so, for the spec reader to check.
   */
  window: 'single_step' | 'single_step_outlasting_limit' | 'from_first_event' | undefined;
  meaning: string;
}

/** Blocks, measures and functions that a spec may use; handed to the reader by who knows them. */
export interface Vocabulary {
  blocks: readonly BlockDescription[];
  measures: readonly MeasureDescription[];
}
