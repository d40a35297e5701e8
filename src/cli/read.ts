import { type Coefficient, compareImages, type ImageComparison } from '../firmware/index.js';
import { coefficientTable, placeTable } from '../report/coefficient_table.js';
import { comparisonTable } from '../report/comparison_table.js';
import { lawTable } from '../report/law_table.js';
import { type Json, stableJson } from '../report/stable_json.js';
import type { CoefficientRead } from '../verdict/run.js';
import { coefficientEntries, comparisonEntries } from './coefficient_entries.js';
import { coefficientsAt } from './numbers_read.js';
import { faultOf, openNamedImage } from './open_image.js';
import { type BuildOptions, type BuildRead, readBuild } from './read_build.js';
import { readSpec } from './read_spec.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';

export interface ReadOptions extends BuildOptions {
  /** A spec, or an image. */
  source: string;
  /** What to read from an image: paths or patterns; everything where there are none. */
  paths: readonly string[];
  /** An older image to compare with. */
  against: string | undefined;
  /** The ELF file with the names, for an image without. */
  symbols: string | undefined;
  json: boolean;
}

/** Prints the coefficients of a spec, or of an image, as the build holds them, or what differs from another image. */
export async function read(options: ReadOptions, around: Surroundings): Promise<ExitStatus> {
  const isSpec = /\.ya?ml$/.test(options.source);
  const read = isSpec ? await readOfSpec(options, around) : await readOfImage(options, around.cwd);
  around.print(options.json ? read.json() : read.text());
  return 0;
}

/** What was read, in either form. */
interface Shown {
  text: () => string;
  json: () => string;
}

async function readOfSpec(
  options: ReadOptions,
  { cwd, interrupted }: Pick<Surroundings, 'cwd' | 'interrupted'>,
): Promise<Shown> {
  if (options.paths.length > 0)
    throw new Fault([`'pawl read SPEC' shows what the spec names, so '${options.paths[0]}' means nothing`]);
  const spec = await readSpec(cwd, options.source);
  const build = await readBuild(cwd, spec, { ...options, interrupted });
  if (!build) throw new Fault([`${spec.file}: has no firmware section, so there is nothing to read`]);
  if (options.against !== undefined) {
    const before = await readBuild(cwd, spec, { image: options.against, skipBuild: true });
    return shownComparison(namedChanges(before!.coefficients, build.coefficients));
  }
  return {
    text: () => coefficientTable(build.coefficients) + lawText(build.law),
    json: () => entriesText(build.coefficients.flatMap(({ coefficient }) => coefficientEntries(coefficient))),
  };
}

function lawText(law: BuildRead['law']): string {
  return law.length === 0 ? '' : `\n${lawTable(law)}`;
}

async function readOfImage(options: ReadOptions, cwd: string): Promise<Shown> {
  if (options.image !== undefined || options.skipBuild)
    throw new Fault([`'${options.source}' is read as an image, so --image and --skip-build mean nothing`]);
  const paths = options.paths.length > 0 ? options.paths : ['**'];
  const image = await openNamedImage(cwd, options.source, options.symbols);
  if (options.against !== undefined) {
    const before = await openNamedImage(cwd, options.against, options.symbols);
    try {
      return shownComparison(joined(paths.map((path) => compareImages(before, image, path))));
    } catch (error) {
      throw faultOf(error);
    }
  }
  const coefficients = coefficientsAt(image, paths);
  return {
    text: () => placeTable(coefficients),
    json: () => entriesText(coefficients.flatMap(coefficientEntries)),
  };
}

function shownComparison(comparison: ImageComparison): Shown {
  return {
    text: () => comparisonTable(comparison),
    json: () => stableJson(comparisonEntries(comparison)),
  };
}

function entriesText(entries: Json[]): string {
  return `${JSON.stringify(entries, undefined, 2)}\n`;
}

/** The same coefficients read from two images. */
function namedChanges(
  before: readonly CoefficientRead[],
  after: readonly CoefficientRead[],
): ImageComparison {
  const pairs = after.map(({ coefficient }, at) => ({
    path: coefficient.path,
    before: before[at].coefficient,
    after: coefficient,
  }));
  const changed = pairs.filter((pair) => bits(pair.before) !== bits(pair.after));
  return { changed, added: [], vanished: [], unchanged: pairs.length - changed.length };
}

function bits({ type, elements }: Coefficient): string {
  return `${type} ${elements.map(({ stored }) => stored).join(' ')}`;
}

/** Comparisons of several patterns; what two of them fit counts once. */
function joined(all: readonly ImageComparison[]): ImageComparison {
  const once = <T>(of: (one: ImageComparison) => T[], path: (item: T) => string): T[] => [
    ...new Map(all.flatMap(of).map((item) => [path(item), item])).values(),
  ];
  return {
    changed: once(
      ({ changed }) => changed,
      ({ path }) => path,
    ),
    added: once(
      ({ added }) => added,
      ({ path }) => path,
    ),
    vanished: once(
      ({ vanished }) => vanished,
      ({ path }) => path,
    ),
    unchanged: all.reduce((sum, { unchanged }) => sum + unchanged, 0),
  };
}
