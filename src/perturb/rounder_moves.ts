import type { ParameterSpace } from './parameter_space.js';
import type { RounderMoves } from './shrink.js';

/** A rounded value may lie farther from nominal by this share of the way to the bound. */
const tolerance = 5e-3;
const mostDigits = 4;

/**
 * Moves of one parameter to values that are round in its written unit, not nearer to nominal than the given one and at most
 * half a per cent of the way to the bound farther; the roundest first.
 */
export function rounderMovesIn(space: ParameterSpace): RounderMoves {
  return (k, move) => {
    const { nominal, low, high, unit, distribution } = space.parameters[space.free[k]];
    if (distribution?.kind === 'values' || move === space.least[k] || move === space.most[k]) return [];
    const room = move < 0 ? nominal - low : high - nominal;
    const value = (nominal + move * room) / unit.scale;
    const outward = move < 0 ? -1 : 1;
    const moves: number[] = [];
    for (let digits = 1; digits <= mostDigits; digits++) {
      const step = 10 ** (Math.floor(Math.log10(Math.abs(value))) + 1 - digits);
      const round = Math.ceil((value * outward) / step - 1e-9) * step * outward;
      const way = (Number(round.toPrecision(12)) * unit.scale - nominal) / room;
      const size = Math.abs(way);
      const isNear = size >= Math.abs(move) - 1e-12 && size <= Math.min(1, Math.abs(move) + tolerance);
      if (isNear && !moves.includes(way)) moves.push(way);
    }
    return moves;
  };
}
