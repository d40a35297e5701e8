/**
 * Reads coefficients out of a firmware build.
 *
 * `openImage` opens an image, `readCoefficient` and `readCoefficients` read values out of it, `describeImage` says where they come
 * from, `runBuild` makes the image first. Nothing here guesses: there is an exact value or a `FirmwareError`.
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
export { compareImages, type ImageComparison } from './compare_images.js';
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
