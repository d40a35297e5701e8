export { baseUnits } from './dimension.js';
export { formatDimension } from './format_dimension.js';
export { functions } from './functions.js';
export type { Includes } from './include.js';
export { type LoadedSpec, loadSpec } from './load_spec.js';
export { formatSpecError } from './problems.js';
export type * from './spec.js';
export type * from './vocabulary.js';
