import type { Place } from '../../spec/spec.js';
import type { BlockDescription, Room } from '../../spec/vocabulary.js';
import type { TargetArithmetic } from '../arithmetic.js';
import type { Node } from '../graph.js';
import type { ModeTaken } from '../loop.js';

/** One use of a block in a spec, with every name already turned into an expression. */
export interface BlockUse {
  name: string;
  place: Place;
  /** The signal taken by `of:`. May only be called from the deferred functions, or when the output needs it at once. */
  input: () => Node;
  /** The gain beside the block; one where none is given. */
  gain: () => Node;
  /** A setting's expression, or undefined where the spec leaves it out. */
  setting: (name: string) => Node | undefined;
  /** Whether the spec gives the setting. */
  has: (name: string) => boolean;
  word: (name: string) => string | undefined;
  /**
   * A setting's expression in double precision, for constants that are worked out off the target and rounded once when they
   * are taken into its format.
   */
  design: (name: string) => Node | undefined;
  /** The entries of a setting that is a list of signals, each to be called as `input` is; none where it is left out. */
  signals: (name: string) => (() => Node)[];
  /** The names in a setting that is a list of them; none where it is left out. */
  names: (name: string) => readonly string[];
  /**
   * The rows of a matrix, or undefined where it is left out. A coefficient array is cut into rows of so many columns; one
   * row without.
   * @throws {LoopError} where the array does not come out even.
   */
  matrix: (name: string, columns?: number) => Node[][] | undefined;
  /** Both parts of the input where `of` gives them apart. */
  pair: { target: () => Node; measurement: () => Node } | undefined;
  coefficients: (name: string) => Node[];
  range: { low: Node; high: Node } | undefined;
  /** Largest rate in either direction, for blocks that keep it themselves. */
  slew: () => Node | undefined;
}

/** What a block can add to the loop. Rates and next values are deferred, so that signals may refer to each other. */
export interface Workshop {
  room: Room;
  /** Builds expressions; in a controller as the target computes them. */
  arithmetic: TargetArithmetic;
  /** Adds a continuous state and returns it; it starts at the signal's `start:` unless said otherwise. Plant only. */
  addState: (name: string, derivative: () => Node, start?: number) => Node;
  /**
   * Adds a value that is no state; it starts at the signal's `start:` unless said otherwise. Plant only.
   * @param taken when it is taken anew: `at_jumps` for a relay, `after_steps` for a value that drifts.
   */
  addMode: (name: string, taken: ModeTaken, next: () => Node, start?: number) => Node;
  /** Rate of an expression along the motion of the plant; only from a mode's deferred function. Plant only. */
  rateOf: (value: Node) => Node;
  /** Brings a state to a value after every step of the movement. Plant only. */
  addCorrection: (state: Node, value: () => Node) => void;
  /** An expression of the plant as it was some time ago (s). Plant only. */
  delayed: (node: Node, delay: Node) => Node;
  /**
   * Adds a number kept between sampling instants and returns its value at the last one; it starts at the signal's `start:`
   * unless said otherwise.
   */
  addMemory: (name: string, next: () => Node, start?: number) => Node;
  /** The controller's sampling period in s, in the target's format. */
  period: () => Node;
  /** The same in double precision; see `design`. */
  exactPeriod: () => Node;
  /** Gives values by name beside the signal's own, for other signals of the controller. */
  publish: (values: ReadonlyMap<string, Node>) => void;
  /** What another signal of the controller publishes; none where it does not. */
  published: (signal: string) => ReadonlyMap<string, Node>;
}

/** A block: what the spec reader must know of it, and how it expands into equations. */
export interface Block {
  description: BlockDescription;
  /** Whether the block itself keeps its output in the range. */
  keepsRange: boolean;
  /** Whether the block itself keeps to the slew, by the rate of its state. */
  keepsSlew?: boolean;
  /** Adds states and memories, and returns the signal's value. */
  expand: (use: BlockUse, workshop: Workshop) => Node;
}
