import { dirname, relative, resolve } from 'node:path';
import {
  type BuildRecord,
  type Coefficient,
  describeImage,
  FirmwareError,
  type FirmwareImage,
  type FunctionCode,
  formatText,
  functionCode,
  readCoefficients,
  runBuild,
} from '../firmware/index.js';
import type { CoefficientValues, StoredNumbers } from '../loop/parts.js';
import { formatSpecError } from '../spec/index.js';
import type { Firmware, Spec } from '../spec/spec.js';
import type { CoefficientRead, Provenance } from '../verdict/run.js';
import { withSources } from './locate_sources.js';
import { asFault, type ChosenOrigin, type Folders, openNumbers } from './open_numbers.js';
import { Fault } from './surroundings.js';

/** Another image instead of the spec's, or the image as it is. */
export interface BuildOptions {
  /** Relative to the working folder. */
  image: string | undefined;
  skipBuild: boolean;
  /** Aborted when the user ends the work; ends what is run to get the numbers. */
  interrupted?: AbortSignal;
}

/** The numbers of a build, and where they come from. */
export interface BuildRead {
  coefficients: CoefficientRead[];
  provenance: Provenance;
  /** The functions that hold the control law, in the order of the spec. */
  law: FunctionCode[];
}

const buildTimeLimitSeconds = 600;

/**
 * Runs the spec's build, unless told otherwise, and reads the coefficients from what it made.
 * @throws {Fault} with every coefficient that cannot be read, at its place in the spec.
 */
export async function readBuild(
  cwd: string,
  spec: Spec,
  options: BuildOptions,
): Promise<BuildRead | undefined> {
  const { firmware } = spec;
  if (!firmware) {
    if (options.image !== undefined)
      throw new Fault([`${spec.file}: has no firmware section, so --image means nothing`]);
    return undefined;
  }
  const folders = { cwd, folder: dirname(resolve(cwd, spec.file)) };
  const origin = chosenOrigin(spec.file, firmware, options, folders);
  const wanted = firmware.build && !origin.replaced && !options.skipBuild;
  const { interrupted } = options;
  const build = wanted ? await runBuildOf(firmware, origin, folders, interrupted) : undefined;
  const image = await openNumbers(origin, folders, interrupted);
  const places = [
    cwd,
    folders.folder,
    ...(origin.kind === 'command' ? [] : [dirname(resolve(folders.folder, origin.path))]),
  ];
  return {
    coefficients: await withSources(cwd, places, readAll(firmware, image, folders)),
    law: lawOf(firmware, image),
    provenance: {
      ...provenanceOf(image, build),
      buildSkipped: firmware.build !== undefined && !wanted,
      ...(origin.replaced && { insteadOfSpecs: true }),
    },
  };
}

/** `--image` takes the place of the spec's file; what explains that file still counts where it can. */
function chosenOrigin(
  specFile: string,
  { numbers }: Firmware,
  { image }: BuildOptions,
  { cwd, folder }: Folders,
): ChosenOrigin {
  if (image === undefined) return { ...numbers, replaced: false };
  if (numbers.kind === 'command')
    throw new Fault([`${specFile}: has its numbers from a command, so --image means nothing`]);
  return { ...numbers, path: relative(folder, resolve(cwd, image)), replaced: true };
}

async function runBuildOf(
  firmware: Firmware,
  origin: ChosenOrigin,
  folders: Folders,
  interrupted: AbortSignal | undefined,
): Promise<BuildRecord> {
  // The reader of specs lets no build stand beside a command.
  const path = origin.kind === 'command' ? '' : origin.path;
  try {
    return await runBuild({
      command: firmware.build!,
      cwd: folders.folder,
      timeLimitSeconds: buildTimeLimitSeconds,
      imagePath: resolve(folders.folder, path),
      interrupted,
    });
  } catch (error) {
    throw asFault(error, firmware.place, folders);
  }
}

function readAll(firmware: Firmware, image: FirmwareImage, folders: Folders): CoefficientRead[] {
  const { coefficients, errors } = readCoefficients(image, firmware.coefficients);
  if (errors.length > 0) {
    throw new Fault(
      errors.flatMap((error) => {
        const definition = firmware.coefficients.find(({ name }) => name === error.requestName);
        return (asFault(error, definition?.atPlace ?? firmware.place, folders) as Fault).lines;
      }),
    );
  }
  return firmware.coefficients.map(({ name, place, unit }) => ({
    name,
    place,
    unit,
    coefficient: coefficients.get(name)!,
  }));
}

/** @throws {Fault} with every function that has no machine code of its own, at its place in the spec. */
function lawOf({ law = [] }: Firmware, image: FirmwareImage): FunctionCode[] {
  const faults: string[] = [];
  const found = law.flatMap(({ name, place }) => {
    try {
      return [functionCode(image, name)];
    } catch (error) {
      if (!(error instanceof FirmwareError)) throw error;
      faults.push(formatSpecError({ place, message: error.message }));
      return [];
    }
  });
  if (faults.length > 0) throw new Fault(faults);
  return found;
}

/** An image without names is built by what its file of symbols names as compilers, under that file's build id. */
function provenanceOf(
  image: FirmwareImage,
  build: BuildRecord | undefined,
): Omit<Provenance, 'buildSkipped'> {
  const { name, kind, size, sha256, buildId, producers, symbols } = describeImage(image);
  return {
    image: name,
    kind,
    bytes: size,
    sha256,
    buildId: buildId ?? symbols?.buildId,
    compilers: producers.length > 0 ? producers : (symbols?.producers ?? []),
    symbols: symbols && { image: symbols.name, sha256: symbols.sha256 },
    build: build && { command: build.command, seconds: build.durationSeconds, output: build.output },
  };
}

/** The numbers by the spec's names for them. */
export function valuesOf(build: BuildRead | undefined): CoefficientValues {
  return new Map(build?.coefficients.map(({ name, coefficient }) => [name, storedNumbers(coefficient)]));
}

/** Scaled numbers are no longer those of their format. */
function storedNumbers({ elements, format, scaling }: Coefficient): readonly number[] | StoredNumbers {
  const values = elements.map(({ value }) => value);
  if (scaling) return values;
  const fractionalBits =
    format.kind === 'fixed' ? format.fractionalBits : format.kind === 'integer' ? 0 : undefined;
  return { values, format: formatText(format), fractionalBits };
}
