/**
 * Reads coefficients out of a firmware build: an exact value, or a `FirmwareError` that says what is wrong and how to cure it.
 *
 * - Opening: `openImageFile(path)` opens a file and finds debug information that was split off; `openImage(bytes, name)` opens bytes
 *   (ELF, Intel HEX, S-records, or a raw binary with its base address); `openSource` reads constants of C and C++ through the real
 *   preprocessor; `openCommand` takes a program's JSON. All give a `FirmwareImage`.
 * - Reading: `readCoefficient(image, request)`, or `readCoefficients(image, requests)` for all values and all errors at once.
 * - Listing: `matchPaths(image, 'azimuth.**')` expands wildcards to paths, `candidates(image)` offers what a first spec may ask
 *   for, `compareImages(before, after)` says what changed, was added and has vanished.
 * - Provenance: `describeImage(image)`; `runBuild` makes the image first, without a shell and under a time limit.
 */
export { type BuildRecord, type BuildRequest, runBuild } from './build.js';
export { type Candidate, candidates } from './candidates.js';
export { type FunctionCode, functionCode } from './code/function_code.js';
export type {
  Coefficient,
  DeclaredAt,
  NumberFormat,
  Scaling,
  StoredElement,
  StoredRemark,
} from './coefficient.js';
export { compareImages, type ImageComparison, readOrNone } from './compare_images.js';
export { describeImage, type ImageDescription } from './describe_image.js';
export { FirmwareError, type FirmwareErrorCode } from './failure.js';
export { type ElfImage, type FirmwareImage, type FlashImage, type OpenOptions, openImage } from './image.js';
export { isPattern, matchPaths } from './match_paths.js';
export { formatText, parseFormat } from './number_format.js';
export { type FileOptions, openImageFile } from './open_file.js';
export { readCoefficient, readCoefficients } from './read_coefficient.js';
export type { CoefficientRequest } from './request.js';
export { openSource, type SourceRequest } from './source/open_source.js';
export { type CommandRequest, openCommand } from './values/run_command.js';
export type { ValuesImage } from './values/values_image.js';
