import { uniformInt } from 'pure-rand/distribution/uniformInt';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/** Up to so many players every coalition is tried. */
export const mostExactPlayers = 10;
/** Orders that are drawn where there are more; each is used forwards and backwards. */
const drawnOrders = 32;

/** How much each player adds to the worth of all, for each of several games over the same players. */
export interface Shares {
  /** By player, then by game. */
  shares: number[][];
  /** Orders that the shares are the mean over; undefined where they are exact. */
  sampledOrders: number | undefined;
}

/**
 * Shares of each player in what all players together are worth more than none: what the player adds, averaged over all orders
 * in which they may join (Shapley, "A value for n-person games", 1953). They add up to the whole. With more than ten players the
 * mean is over a seeded draw of orders, each also backwards; the shares still add up to the whole.
 *
 * @param players how many there are.
 * @param worthOf what the players whose flag is set are worth together, one number for each game; each coalition is asked for once.
 */
export function shapleyShares(
  players: number,
  worthOf: (members: readonly boolean[]) => readonly number[],
  seed: number,
): Shares {
  const known = new Map<string, readonly number[]>();
  const worth = (members: readonly boolean[]): readonly number[] => {
    const key = members.map(Number).join('');
    const found = known.get(key) ?? worthOf(members);
    known.set(key, found);
    return found;
  };
  if (players <= mostExactPlayers) return { shares: exact(players, worth), sampledOrders: undefined };
  const orders = drawOrders(players, seed);
  return { shares: overOrders(players, orders, worth), sampledOrders: orders.length };
}

type Worth = (members: readonly boolean[]) => readonly number[];

function exact(players: number, worth: Worth): number[][] {
  const factorial = (n: number): number => (n <= 1 ? 1 : n * factorial(n - 1));
  return Array.from({ length: players }, (_, player) => {
    let total: number[] = [];
    for (let code = 0; code < 2 ** players; code++) {
      const members = Array.from({ length: players }, (_unused, at) => ((code >> at) & 1) === 1);
      if (members[player]) continue;
      const size = members.filter(Boolean).length;
      const weight = (factorial(size) * factorial(players - size - 1)) / factorial(players);
      const added = difference(worth(members.with(player, true)), worth(members));
      total = added.map((value, game) => (total[game] ?? 0) + weight * value);
    }
    return total;
  });
}

function overOrders(players: number, orders: readonly (readonly number[])[], worth: Worth): number[][] {
  const totals: number[][] = Array.from({ length: players }, () => []);
  for (const order of orders) {
    let members: boolean[] = new Array(players).fill(false);
    for (const player of order) {
      const joined = members.with(player, true);
      const added = difference(worth(joined), worth(members));
      totals[player] = added.map((value, game) => (totals[player][game] ?? 0) + value / orders.length);
      members = joined;
    }
  }
  return totals;
}

/** Seeded orders (Fisher and Yates 1938), each followed by itself backwards, which evens out what comes early. */
function drawOrders(players: number, seed: number): number[][] {
  const generator = xoroshiro128plus(seed);
  return Array.from({ length: drawnOrders }, () => {
    const order = Array.from({ length: players }, (_, at) => at);
    for (let last = players - 1; last > 0; last--) {
      const other = uniformInt(generator, 0, last);
      [order[last], order[other]] = [order[other], order[last]];
    }
    return [order, order.toReversed()];
  }).flat();
}

function difference(a: readonly number[], b: readonly number[]): number[] {
  return a.map((value, at) => value - b[at]);
}
