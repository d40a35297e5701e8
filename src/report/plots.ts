import type { Unit } from '../spec/spec.js';

/** What is drawn beside the numbers of a run; one entry for each spec of the run, in the same order. */
export interface ReportPlots {
  specs: SpecPlots[];
}

/** The plots of one spec. Each says by name which requirements it belongs to, and is shown with the first of them. */
export interface SpecPlots {
  traces: TracePlot[];
  loops: OpenLoopPlot[];
  gains: GainPlot[];
  planes: HeadroomPlane[];
  /** What is not drawn, and why. */
  undrawn: Undrawn[];
}

/** Requirements whose loop has no picture: a sentence for people. */
export interface Undrawn {
  requirements: string[];
  why: string;
}

/** A signal over time in one scenario, over some plants. All arrays have one entry for each time. */
export interface TracePlot {
  /** Names of the requirements that are measured on it; at least one. */
  requirements: string[];
  signal: string;
  scenario: string;
  /** In which the signal is shown; the values are SI. */
  unit: Unit;
  /** s, rising; the same time twice where a value jumps. */
  times: readonly number[];
  /** So many plants make the band. */
  plants: number;
  /** Smallest and largest value over these plants at each time, SI. */
  low: readonly number[];
  high: readonly number[];
  nominal: readonly number[];
  /** The latched coefficients on the nominal plant, where there are some and they differ from today's. */
  latched?: readonly number[];
  /** On the worst plant of the first requirement. */
  worst: readonly number[];
  /** What the signal is compared with, where there is such a signal, SI. */
  target: readonly number[] | undefined;
  fences: Fence[];
}

/** A limit in the plane of a trace: a straight line between two points, and the side on which the signal must not be. */
export interface Fence {
  requirement: string;
  /** Time in s and value in SI. */
  from: { time: number; value: number };
  to: { time: number; value: number };
  forbidden: 'above' | 'below' | 'left' | 'right';
}

/** The open loop L over frequency at one signal, so signed that stability is about 1 + L. */
export interface OpenLoopPlot {
  /** Names of the requirements that are measured on it; at least one. */
  requirements: string[];
  /** The signal at which the loop is opened. */
  at: string;
  /** rad/s, rising, above zero. */
  frequencies: readonly number[];
  nominal: FrequencyCurve;
  /** The latched coefficients on the nominal plant, where there are some and they differ from today's. */
  latched?: FrequencyCurve;
  /** On the worst plant of the first requirement. */
  worst: FrequencyCurve;
  margins: MarginBracket[];
  /** The distance of L from −1, where a requirement asks for one. */
  modulus: ModulusBracket | undefined;
  /**
   * Of a signal that changes several times in a cycle of all controllers: the curves are then what is
   * seen of L at one frequency. */
  lifted?: LiftedLoop;
}

/** A loop whose signal changes several times in a cycle, with one input and output of L for each change. */
export interface LiftedLoop {
  changes: number;
  /** The loci of the eigenvalues of L over all frequencies up to half that of the cycle, of either sign. */
  nominal: Locus[];
  latched?: Locus[];
  worst: Locus[];
  /** Where margins are read from the loci. */
  marks: LocusMark[];
}

/** A way through the complex plane. */
export type Locus = readonly { real: number; imaginary: number }[];

/** Where a locus crosses the negative real axis (`gain`) or the circle of radius one (`phase`) nearest to −1. */
export interface LocusMark {
  requirement: string;
  kind: 'gain' | 'phase';
  curve: 'nominal' | 'worst';
  at: { real: number; imaginary: number };
  text: string;
}

/**
 * The size of a response of the loop over frequency with its limits. `sensitivity`: S = 1/(1 + L); `following`: L/(1 + L);
 * `loop`: L itself. Sizes are plain ratios, one for each frequency, not-a-number where there is none.
 */
export interface GainPlot {
  /** Names of the requirements whose limits are drawn; at least one. */
  requirements: string[];
  response: 'sensitivity' | 'following' | 'loop';
  /** The signal at which the loop is opened, or the several, in words. */
  at: string;
  /** How often what is opened changes in a cycle of all controllers. */
  changes: number;
  /**
   * What a size is. `response`: of the one response over frequency. Where there are several changes `any_signal`: the largest
   * singular value; `sine`: the root-mean-square of all that a sine makes over that of the sine, of L what is seen of it at the
   * same frequency.
   */
  meaning: 'response' | 'any_signal' | 'sine';
  /** rad/s, rising, above zero. */
  frequencies: readonly number[];
  /** So many plants make the band. */
  plants: number;
  low: readonly number[];
  high: readonly number[];
  nominal: readonly number[];
  /** The latched coefficients on the nominal plant, where there are some and they differ from today's. */
  latched?: readonly number[];
  /** The worst plants of the requirements, each drawn once, with the names of all whose worst it is. */
  worst: { requirements: string[]; values: readonly number[] }[];
  fences: GainFence[];
  /** Of each requirement the place where its worst plant comes nearest to the limit or goes furthest beyond it. */
  tightest: TightestPlace[];
}

/** A limit on a size over a band of frequencies (rad/s), and the side on which the size must not be. */
export interface GainFence {
  requirement: string;
  from: number;
  to: number;
  value: number;
  forbidden: 'above' | 'below';
}

/** A point of a worst curve. */
export interface TightestPlace {
  requirement: string;
  /** rad/s */
  frequency: number;
  value: number;
  /** The requirement's number there in its own unit, and its headroom. */
  text: string;
}

/** Magnitude as a plain ratio and phase in rad, without jumps of 2π, one entry for each frequency. */
export interface FrequencyCurve {
  magnitude: readonly number[];
  phase: readonly number[];
}

/**
 * A margin to be bracketed. `gain`: at the frequency where the phase is an odd multiple of π, from |L| to 1. `phase`:
 * at the frequency where |L| is 1, from the phase to the odd multiple of π nearest to it.
 */
export interface MarginBracket {
  requirement: string;
  kind: 'gain' | 'phase';
  curve: 'nominal' | 'worst';
  /** rad/s */
  frequency: number;
  /** |L| there (`gain`) or the phase there in rad (`phase`), which is where the bracket begins. */
  start: number;
  /** What is written at it: the margin in the requirement's unit, and its headroom. */
  text: string;
}

/** The limit of a modulus margin (least distance of L from −1, a plain number), and where L comes nearest. */
export interface ModulusBracket {
  requirement: string;
  limit: number;
  curve: 'nominal' | 'worst';
  nearest: { real: number; imaginary: number };
  text: string;
}

/** A requirement's headroom over the plane of two parameters, all others at their nominal values. */
export interface HeadroomPlane {
  requirement: string;
  x: PlaneAxis;
  y: PlaneAxis;
  /** `headroom[row][column]` belongs to `y.values[row]` and `x.values[column]`; a share; NaN where there is no number. */
  headroom: readonly (readonly number[])[];
}

/** One parameter of a plane. */
export interface PlaneAxis {
  parameter: string;
  unit: Unit;
  /** SI, rising, evenly spaced. */
  values: readonly number[];
  nominal: number;
  worst: number;
}
