import type { Place } from '../spec/spec.js';
import type { Evaluation } from './evaluate.js';
import type { Graph, Node } from './graph.js';

/** A continuous state: SI value, rate of change, and where it starts when rest leaves it free. */
export interface ContinuousState {
  name: string;
  derivative: Node;
  start: number;
}

/**
 * When a value that is no state is taken anew: at the moment of a change, which is found (a relay that switches, a gap that
 * closes); after every step (what drifts); or with the motion, so that it is what an expression was before anything jumped.
 */
export type ModeTaken = 'at_jumps' | 'after_steps' | 'with_motion';

/** A value of the plant that is no state (which side of a backlash is in contact, whether a relay is on). */
export interface Mode {
  name: string;
  next: Node;
  start: number;
  taken: ModeTaken;
}

/** After every step of the movement a state is brought to a value: a stop that it cannot pass, a reset. */
export interface Correction {
  state: number;
  value: Node;
}

/** A copy of an input, or of a state that the scenario sets, for signals behind a dead time: as it was `delay` s ago. */
export interface DelayedSource {
  kind: 'input' | 'state';
  index: number;
  source: number;
  delay: Node;
}

/** What a scenario does to an input or to a state of its own: from each time (s) on a new value, or so much more. */
export interface ProgrammedChange {
  kind: 'input' | 'state';
  index: number;
  how: 'add' | 'set';
  /** Whether it is the same for every plant. */
  common: boolean;
  /** For a plant, from its parameters. */
  changes: (plant: Evaluation) => { time: number; value: number }[];
}

/** A number that a controller keeps from one sampling instant to the next. */
export interface Memory {
  name: string;
  task: number;
  next: Node;
  start: number;
}

/** A count that a task keeps since the start. It tells of the equations and is no part of them. */
export interface Counter {
  name: string;
  task: number;
  next: Node;
}

/** A sensor's value at the sampling instants of one task, in the sensor's declared unit. */
export interface Reading {
  sensor: string;
  task: number;
  sampled: Node;
}

/** A value that stays as it is between deliveries: an actuator's output, or a signal on its way to another controller. */
export interface Held {
  name: string;
  /** By which channel it is delivered; an index into `channels`. */
  channel: number;
  /** Computed at the sampling instant of the channel's task. */
  value: Node;
}

/** A way from a task to whoever takes its results: they arrive `delay` s after the sampling instant. */
export interface Channel {
  task: number;
  delay: Node;
}

/** A controller as a periodic task. Times are in s and may depend on parameters. */
export interface Task {
  name: string;
  place: Place;
  period: Node;
  phase: Node;
  /** In traces every sampling instant is late by a random time from 0 to this. */
  jitter: Node;
}

/** Ends of a signal's own range and the size of one step of it (0 where it has none), SI. */
export interface SignalRange {
  low: Node;
  high: Node;
  resolution: Node;
}

/** How a named signal can be followed over time; SI. */
export type TracedSignal = {
  range: SignalRange | undefined;
} /** Between instants it moves with the states; jumps only when inputs or held values do. */ & (
  | { kind: 'continuous'; value: Node }
  /** Changes at the sampling instants of a task only. */
  | { kind: 'sampled'; task: number; value: Node }
);

/** Where the loop is cut: every consumer of the signal sees the leaf `injected` of the same index instead. */
export interface Opening {
  at: string;
  /** The task at whose sampling instants the injected value changes. */
  task: number;
  /** What the signal would have been. */
  returned: Node;
}

/**
 * A closed loop as equations over leaves: parameters, inputs and states in SI, held values, memories and readings as
 * numbered here. Nothing behind this type knows blocks.
 */
export interface Loop {
  graph: Graph;
  parameters: string[];
  /** Inputs by name; copies for dead times come after those of the spec. */
  inputs: string[];
  /** Values of the inputs before anything happens. */
  inputRest: number[];
  states: ContinuousState[];
  modes: Mode[];
  corrections: Correction[];
  /** What the scenario does; empty where the loop was expanded without one. */
  program: ProgrammedChange[];
  memories: Memory[];
  counters: Counter[];
  readings: Reading[];
  held: Held[];
  channels: Channel[];
  /** In the order in which tasks compute that fall on the same instant. */
  tasks: Task[];
  /** For each independent noise source the task at whose sampling instants it is drawn. */
  noises: number[];
  signals: Map<string, TracedSignal>;
  /** None for the closed loop. */
  openings: Opening[];
}

/** Something that only shows when the build's numbers are in: a mistake at a place in the spec. */
export class LoopError extends Error {
  constructor(
    message: string,
    readonly place: Place,
  ) {
    super(message);
  }
}
