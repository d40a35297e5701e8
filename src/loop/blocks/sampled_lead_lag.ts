import type { Block } from './block.js';
import { exactAtSetting, lagRuleSetting, lagSettings, sampledLag } from './first_order.js';

/** One zero and one pole, in a controller. */
export const sampledLeadLag: Block = {
  description: {
    key: 'lead_lag',
    rooms: ['controller'],
    takesInput: true,
    takesGain: true,
    settings: [
      { name: 'lead', kind: 'time_constant', optional: false, meaning: 'time constant T₁ of the zero' },
      { name: 'lag', kind: 'time_constant', optional: false, meaning: 'time constant T₂ of the pole' },
      lagRuleSetting,
      exactAtSetting,
    ],
    meaning:
      'v = gain·of; y = r·v + (1 − r)·w, r = T₁/T₂, where w is v behind a low_pass of T₂ by the same rule: gain · (1 + T₁ s)/(1 + T₂ s) of',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const { arithmetic } = workshop;
    const { graph } = arithmetic;
    const drive = arithmetic.multiply(use.gain(), use.input());
    const lag = lagSettings(use, 'lag');
    const share = graph.apply('divide', use.design('lead')!, lag.timeConstant);
    const rest = graph.apply('subtract', graph.number(1), share);
    const slow = sampledLag(use.name, drive, lag, workshop);
    return arithmetic.sumOfProducts([arithmetic.take(share), arithmetic.take(rest)], [drive, slow]);
  },
};
