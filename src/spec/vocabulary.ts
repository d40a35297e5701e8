import type { Dimension } from './spec.js';

/** The folders' rooms in which a signal can be defined. */
export type Room = 'plant' | 'controller';

/** The dimensions of a signal and of what it takes (`of`), from which a setting's dimension follows. */
export interface SignalDimensions {
  output: Dimension;
  /** Of `of`; plain numbers where the block takes no input. */
  input: Dimension;
  /** The word that the spec gives for a setting of the block, from which a dimension may follow too. */
  word: (setting: string) => string | undefined;
}

/**
 * What the rows or columns of a matrix stand for, from which the unit of each entry follows: plain numbers, the signal
 * itself or what it takes (as many as are written), or the entries of a setting that is a list, one by one.
 */
export type Axis = 'plain' | 'output' | 'input' | { of: string };

/**
 * One setting of a block.
 * `expression`: a number, quantity or expression of the stated dimension.
 * `time_constant`: a time, or a corner frequency in Hz or rad/s which is turned into one (1/(2π f), 1/ω).
 * `corner`: an angular frequency in rad/s, or a frequency in Hz which is multiplied by 2π, or nothing else.
 * `coefficients`: the name of a coefficient array of the build, or of one coefficient.
 * `word`: one of the stated words.
 * `signals`: one expression or a list of them, each of a dimension of its own.
 * `estimates`: a list of signals of the same controller.
 * `matrix`: a list of rows, or one list where there is a single row or column, or a coefficient array row by row. An
 * entry has the unit of its row divided by the unit of its column, or times it.
 * `late`: what stands there is not needed before the next sampling instant, and so breaks a cycle of signals.
 */
export type SettingDescription = { name: string; optional: boolean; meaning: string; late?: boolean } & (
  | { kind: 'expression'; dimension: (of: SignalDimensions) => Dimension }
  | { kind: 'time_constant' | 'corner' | 'coefficients' }
  | { kind: 'word'; words: readonly string[] }
  | { kind: 'signals' | 'estimates' }
  | { kind: 'matrix'; rows: Axis; columns: Axis; entry: 'ratio' | 'product' }
);

/** What the spec reader must know of a block. A single setting with the block's own name means `key: value`. */
export interface BlockDescription {
  key: string;
  /** The setting that `key: value` gives, where it does not have the block's own name. */
  main?: string;
  rooms: readonly Room[];
  /** Whether the block takes a signal by `of:`. */
  takesInput: boolean;
  /** Whether `of` may be `{ target: …, measurement: … }`; the input is then their difference. */
  takesPair?: boolean;
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
 * `loop_point`: a sensor, controller or actuator signal where the loop is opened, or with `several` a list of them, of any
 * units or only such as can be compared in size; `quantity`: a number with a dimension;
 * `share`: a plain number such as `5 %`; `frequency`: an angular frequency in rad/s, or a frequency in Hz which is multiplied by
 * 2π; `statement`: a comparison of signals, or a mapping that says when it holds; `bound`: corners of a bound, each a time and
 * a value of the dimension of `of`; `controller`: the name of a controller, of which a signal of the loop's own is followed;
 * `coefficient`: the name of a coefficient of the build.
 */
export type MeasureKey = { name: string; optional: boolean; meaning: string } & (
  | {
      kind: 'signal' | 'target' | 'share' | 'frequency' | 'statement' | 'bound' | 'coefficient';
    }
  | { kind: 'loop_point'; several?: 'of_any_unit' | 'of_comparable_size' }
  | { kind: 'quantity'; dimension: (of: Dimension) => Dimension }
  | { kind: 'controller'; signal: (controller: string) => string }
);

/** What the spec reader must know of a measure. */
export interface MeasureDescription {
  name: string;
  /**
   * `trace` measures need `in:` (a scenario); `loop` measures may have `around:`; `firmware` measures are about the build's
   * numbers alone, and the same for every plant.
   */
  basis: 'trace' | 'loop' | 'firmware';
  keys: readonly MeasureKey[];
  /** Dimension of the result, from those of the signals `of` and `at` (plain where the measure has none). */
  dimension: (of: Dimension, at?: Dimension) => Dimension;
  /** Limits in dB are amplitude ratios: only where the result is a ratio. */
  ratio: boolean;
  /** Limits of an angular frequency may be written in Hz, which is multiplied by 2π. */
  takesHertz?: boolean;
  /** `lower`: a smaller value is better. */
  better: 'lower' | 'higher';
  /** Whether it is itself about what changed since the latched reference, which is then needed. */
  againstLatched?: boolean;
  /** No plant gives less (or more) than this, SI: a limit beyond it guards nothing. */
  least?: number;
  most?: number;
  /**
   * Measures whose window must contain exactly one change of the target signal and outlast the limit by half
   * (settling_time) say so, for the spec reader to check.
   */
  window: 'single_step' | 'single_step_outlasting_limit' | 'from_first_event' | undefined;
  meaning: string;
}

/** One setting of a shape; `dimension` follows from that of the input. */
export interface ShapeSetting {
  name: string;
  optional: boolean;
  /** `frequency`: in Hz, or a time that is its period; `points`: a list of times and values, or a table from a file. */
  kind: 'expression' | 'frequency' | 'points';
  dimension: (input: Dimension) => Dimension;
  meaning: string;
}

/** What the spec reader must know of something that an input can do. A single setting with the shape's own name means `key: value`. */
export interface ShapeDescription {
  key: string;
  settings: readonly ShapeSetting[];
  /** Whether `for:` stands beside it. */
  length: 'none' | 'optional' | 'needed';
  /** Whether it starts with one change to a value that stays for a while, which step measures need. */
  isStep: boolean;
  meaning: string;
}

/** Blocks, measures and input shapes that a spec may use; handed to the reader by who knows them. */
export interface Vocabulary {
  blocks: readonly BlockDescription[];
  shapes: readonly ShapeDescription[];
  measures: readonly MeasureDescription[];
}
