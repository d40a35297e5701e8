import type { ShapeDescription } from '../../spec/vocabulary.js';
import type { Evaluation } from '../evaluate.js';
import type { Node } from '../graph.js';

/** A value from a time (s) on. */
export interface Change {
  time: number;
  value: number;
}

/** One use of a shape in a scenario: its settings as expressions of parameters. */
export interface ShapeUse {
  name: string;
  at: Node;
  /** Undefined where the spec gives none: to the end of the scenario. */
  lasts: Node | undefined;
  setting: (name: string) => Node | undefined;
  /** Times (s) and values (SI) of a setting that is given by points. */
  points: (name: string) => readonly Change[];
  /** Length of the scenario, s. */
  scenarioLasts: number;
  /** For random shapes: the same for every plant. */
  seed: number;
}

/** What a shape can do to its input. Lists of changes are made for each plant from its parameters. */
export interface InputDesk {
  number: (value: number) => Node;
  multiply: (a: Node, b: Node) => Node;
  sine: (angle: Node) => Node;
  /** Adds to the input at certain times. */
  add: (changes: (plant: Evaluation) => Change[]) => void;
  /** A quantity that is zero until it is set, and then constant until it is set again. */
  constant: (name: string, changes: (plant: Evaluation) => Change[]) => Node;
  /** A state that is zero until it is set, and then moves by its own rate. */
  motion: (name: string, rate: (state: Node) => Node, sets: (plant: Evaluation) => Change[]) => Node;
}

/** Something that an input can do: what the spec reader must know of it, and how it becomes changes and motions. */
export interface Shape {
  description: ShapeDescription;
  /** Returns what is to be added to the input beside the changes, or nothing. */
  build: (use: ShapeUse, desk: InputDesk) => Node | undefined;
}

/** When a shape ends: after its length, or with the scenario. */
export function endOf({ at, lasts, scenarioLasts }: ShapeUse, plant: Evaluation): number {
  return lasts ? plant.of(at) + plant.of(lasts) : scenarioLasts;
}
