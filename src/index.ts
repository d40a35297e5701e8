/**
 * The library: what the command line does, for programs. `check` does the main job; the others are its parts, from the text
 * of a spec and the bytes of an image to a report.
 */
export { type CheckOptions, type CheckResult, check } from './check.js';
export { vocabulary } from './cli/vocabulary.js';
export {
  type Coefficient,
  type CoefficientRequest,
  compareImages,
  FirmwareError,
  type FirmwareImage,
  type ImageComparison,
  openImage,
  openImageFile,
  readCoefficient,
  readCoefficients,
} from './firmware/index.js';
export {
  type Fault,
  htmlReport,
  junitOf,
  markdownSummary,
  type ReportExtras,
  runJson,
  type SpecPlots,
} from './report/index.js';
export { formatSpecError, loadSpec } from './spec/index.js';
export { jsonSchemaOf } from './spec/json_schema.js';
export type { LoadedSpec } from './spec/load_spec.js';
export type { Place, Requirement, Spec, SpecError } from './spec/spec.js';
export { judgeSpec } from './verdict/judge_spec.js';
export type { FinishedRun, RequirementRun, SpecRun, Verdict } from './verdict/run.js';
