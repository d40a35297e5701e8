import { readShare, readWhole } from './read_quantity.js';
import { readConditions, readCorrelations } from './read_relations.js';
import { readWaivers } from './read_waivers.js';
import type { Reading } from './reading.js';
import type { Merge, ParameterDefinition, Perturbation, Requirement } from './spec.js';
import { childOf, type MapEntry, type Tree, textOf } from './tree.js';

/** What `perturbation:` leaves out. */
export const defaultPerturbation: Perturbation = { plants: 200, seed: 1, confidence: 0.95 };

const mostPlants = 10_000_000;
const largestSeed = 2 ** 32 - 1;

/**
 * `perturbation:` how many plants are drawn, from which seed, the confidence of statements about shares, what the search
 * for the worst may spend, and how the parameters hang together.
 */
export function readPerturbation(
  tree: Tree | undefined,
  parameters: readonly ParameterDefinition[],
  reading: Reading,
): Perturbation {
  const plants = readWhole(childOf(tree, 'plants'), { least: 0, most: mostPlants }, '`plants`', reading);
  const seed = readWhole(childOf(tree, 'seed'), { least: 0, most: largestSeed }, '`seed`', reading);
  const search = readWhole(childOf(tree, 'search'), { least: 0, most: mostPlants }, '`search`', reading);
  const confidenceTree = childOf(tree, 'confidence');
  const confidence = readShare(confidenceTree, '`confidence`', reading);
  if (confidenceTree !== undefined && confidence !== undefined && (confidence <= 0 || confidence >= 1)) {
    reading.problems.add(
      confidenceTree.place,
      '`confidence` is a share above 0 % and below 100 %, such as 95 %',
    );
  }
  return {
    plants: plants ?? defaultPerturbation.plants,
    seed: seed ?? defaultPerturbation.seed,
    confidence: confidence ?? defaultPerturbation.confidence,
    search,
    onlyWhere: readConditions(childOf(tree, 'only_where'), parameters, reading),
    correlations: readCorrelations(childOf(tree, 'correlations'), parameters, reading),
  };
}

/** `merge:` the latched reference, the headroom that a change may cost, and what is let through in spite of it. */
export function readMerge(
  entry: MapEntry | undefined,
  requirements: readonly Requirement[],
  reading: Reading,
): Merge | undefined {
  if (entry?.value.kind !== 'map') return undefined;
  const reference = textOf(childOf(entry.value, 'reference'))?.text ?? '';
  const slipTree = childOf(entry.value, 'may_slip');
  const slip = readShare(slipTree, '`may_slip`', reading);
  if (slipTree !== undefined && slip !== undefined && (slip < 0 || slip > 1)) {
    reading.problems.add(slipTree.place, '`may_slip` is a share of headroom from 0 % to 100 %');
  }
  const waivers = readWaivers(childOf(entry.value, 'waivers'), requirements, reading);
  return { reference, maySlip: slip ?? Number.NaN, place: entry.keyPlace, waivers };
}

/** `pawl:` the format version. */
export function checkVersion(tree: Tree | undefined, reading: Reading): void {
  const text = textOf(tree);
  if (text === undefined || text.text === '1') return;
  reading.problems.add(
    text.place,
    `unknown format version \`${text.text}\`; this version of pawl reads version 1`,
  );
}
