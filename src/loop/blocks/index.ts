import { backlash } from './backlash.js';
import { biquads } from './biquads.js';
import type { Block } from './block.js';
import { continuousLeadLag } from './continuous_lead_lag.js';
import { continuousTransfer } from './continuous_transfer.js';
import { deadBand } from './dead_band.js';
import { deadTime } from './dead_time.js';
import { estimate } from './estimate.js';
import { feedForward } from './feed_forward.js';
import { friction } from './friction.js';
import { hysteresis } from './hysteresis.js';
import { integral } from './integral.js';
import { lag } from './lag.js';
import { lowPass } from './low_pass.js';
import { movingAverage } from './moving_average.js';
import { notch } from './notch.js';
import { observer } from './observer.js';
import { pid } from './pid.js';
import { pulseTransfer } from './pulse_transfer.js';
import { sampledLeadLag } from './sampled_lead_lag.js';
import { secondOrderLag } from './second_order_lag.js';
import { stateEquationsBlock } from './state_equations.js';
import { stateFeedback } from './state_feedback.js';
import { switchBlock } from './switch.js';
import { table } from './table.js';
import { value } from './value.js';

/** Every block that a spec can use. */
export const blocks: readonly Block[] = [
  value,
  integral,
  lag,
  secondOrderLag,
  continuousLeadLag,
  continuousTransfer,
  stateEquationsBlock,
  deadTime,
  deadBand,
  backlash,
  hysteresis,
  friction,
  pid,
  biquads,
  pulseTransfer,
  lowPass,
  sampledLeadLag,
  movingAverage,
  notch,
  feedForward,
  stateFeedback,
  observer,
  estimate,
  switchBlock,
  table,
];
