/**
 * One-sided upper confidence bound for the share of broken plants, from `broken` among `tried` independent ones
 * (Clopper and Pearson, 1934): the share at which so few broken ones would have a probability of 1 − confidence.
 */
export function upperBoundOfShare(broken: number, tried: number, confidence: number): number {
  if (tried === 0 || broken >= tried) return 1;
  if (broken === 0) return -Math.expm1(Math.log1p(-confidence) / tried);
  let [low, high] = [broken / tried, 1];
  for (let round = 0; round < 200; round++) {
    const middle = (low + high) / 2;
    if (middle <= low || middle >= high) break;
    if (atMost(broken, tried, middle) > 1 - confidence) low = middle;
    else high = middle;
  }
  return high;
}

/** Least number of independent plants, none broken, that shows a share of broken plants below `share`. */
export function plantsNeeded(share: number, confidence: number): number {
  return Math.ceil(Math.log1p(-confidence) / Math.log1p(-share));
}

/** Probability of at most k broken among n, each broken with probability p. */
function atMost(k: number, n: number, p: number): number {
  const odds = Math.log(p) - Math.log1p(-p);
  let logTerm = n * Math.log1p(-p);
  let sum = Math.exp(logTerm);
  for (let i = 0; i < k; i++) {
    logTerm += Math.log((n - i) / (i + 1)) + odds;
    sum += Math.exp(logTerm);
  }
  return sum;
}
