import { absoluteDeviationIntegral } from './absolute_deviation_integral.js';
import { activity } from './activity.js';
import { bandwidth } from './bandwidth.js';
import { changeSinceLatched } from './change_since_latched.js';
import { coefficientValue } from './coefficient_value.js';
import { complementaryPeak } from './complementary_peak.js';
import { corridorClearance } from './corridor_clearance.js';
import { crossover } from './crossover.js';
import { decayRatio } from './decay_ratio.js';
import { delayMargin } from './delay_margin.js';
import { delayTime } from './delay_time.js';
import { discMargin } from './disc_margin.js';
import { duty } from './duty.js';
import { gainMargin } from './gain_margin.js';
import { holdPhaseLoss } from './hold_phase_loss.js';
import { inverseResponse } from './inverse_response.js';
import { largestEntry } from './largest_entry.js';
import { largestFollowingGain } from './largest_following_gain.js';
import { largestLoopGain } from './largest_loop_gain.js';
import { largestSensitivity } from './largest_sensitivity.js';
import { largestValue } from './largest_value.js';
import { lateDeviationIntegral } from './late_deviation_integral.js';
import { leastDamping } from './least_damping.js';
import { leastFall } from './least_fall.js';
import { leastRise } from './least_rise.js';
import { limitHitCount } from './limit_hit_count.js';
import { longestTimeAtLimit } from './longest_time_at_limit.js';
import { lowestCrossover } from './lowest_crossover.js';
import type { Measure } from './measure.js';
import { modulusMargin } from './modulus_margin.js';
import { noiseGain } from './noise_gain.js';
import { oscillationAmplitude } from './oscillation_amplitude.js';
import { oscillationFrequency } from './oscillation_frequency.js';
import { overTime } from './over_time.js';
import { overflowCount } from './overflow_count.js';
import { overshoot } from './overshoot.js';
import { peakDeviation } from './peak_deviation.js';
import { peakEffort } from './peak_effort.js';
import { phaseMargin } from './phase_margin.js';
import { recoveryTime } from './recovery_time.js';
import { reversalsPerSecond } from './reversals_per_second.js';
import { riseTime } from './rise_time.js';
import { rmsDeviation } from './rms_deviation.js';
import { rmsEffort } from './rms_effort.js';
import { samplingRatio } from './sampling_ratio.js';
import { saturatedShare } from './saturated_share.js';
import { sensitivityPeak } from './sensitivity_peak.js';
import { settlingTime } from './settling_time.js';
import { slewRate } from './slew_rate.js';
import { smallestEntry } from './smallest_entry.js';
import { smallestLoopGain } from './smallest_loop_gain.js';
import { smallestValue } from './smallest_value.js';
import { squaredDeviationIntegral } from './squared_deviation_integral.js';
import { stability } from './stability.js';
import { steadyStateError } from './steady_state_error.js';
import { storedRangeUse } from './stored_range_use.js';
import { timeOfLargestValue } from './time_of_largest_value.js';
import { timeOfSmallestValue } from './time_of_smallest_value.js';
import { travel } from './travel.js';

/** Every measure that a requirement can name. */
export const measures: readonly Measure[] = [
  overshoot,
  inverseResponse,
  largestValue,
  smallestValue,
  timeOfLargestValue,
  timeOfSmallestValue,
  riseTime,
  delayTime,
  settlingTime,
  decayRatio,
  peakDeviation,
  recoveryTime,
  steadyStateError,
  rmsDeviation,
  absoluteDeviationIntegral,
  squaredDeviationIntegral,
  lateDeviationIntegral,
  oscillationAmplitude,
  oscillationFrequency,
  peakEffort,
  rmsEffort,
  saturatedShare,
  longestTimeAtLimit,
  duty,
  travel,
  reversalsPerSecond,
  slewRate,
  overflowCount,
  limitHitCount,
  activity,
  corridorClearance,
  overTime,
  stability,
  gainMargin,
  phaseMargin,
  delayMargin,
  modulusMargin,
  discMargin,
  sensitivityPeak,
  complementaryPeak,
  crossover,
  lowestCrossover,
  bandwidth,
  samplingRatio,
  holdPhaseLoss,
  largestLoopGain,
  smallestLoopGain,
  largestSensitivity,
  largestFollowingGain,
  leastDamping,
  noiseGain,
  coefficientValue,
  largestEntry,
  smallestEntry,
  leastRise,
  leastFall,
  storedRangeUse,
  changeSinceLatched,
];

const byName = new Map(measures.map((measure) => [measure.description.name, measure]));

/** The measure of this name; the spec reader has made sure that there is one. */
export function measureNamed(name: string): Measure {
  return byName.get(name)!;
}
