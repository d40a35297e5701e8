/** Tells the time in ms, however far from zero. */
export type Clock = () => number;

/** ms that the pictures of one scenario, or one plane, may take. */
const budget = 500;

/**
 * The largest of some counts of runs that fits the budget when one run takes as long as the one that is tried here; with
 * none of them undefined. How fine a picture is may depend on the machine so; what is judged never does.
 * @param counts falling.
 */
export function affordable(counts: readonly number[], run: () => void, now: Clock): number | undefined {
  // The first run of all also compiles.
  run();
  const start = now();
  run();
  const each = now() - start;
  return counts.find((count) => count * each <= budget);
}
