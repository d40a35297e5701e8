export { plotsOf } from './plots_of.js';
