export { caution } from './caution.js';
export { coefficientTable } from './coefficient_table.js';
export type { Fault } from './fault.js';
export { htmlReport, type ReportExtras } from './html.js';
export { junitOf, junitOfFault } from './junit.js';
export type * from './plots.js';
export { runJson } from './run_json.js';
export { type TerminalLook, terminalReport } from './terminal.js';
