import type { Node } from '../graph.js';
import type { Block } from './block.js';

/** One zero and one pole. */
export const continuousLeadLag: Block = {
  description: {
    key: 'lead_lag',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    settings: [
      { name: 'lead', kind: 'time_constant', optional: false, meaning: 'time constant T₁ of the zero' },
      { name: 'lag', kind: 'time_constant', optional: false, meaning: 'time constant T₂ of the pole' },
    ],
    meaning: 'y = gain · (1 + T₁ s)/(1 + T₂ s) of',
  },
  keepsRange: false,
  expand: (use, { arithmetic: a, addState }) => {
    const lag = use.setting('lag')!;
    const share = a.divide(use.setting('lead')!, lag);
    const drive = (): Node => a.multiply(use.gain(), use.input());
    const rest = addState(
      `${use.name} pole`,
      () => a.divide(a.subtract(a.multiply(a.subtract(a.number(1), share), drive()), rest), lag),
      0,
    );
    return a.add(a.multiply(share, drive()), rest);
  },
};
