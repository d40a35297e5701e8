import type { MeasureResult } from '../measure/measure.js';
import type { Plant } from '../perturb/plants.js';
import type { Judgement } from './judge.js';

/** A plant with what one requirement's measure gave for it. */
export interface TriedPlant {
  plant: Plant;
  result: MeasureResult;
  judgement: Judgement;
}

/** How many independent plants were tried, and how many of them failed; `why` tells of the first that was not judged. */
export interface IndependentCount {
  tried: number;
  broken: number;
  unjudged: number;
  why: string | undefined;
}

const kept = 8;

/** What is kept of the plants tried against one requirement: counts and the few that matter, however many there are. */
export class Tally {
  readonly counts = { tried: 0, broken: 0, unjudged: 0 };
  readonly independent: IndependentCount = { tried: 0, broken: 0, unjudged: 0, why: undefined };
  nominal: TriedPlant | undefined;
  /** The worst, worst first; of equals the one tried first. */
  readonly worst: TriedPlant[] = [];
  /** Of those that broke the one with the fewest parameters moved; of equals the one tried first. */
  simplest: TriedPlant | undefined;
  private fewest = Number.POSITIVE_INFINITY;

  constructor(private readonly nominalValues: ArrayLike<number>) {}

  add(tried: TriedPlant): void {
    const { plant, judgement } = tried;
    if (plant.origin === 'nominal') this.nominal = tried;
    this.counts.tried++;
    if (judgement.kind !== 'met') this.counts[judgement.kind]++;
    if (plant.origin === 'independent') this.addIndependent(judgement);
    if (judgement.kind === 'broken') this.addBroken(tried);
    this.keepIfWorst(tried);
  }

  /** Puts the confirmed results of a plant in the place of what was tried. */
  confirm(tried: TriedPlant, confirmed: TriedPlant): void {
    this.worst.splice(this.worst.indexOf(tried), 1);
    if (tried === this.nominal) this.nominal = confirmed;
    this.keepIfWorst(confirmed);
  }

  private addIndependent(judgement: Judgement): void {
    this.independent.tried++;
    if (judgement.kind === 'broken') this.independent.broken++;
    if (judgement.kind !== 'unjudged') return;
    this.independent.unjudged++;
    this.independent.why ??= judgement.why;
  }

  private addBroken(tried: TriedPlant): void {
    const { values } = tried.plant;
    let moved = 0;
    for (let i = 0; i < values.length; i++) if (values[i] !== this.nominalValues[i]) moved++;
    if (moved >= this.fewest) return;
    this.fewest = moved;
    this.simplest = tried;
  }

  private keepIfWorst(tried: TriedPlant): void {
    const at = this.worst.findIndex(({ judgement }) => tried.judgement.rank < judgement.rank);
    if (at < 0 && this.worst.length >= kept) return;
    this.worst.splice(at < 0 ? this.worst.length : at, 0, tried);
    if (this.worst.length > kept) this.worst.pop();
  }
}
