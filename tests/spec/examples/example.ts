/**
 * An example of the reference: lines of a spec as a user writes them, and what comes out of them. Both the page and the tests
 * are made of it, so that neither can say something else than the other.
 */
export interface Example {
  /** The block, shape or section that it is an example of. */
  of: string;
  /** Of a block that exists in both rooms. */
  room?: 'plant' | 'controller';
  /** What it shows, where a thing has several examples: begins with a small letter. */
  shows?: string;
  /** Sentences before it. */
  intro?: string;
  /** Files beside the spec. */
  files?: Record<string, string>;
  /** Sections of a spec as the page shows them. */
  shown: string;
  /** What makes a whole spec of them, and needs no showing: units of inputs, sensors, actuators. */
  hidden?: string;
  /** What the inputs do from rest on, each as an event or a list of events. */
  when?: Record<string, string>;
  /** Where inputs rest that do not rest at 0. */
  rests?: Record<string, string>;
  /** How the scenario starts; from rest unless given. */
  start?: 'zero';
  /** Coefficients that the build holds, by their name in the spec, with their format where that matters. */
  build?: Record<string, number[] | { values: number[]; format: string; fractionalBits: number }>;
  /** The numbers that the latched reference has of coefficients. */
  latched?: Record<string, number[]>;
  /** How often steps are halved, where the usual number does not resolve what happens. */
  halvings?: number;
  outcomes: Outcome[];
}

/** What comes out of an example: a signal at a time, or a requirement's measure. */
export type Outcome = SignalOutcome | MeasureOutcome;

interface Number {
  /** The unit of the formula's value. */
  unit: string;
  /** What a reader works out by hand; see formula.ts for how it is written. */
  formula: string;
  /** Names in the formula, with their formulas. */
  where?: Record<string, string>;
  /** Where the formula is from, where it does not speak for itself. */
  why?: string;
  /** How far the computed number may be from it, relative to its size; `usualTolerance` unless given. */
  within?: number;
}

export interface SignalOutcome extends Number {
  signal: string;
  /** A time of the scenario such as `40 ms`; where the signal jumps at it, the value after the jump counts. */
  at: string;
}

export interface MeasureOutcome extends Number {
  /** A requirement as a user writes it, in a flow mapping. */
  requirement: string;
}

/** Examples of measures that share a loop. */
export interface MeasureGroup extends Omit<Example, 'of' | 'room' | 'outcomes'> {
  /** A few words for the heading. */
  title: string;
  /** One line that says what the loop is. */
  shows: string;
  outcomes: MeasureOutcome[];
}

/** Relative, and of numbers below one in their unit absolute. */
export const usualTolerance = 1e-9;
