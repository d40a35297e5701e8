import type { Arithmetic } from './arithmetic.js';
import type { BoundPoint, Statement } from './statement.js';

/** A place in a text file; line and column count from 1. */
export interface Place {
  file: string;
  line: number;
  column: number;
}

/**
 * Exponents of m, kg, s, A, K, mol, cd and cycle, in this order. An angle in radians is a plain number (SI Brochure,
 * 2019); a cycle is kept apart so that Hz and rad/s cannot be added by mistake.
 */
export type Dimension = readonly number[];

/** A unit as written in a spec. `scale` is the SI value of one unit (rad/s for rpm, cycle/s for Hz). */
export interface Unit {
  text: string;
  dimension: Dimension;
  scale: number;
}

/** A number with a unit, in SI. */
export interface Quantity {
  value: number;
  unit: Unit;
  place: Place;
}

/** What a name in an expression stands for. Constants are already replaced by their numbers. */
export type NameRole = 'signal' | 'sensor' | 'actuator' | 'input' | 'parameter' | 'coefficient';

/** Operators of two operands. Comparisons give 1 or 0. */
export type Operator = '+' | '-' | '*' | '/' | '^' | '<' | '<=' | '>' | '>=' | '==' | '!=';

/**
 * A checked expression. Plant expressions are in SI. Controller expressions are in the declared units of their signals:
 * every conversion that the units ask for is already there as a multiplication by a number.
 */
export type Expression =
  | { kind: 'number'; value: number; place: Place }
  | { kind: 'name'; role: NameRole; name: string; index: number | undefined; place: Place }
  | { kind: 'negate'; of: Expression; place: Place }
  | { kind: 'operation'; operator: Operator; left: Expression; right: Expression; place: Place }
  | { kind: 'call'; name: string; arguments: Expression[]; place: Place }
  | { kind: 'before'; of: Expression; place: Place };

/**
 * The value of one setting of a block, as its description asks for it. What is `late` is not needed at the same instant.
 * `rows`: a matrix row by row; a list is one row.
 */
export type Setting =
  | { kind: 'expression'; expression: Expression; late?: boolean }
  | { kind: 'rows'; rows: Expression[][]; place: Place; late?: boolean }
  | { kind: 'names'; names: string[]; place: Place; late?: boolean }
  | { kind: 'coefficients'; name: string; place: Place }
  | { kind: 'word'; word: string; place: Place };

/** Two bounds of a signal, each an expression in the signal's own unit (SI in the plant). */
export interface Range {
  low: Expression;
  high: Expression;
}

/** A signal of the plant or of a controller: one block with its settings. */
export interface SignalDefinition {
  name: string;
  place: Place;
  /** The defining key: the name of the block. */
  block: string;
  /** By setting name; the value of the defining key itself, where it is not a mapping, is under the main setting's name. */
  settings: Record<string, Setting>;
  of: Expression | undefined;
  /** Where `of` was given as target and measurement: both, in one unit; `of` is their difference. */
  pair?: { target: Expression; measurement: Expression };
  unit: Unit;
  gain: Expression | undefined;
  range: Range | undefined;
  /** Largest rate in either direction, in the signal's unit a second. */
  slew: Expression | undefined;
  /** The state at the start (SI in the plant, the declared unit in a controller), where the spec gives one. */
  start: number | undefined;
}

/** A sensor: gain and offset, drift, continuous filter, dead time, sample, noise, range, quantum, faults, in this order. */
export interface SensorDefinition {
  name: string;
  place: Place;
  of: Expression;
  unit: Unit;
  gain: Expression | undefined;
  offset: Expression | undefined;
  /** Time constant of the first-order filter in s (a corner frequency is already turned into one). */
  filter: Expression | undefined;
  /** Rate at which the offset drifts from the start of a scenario on, SI. */
  drift: Expression | undefined;
  /** Time by which the reading is late, s. */
  deadTime: Expression | undefined;
  /** Standard deviation of Gaussian noise, SI. */
  noise: Expression | undefined;
  /** Corner of the noise in rad/s; undefined for white noise. */
  noiseCorner: Expression | undefined;
  range: Range | undefined;
  /** Size of one step of the reading, SI. */
  quantum: Expression | undefined;
  /** Share of the samples that are lost: the reading stays as it was. */
  drops: number | undefined;
  /** Between these times (s) of every scenario the reading stays as it was. */
  stuck: { from: Expression; to: Expression } | undefined;
}

/** A controller: signals computed at its sampling instants. */
export interface ControllerDefinition {
  name: string;
  place: Place;
  /** Sampling period in s. */
  every: Expression;
  /** First sampling instant after 0, in s. */
  phase: Expression | undefined;
  /** From the sampling instant to when the outputs take effect, in s. */
  delay: Expression | undefined;
  /** In traces every sampling instant is late by a random time between 0 and this, in s. */
  jitter: Expression | undefined;
  arithmetic: Arithmetic;
  signals: SignalDefinition[];
}

/** An actuator: takes a controller's signal and holds it for the plant. Settings in SI. */
export interface ActuatorDefinition {
  name: string;
  place: Place;
  /** The controller signal it takes. */
  of: string;
  ofPlace: Place;
  unit: Unit;
  resolution: Expression | undefined;
  /** Half width of a band around zero in which it does nothing. */
  deadBand: Expression | undefined;
  range: Range | undefined;
  /** Largest change in either direction, a second. */
  slew: Expression | undefined;
  /** Share of the effect that is left, as a fault; a plain number. */
  effect: Expression | undefined;
  /** Takes a result only at the start, or only in the middle, of a sampling period. */
  update: 'start' | 'middle' | undefined;
  /** A switched output: its mean, or its two levels within each period. */
  pwm: 'mean' | 'ripple' | undefined;
}

/** Something that an input does in a scenario: a shape, added to the input's rest value. Amounts in SI, times in s. */
export interface InputEvent {
  /** The defining key: the name of the shape. */
  shape: string;
  /** By setting name; the value of the defining key itself, where it is no mapping, is under the shape's own name. */
  settings: Record<string, Expression>;
  /** Times (s) and values (SI) by setting name, for shapes that are given by points. */
  points: Record<string, { time: number; value: number }[]>;
  at: Expression;
  /** Undefined where the shape needs none and the spec gives none. */
  lasts: Expression | undefined;
  place: Place;
}

/** Inputs over time, from t = 0 to `lasts` (s). */
export interface Scenario {
  name: string;
  place: Place;
  lasts: number;
  inputs: Record<string, InputEvent[]>;
  /** `rest`: from the point of rest; `zero`: every state zero, as after power-up. */
  start: 'rest' | 'zero';
  /** States (SI) that start elsewhere; the others as `start` says, or where they start freely if there is no rest. */
  startAt: { name: string; value: number; place: Place }[];
}

/** A number read from the build. `unit` is undefined where the spec gives none: the slot's unit, or a plain number. */
export interface CoefficientDefinition {
  name: string;
  place: Place;
  /** Where in the build: symbol, members, indices. */
  at: string;
  atPlace: Place;
  format: string | undefined;
  unit: Unit | undefined;
  /** The value is the stored number × scale + offset; a list has one entry for each element, or each row of a table. */
  scale?: number | number[];
  offset?: number | number[];
  /** Memory without contents in the image, which start-up code clears, is read as 0. */
  startsAtZero?: boolean;
  /** Address on the target in bytes; `at` is then empty. */
  address?: number;
  /** How many numbers stand at `address`; without it one that is no array. */
  count?: number;
}

/**
 * How independent plants draw a parameter between its bounds. `normal`: about the nominal value with a standard deviation
 * (SI), cut at the bounds; `triangular`: most likely at the nominal value; `log_uniform`: the logarithm is uniform;
 * `values`: one of these (SI, ascending), each as likely.
 */
export type Distribution =
  | { kind: 'uniform' | 'triangular' | 'log_uniform' }
  | { kind: 'normal'; deviation: number }
  | { kind: 'values'; values: number[] };

/** An uncertain quantity between bounds (SI). */
export interface ParameterDefinition {
  name: string;
  place: Place;
  unit: Unit;
  nominal: number;
  low: number;
  high: number;
  /** Uniform where nothing is said. */
  distribution?: Distribution;
  /** Follows from other parameters by this expression in SI; bounds and nominal are then its nominal value. */
  derived?: Expression;
}

/** The rank correlation (Spearman 1904) of two parameters in independent plants, between -1 and 1. */
export interface Correlation {
  of: string;
  with: string;
  coefficient: number;
  place: Place;
}

export interface InputDefinition {
  name: string;
  place: Place;
  unit: Unit;
  /** Value before anything happens, SI. */
  rest: number;
}

/** A limit in SI. */
export type Limit = { at_most: number } | { at_least: number } | { between: [number, number] };

/** For which plants a requirement must hold: a share is a number above 0 and below 1. */
export type HoldsFor = 'nominal' | 'all' | number;

/** One measure with one limit. */
export interface Requirement {
  name: string;
  place: Place;
  measure: string;
  /** Signal names by key (`of`, `to`, `at` …), as the measure's description asks for them. */
  signals: Record<string, string>;
  /** Where the loop is opened at several signals at once, in the order written; one alone is `signals.at`. */
  atSeveral?: string[];
  /** Scenario name, for measures of a trace. */
  in: string | undefined;
  /** Numbers by key (`band` …) in SI. */
  quantities: Record<string, number>;
  /** What it says of signals over time, for a measure that asks for it. */
  statement?: Statement | undefined;
  /** Corners of bounds over time by key, for a measure that has some. */
  bounds?: Record<string, BoundPoint[]>;
  /** Signal values (SI) at which the loop is linearised, if not at rest. */
  around: { name: string; value: number; place: Place }[];
  limit: Limit;
  limitPlace: Place;
  /** The unit in which the limit was written; reports use it. */
  unit: Unit;
  /** True where the limit was written in dB. */
  inDecibels: boolean;
  holdsFor: HoldsFor;
  /** Of several builds the names of those that it is for; all of them where not given. */
  forBuilds?: string[];
  /** Stands for |limit| in the headroom where the limit is zero, SI. */
  scale: number | undefined;
  reason: string | undefined;
}

/** A value as written, with its place. */
export interface Located<T> {
  value: T;
  place: Place;
}

/** Where the numbers of a build stand. Paths are relative to the spec file. */
export type NumberOrigin =
  /** A file that the build makes. */
  | {
      kind: 'image';
      path: string;
      place: Place;
      /** Address of the first byte of a raw binary. */
      baseAddress: Located<number> | undefined;
      /** Of a target whose image does not state it. */
      byteOrder: Located<'little' | 'big'> | undefined;
      /** ELF file of the same build, with the names that the image lacks. */
      symbols: Located<string> | undefined;
      /** File with the debug information that was split off from the image. */
      debugFile: Located<string> | undefined;
    }
  /** C or C++ text, read through the preprocessor. */
  | {
      kind: 'source';
      path: string;
      place: Place;
      includePaths: string[];
      /** As after `-D`: `NAME=value`. */
      defines: string[];
      /** The preprocessor with its own arguments; undefined for the usual one. */
      compiler: string[] | undefined;
    }
  /** A program that prints the numbers, run without a shell in the spec file's folder. */
  | { kind: 'command'; command: string[]; place: Place };

export interface Firmware {
  place: Place;
  /** Argument list, run without a shell in the spec file's folder. */
  build: string[] | undefined;
  numbers: NumberOrigin;
  coefficients: CoefficientDefinition[];
  /** Functions that hold the control law: a change of their machine code must be latched. */
  law?: { name: string; place: Place }[];
}

/** One of several builds that a spec judges, with the firmware section as it is for it. */
export interface NamedBuild {
  name: string;
  place: Place;
  firmware: Firmware;
}

export interface Perturbation {
  plants: number;
  seed: number;
  /** As a share, e.g. 0.95. */
  confidence: number;
  /** Plants that the search for the worst may spend on each requirement. */
  search?: number;
  /** Plants count only where each of these is not 0; expressions of parameters in SI. */
  onlyWhere?: Expression[];
  correlations?: Correlation[];
}

/** What a change is compared with, and what it may cost. */
export interface Merge {
  /** The latched reference's path, relative to the spec. */
  reference: string;
  /** Headroom that a change may cost, a share of the limit. */
  maySlip: number;
  place: Place;
  waivers?: Waiver[];
}

/** Lets a known broken requirement be latched, and merged while it gets no worse, for a time. */
export interface Waiver {
  requirement: string;
  reason: string;
  /** The last day on which it counts, as YYYY-MM-DD. */
  until: string;
  place: Place;
}

/** One loop, its firmware, plant, scenarios and requirements, checked; every value in SI unless said otherwise. */
export interface Spec {
  file: string;
  loop: string;
  /** Of several builds the first. */
  firmware: Firmware | undefined;
  /** Where there are several. */
  builds?: NamedBuild[];
  parameters: ParameterDefinition[];
  inputs: InputDefinition[];
  plant: SignalDefinition[];
  sensors: SensorDefinition[];
  controllers: ControllerDefinition[];
  actuators: ActuatorDefinition[];
  scenarios: Scenario[];
  requirements: Requirement[];
  perturbation: Perturbation;
  merge: Merge | undefined;
}

/** Something wrong in a spec: one line for people, at its place. */
export interface SpecError {
  place: Place;
  message: string;
}
