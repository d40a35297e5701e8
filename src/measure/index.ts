import { delayMargin } from './delay_margin.js';
import { gainMargin } from './gain_margin.js';
import type { Measure } from './measure.js';
import { modulusMargin } from './modulus_margin.js';
import { overshoot } from './overshoot.js';
import { peakDeviation } from './peak_deviation.js';
import { phaseMargin } from './phase_margin.js';
import { saturatedShare } from './saturated_share.js';
import { settlingTime } from './settling_time.js';

/** Every measure that a requirement can name. */
export const measures: readonly Measure[] = [
  overshoot,
  settlingTime,
  peakDeviation,
  saturatedShare,
  gainMargin,
  phaseMargin,
  delayMargin,
  modulusMargin,
];

const byName = new Map(measures.map((measure) => [measure.description.name, measure]));

/** The measure of this name; the spec reader has made sure that there is one. */
export function measureNamed(name: string): Measure {
  return byName.get(name)!;
}
