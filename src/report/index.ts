export { caution } from './caution.js';
export { coefficientTable } from './coefficient_table.js';
export { type Fault, junitOf, junitOfFault } from './junit.js';
export { runJson } from './run_json.js';
export { type TerminalLook, terminalReport } from './terminal.js';
