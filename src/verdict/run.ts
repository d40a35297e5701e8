import type { Coefficient } from '../firmware/coefficient.js';
import type { FirmwareImage } from '../firmware/image.js';
import type { MeasureResult } from '../measure/measure.js';
import type { PlantOrigin } from '../perturb/plants.js';
import type { Reach } from '../perturb/reach.js';
import type { HoldsFor, Limit, Place, Unit } from '../spec/spec.js';
import type { Statement } from '../spec/statement.js';

/**
 * What a run says of a requirement. Only `met` lets a merge through, and `broken` where a waiver covers it. `slipped`: its limit
 * holds, but the firmware lost more headroom against the latched reference than a change may cost.
 */
export type Verdict =
  | { kind: 'met'; headroom: number | undefined }
  | { kind: 'broken'; headroom: number | undefined; why: string }
  | { kind: 'slipped'; headroom: number | undefined; why: string }
  | { kind: 'unjudged'; why: string };

/** The value of one parameter in a plant, and how far it is moved from nominal towards the bound on that side (0 to 1). */
export interface ParameterValue {
  name: string;
  /** SI */
  value: number;
  unit: Unit;
  nominal: number;
  /** Share of the way from nominal to the lower (negative) or upper (positive) bound; 0 at nominal. */
  moved: number;
  /** Said where it follows from other parameters and has no bounds of its own. */
  derived?: true;
}

/** A plant with what the requirement's measure gave for it. */
export interface JudgedPlant {
  origin: PlantOrigin;
  parameters: ParameterValue[];
  result: MeasureResult;
  /** Share of the limit; undefined where there is no number. */
  headroom: number | undefined;
}

/** What stands behind a verdict: so many plants tried, or also a proof for every plant within the bounds. */
export type Evidence = { kind: 'nominal_only' } | { kind: 'tried' | 'proved'; plants: number };

/** What interval branch and bound came to over the whole box of parameters, after so many boxes. */
export type Proof =
  | { kind: 'proved'; boxes: number }
  /** A plant within the bounds breaks it. */
  | { kind: 'refuted'; boxes: number }
  /** On this share of the box it is neither proved nor refuted; the verdict is left to what was tried. */
  | { kind: 'open'; boxes: number; openShare: number; why: string };

/** Runs of one requirement on one plant, beyond the plants that all requirements are tried on. */
export interface Effort {
  /** By the search for the worst. */
  searched: number;
  /** To bring a counterexample near to nominal. */
  shrinking: number;
  /** To find how far the bounds may grow. */
  reach: number;
}

/** How much a parameter matters to a requirement. */
export interface ParameterEffect {
  name: string;
  /** Mean size of the change of headroom (share of the limit) when the parameter goes from one bound to the other. */
  headroom: number;
  /** Standard deviation of that change: large where it depends on the other parameters. */
  spread: number;
}

export interface RequirementRun {
  name: string;
  place: Place;
  measure: string;
  /** Signals by key as the spec gives them, and the scenario. */
  signals: Record<string, string>;
  /** Where the loop is opened at several signals at once; one alone is among `signals`. */
  atSeveral?: string[];
  scenario: string | undefined;
  /** What it says of signals over time, for a measure that asks for it. */
  statement?: Statement;
  reason: string | undefined;
  limit: Limit;
  unit: Unit;
  inDecibels: boolean;
  holdsFor: HoldsFor;
  verdict: Verdict;
  evidence: Evidence;
  nominal: JudgedPlant;
  worst: JudgedPlant;
  /** Plants on which it is broken, or could not be formed. */
  counts: { tried: number; broken: number; unjudged: number };
  /** What may be claimed from the independent plants alone, in words. */
  claim: string | undefined;
  /**
   * The counterexample as near to nominal as it was found to break: few parameters moved, round numbers. Undefined where no
   * plant broke the requirement.
   */
  shrunk?: JudgedPlant;
  /** How far the bounds may grow, or must shrink, before a break was found; for requirements that hold for all plants. */
  reach?: Reach;
  /** The parameters, what matters most first. */
  effects?: ParameterEffect[];
  /** Why it guards nothing, in words for a warning; undefined where it does guard something, or does not hold. */
  guardsNothing?: string;
  /** Undefined where a proof was not tried: traces, or loops for which there is none. */
  proof?: Proof;
  effort?: Effort;
  /** Against the latched reference, where there is one. */
  comparison?: Comparison;
  /** Where the spec waives the requirement. */
  waiver?: WaivedRequirement;
}

/** A coefficient as read from the build, under the spec's name for it. */
export interface CoefficientRead {
  name: string;
  place: Place;
  unit: Unit | undefined;
  coefficient: Coefficient;
  /** Where its number is written in the sources, as a path from the working folder; undefined where they were not found. */
  source?: { file: string; line: number };
}

/** Where the numbers come from. */
export interface Provenance {
  /** The file from the working folder, or the command that printed the numbers. */
  image: string;
  /** What that is; an ELF file where nothing is said. */
  kind?: FirmwareImage['kind'];
  bytes: number;
  sha256: string;
  buildId: string | undefined;
  compilers: string[];
  /** The ELF file that gave the names to an image without any. */
  symbols?: { image: string; sha256: string };
  build: { command: string[]; seconds: number; output: string } | undefined;
  /** Said where the build command of the spec was not run. */
  buildSkipped: boolean;
  /** Said where the image stands in for the one that the spec names. */
  insteadOfSpecs?: boolean;
}

/** Everything found for one spec. */
export interface SpecRun {
  file: string;
  /** The build that was judged, where the spec names several. */
  build?: string;
  loop: string;
  seed: number;
  confidence: number;
  provenance: Provenance | undefined;
  coefficients: CoefficientRead[];
  requirements: RequirementRun[];
  /** Plants that every requirement was tried on, by why they were tried. */
  plants: Record<Exclude<PlantOrigin, 'searched'>, number>;
  /** What searching, shrinking and reach took on top of it, for all requirements together. */
  effort?: Effort;
  /** Wall time of trying the plants alone, in s; for the terminal only. */
  triedSeconds?: number;
  scenarios: { name: string; lasts: number }[];
  /** How often the first step of the integration was halved for all plants. */
  halvings: number;
  /** The work was interrupted: what is here was found before, and no requirement is met. */
  partial?: true;
  /** Said of the `merge:` section. */
  merge: string | undefined;
  /** What changed since the latched reference was written. */
  sinceLatched?: SinceLatched;
  /** Wall time of the judging, in s; for the terminal only. */
  seconds: number;
}

/** A measure's result with its headroom: a share of today's limit, or of the limit of then; undefined where there is no number. */
export interface ComparedResult {
  result: MeasureResult;
  headroom: number | undefined;
}

/**
 * A requirement against the latched reference, worst against worst on the same plants (the nominal one where it only must hold
 * there). From `latched` to `rerun` only spec and plant differ, from `rerun` to `today` only the firmware.
 */
export interface Comparison {
  /** As the reference holds it, under the spec of then; undefined for a requirement that is new. */
  latched: ComparedResult | undefined;
  /** The latched coefficients under today's spec; undefined where they cannot be run, and then `why` says why. */
  rerun: ComparedResult | undefined;
  why?: string;
  today: ComparedResult;
  /** Headroom lost by the firmware, a share of the limit; negative where it gained; undefined where there is no number for it. */
  lost: number | undefined;
  /** What a change may cost, a share of the limit. */
  maySlip: number;
  /** What changed in the spec and bears on this requirement, in words such as "the bounds of friction". */
  fromSpec: string[];
  /** Which changed coefficients lost the headroom, the largest share first; empty where none was lost. */
  attribution: LossShare[];
  /** How many orders of the changes the shares are sampled from; undefined where they are exact. */
  sampledOrders?: number;
}

/** What one changed coefficient has to do with lost headroom. */
export interface LossShare {
  name: string;
  /** Of the whole loss; negative where the change gained headroom. All shares of a loss add up to 1. */
  share: number;
  /** The headroom itself, a share of the limit. */
  lost: number;
}

/** A coefficient whose stored numbers are not those of the latched reference. */
export interface CoefficientChange {
  name: string;
  /** Undefined for a coefficient that is new. */
  latched: readonly number[] | undefined;
  /** Undefined for one that the spec no longer names. */
  today: readonly number[] | undefined;
  /** Places of the elements that differ, in storage order. */
  elements: number[];
  /** Why the latched numbers mean nothing to today's spec, where they do. */
  unlike?: string;
}

/** What is not as it was when the latched reference was written. */
export interface SinceLatched {
  /** Path of the reference, as shown to people. */
  path: string;
  /** Undefined where there is no such file. */
  reference: { reason: string; pawl: string } | undefined;
  coefficients: CoefficientChange[];
  /** In words such as "the bounds of friction". */
  spec: string[];
  /** Functions of the control law whose machine code is another, or is not in the reference. */
  law: string[];
}

/** A waiver of a requirement, and whether it lets the requirement through today. */
export interface WaivedRequirement {
  reason: string;
  /** Its last day, YYYY-MM-DD. */
  until: string;
  letsThrough: boolean;
  /** Why it does not. */
  why?: string;
}

/** A finished run over one or more specs. */
export interface FinishedRun {
  version: string;
  specs: SpecRun[];
}

/** Whether every requirement of every spec is met, or broken and waived. */
export function allMet({ specs }: FinishedRun): boolean {
  return specs.every(({ requirements }) => requirements.every(letsMergeThrough));
}

/** Whether a requirement does not block the merge. */
export function letsMergeThrough({ verdict, waiver }: Pick<RequirementRun, 'verdict' | 'waiver'>): boolean {
  return verdict.kind === 'met' || (verdict.kind === 'broken' && waiver?.letsThrough === true);
}
