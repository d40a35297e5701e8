/** The library: what the command line does, for programs. */
export { loadSpec, formatSpecError } from './spec/index.js';
export type { LoadedSpec, Place, Requirement, Spec, SpecError } from './spec/spec.js';
export { vocabulary } from './cli/vocabulary.js';
export { openImage, readCoefficient, readCoefficients, FirmwareError } from './firmware/index.js';
export type { Coefficient } from './firmware/index.js';
export { judgeSpec } from './verdict/judge_spec.js';
export type { FinishedRun, RequirementRun, SpecRun, Verdict } from './verdict/run.js';
