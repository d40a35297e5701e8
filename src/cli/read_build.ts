import { readFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import {
  type BuildRecord,
  type Coefficient,
  describeImage,
  FirmwareError,
  type FirmwareImage,
  type FunctionCode,
  formatText,
  functionCode,
  openImage,
  readCoefficients,
  runBuild,
} from '../firmware/index.js';
import type { CoefficientValues, StoredNumbers } from '../loop/parts.js';
import { formatSpecError } from '../spec/index.js';
import type { Firmware, Place, Spec } from '../spec/spec.js';
import type { CoefficientRead, Provenance } from '../verdict/run.js';
import { shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';

/** Another image instead of the spec's, or the image as it is. */
export interface BuildOptions {
  /** Relative to the working folder. */
  image: string | undefined;
  skipBuild: boolean;
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
 * Runs the spec's build, unless told otherwise, and reads the coefficients from the image.
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
  const folder = dirname(resolve(cwd, spec.file));
  const path = options.image === undefined ? resolve(folder, firmware.image) : resolve(cwd, options.image);
  const wanted = firmware.build && options.image === undefined && !options.skipBuild;
  const build = wanted ? await buildImage(firmware, folder, path) : undefined;
  const shown = shownPath(cwd, path);
  const image = await openImageFile(
    path,
    shown,
    options.image === undefined ? firmware.imagePlace : undefined,
  );
  return {
    coefficients: readAll(firmware, image),
    law: lawOf(firmware, image),
    provenance: {
      ...provenanceOf(image, shown, build),
      buildSkipped: firmware.build !== undefined && !wanted,
    },
  };
}

async function buildImage(firmware: Firmware, cwd: string, imagePath: string): Promise<BuildRecord> {
  try {
    return await runBuild({
      command: firmware.build!,
      cwd,
      timeLimitSeconds: buildTimeLimitSeconds,
      imagePath,
    });
  } catch (error) {
    throw asFault(error, firmware.place);
  }
}

async function openImageFile(path: string, shown: string, place: Place | undefined): Promise<FirmwareImage> {
  try {
    return openImage(await readFile(path), shown);
  } catch (error) {
    if (error instanceof FirmwareError) throw asFault(error, place);
    const missing = (error as NodeJS.ErrnoException).code === 'ENOENT';
    throw asFault(
      new Error(missing ? `there is no image '${shown}'` : `image '${shown}' cannot be read`),
      place,
    );
  }
}

function asFault(error: unknown, place: Place | undefined): unknown {
  if (!(error instanceof Error)) return error;
  const line = place ? formatSpecError({ place, message: error.message }) : error.message;
  return new Fault([line]);
}

function readAll(firmware: Firmware, image: FirmwareImage): CoefficientRead[] {
  const requests = firmware.coefficients.map(({ name, at, format }) => ({ name, at, format }));
  const { coefficients, errors } = readCoefficients(image, requests);
  if (errors.length > 0) {
    throw new Fault(
      errors.map((error) => {
        const definition = firmware.coefficients.find(({ name }) => name === error.requestName);
        return formatSpecError({ place: definition?.atPlace ?? firmware.place, message: error.message });
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

function provenanceOf(
  image: FirmwareImage,
  shown: string,
  build: BuildRecord | undefined,
): Omit<Provenance, 'buildSkipped'> {
  const { size, sha256, buildId, producers } = describeImage(image);
  return {
    image: shown,
    bytes: size,
    sha256,
    buildId,
    compilers: producers,
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
