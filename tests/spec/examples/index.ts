import { actuatorMeasures } from './actuator_measures.js';
import { buildMeasures } from './build_measures.js';
import { controllerBlocks } from './controller_blocks.js';
import type { Example, MeasureGroup } from './example.js';
import { loopMeasures } from './loop_measures.js';
import { pidExamples } from './pid.js';
import { plantBlocks } from './plant_blocks.js';
import {
  actuatorExamples,
  arithmeticExamples,
  controllerExamples,
  scenarioExamples,
  sensorExamples,
  signalExamples,
} from './section_examples.js';
import { stepMeasures } from './step_measures.js';

/** Examples of every block. */
export const blockExamples: readonly Example[] = [...plantBlocks, ...pidExamples, ...controllerBlocks];

export { patterns } from './patterns.js';
export { shapeExamples } from './shapes.js';
export { statements } from './statements.js';

/** Examples of every measure, by what it is of. */
export const measureGroups: Record<'trace' | 'loop' | 'firmware', readonly MeasureGroup[]> = {
  trace: [...stepMeasures, ...actuatorMeasures],
  loop: loopMeasures,
  firmware: buildMeasures,
};

/** Examples of the keys of sections, by the mark at which they stand on the page. */
export const sectionExamples: Record<string, readonly Example[]> = {
  'examples of signals': signalExamples,
  'examples of sensors': sensorExamples,
  'examples of controllers': controllerExamples,
  'examples of number formats': arithmeticExamples,
  'examples of actuators': actuatorExamples,
  'examples of scenarios': scenarioExamples,
};
