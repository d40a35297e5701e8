/** Smallest and largest at each of `count` places over those curves that have a value there, and how many curves there are. */
export function boundsOver(
  curves: readonly (readonly number[])[],
  count: number,
): {
  low: number[];
  high: number[];
  plants: number;
} {
  const over = (pick: (...values: number[]) => number): number[] =>
    Array.from({ length: count }, (_, at) => {
      const values = curves.map((curve) => curve[at]).filter(Number.isFinite);
      return values.length === 0 ? Number.NaN : pick(...values);
    });
  return { low: over(Math.min), high: over(Math.max), plants: curves.length };
}
