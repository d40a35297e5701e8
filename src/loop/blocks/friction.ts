import { quotientOf } from '../../spec/dimension.js';
import { LoopError } from '../loop.js';
import type { Block } from './block.js';

/**
 * The force of friction against a speed: viscous, Coulomb, and static with the Stribeck effect (Armstrong-Hélouvry, Dupont and
 * Canudas de Wit 1994, from memory), with the jump at zero speed smoothed over a stated speed.
 */
export const friction: Block = {
  description: {
    key: 'friction',
    rooms: ['plant'],
    takesInput: true,
    takesGain: false,
    settings: [
      {
        name: 'viscous',
        kind: 'expression',
        optional: true,
        dimension: ({ output, input }) => quotientOf(output, input),
        meaning: 'force for a unit of speed b; 0 by default',
      },
      {
        name: 'coulomb',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => output,
        meaning: 'force F of sliding, whatever the speed',
      },
      {
        name: 'static',
        kind: 'expression',
        optional: true,
        dimension: ({ output }) => output,
        meaning: 'force S at the break-away; as coulomb by default',
      },
      {
        name: 'stribeck_speed',
        kind: 'expression',
        optional: true,
        dimension: ({ input }) => input,
        meaning: 'speed v₁ over which the static part fades; needed with `static`',
      },
      {
        name: 'smoothing_speed',
        kind: 'expression',
        optional: false,
        dimension: ({ input }) => input,
        meaning: 'speed v₀ over which the force turns round; slower than this it creeps',
      },
    ],
    meaning: 'y = (F + (S − F)·exp(−(v/v₁)²))·tanh(v/v₀) + b·v, with v = of',
  },
  keepsRange: false,
  expand: (use, { arithmetic: a }) => {
    const speed = use.input();
    const sliding = use.setting('coulomb')!;
    const [still, fading, viscous] = ['static', 'stribeck_speed', 'viscous'].map((name) => use.setting(name));
    if ((still === undefined) !== (fading === undefined)) {
      throw new LoopError(
        `friction '${use.name}' needs 'static' and 'stribeck_speed' together, or neither`,
        use.place,
      );
    }
    let force = sliding;
    if (still && fading) {
      const ratio = a.divide(speed, fading);
      const faded = a.apply('exp', a.apply('negate', a.multiply(ratio, ratio)));
      force = a.add(sliding, a.multiply(a.subtract(still, sliding), faded));
    }
    const turned = a.multiply(force, a.apply('tanh', a.divide(speed, use.setting('smoothing_speed')!)));
    return viscous ? a.add(turned, a.multiply(viscous, speed)) : turned;
  },
};
