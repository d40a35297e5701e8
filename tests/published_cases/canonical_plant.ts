/**
 * The plant section of a transfer function from u to y, as a chain of integrals with the feedback of all of them: time in
 * units of `unit` seconds, so that the states of fast systems are of one size.
 * @param numerator descending powers of s, of a lower degree than the denominator.
 * @param denominator descending powers of s, highest first.
 */
export function canonicalPlant(numerator: number[], denominator: number[], unit = 1): string {
  const n = denominator.length - 1;
  const rate = `(${1 / unit} 1/s)`;
  // In units of time the coefficient of s^k is divided by unit^k; then the highest one is made one.
  const scaled = (of: number[]): number[] => of.map((c, i) => c / unit ** (of.length - 1 - i)).reverse();
  const lead = scaled(denominator)[n];
  const a = scaled(denominator).map((c) => c / lead);
  const b = scaled(numerator).map((c) => c / lead);
  const feedback = Array.from({ length: n }, (_, k) => ` - (${a[k]})*z${k + 1}`).join('');
  return [
    ...Array.from({ length: n - 1 }, (_, k) => `z${k + 1}: { integral: ${rate}*z${k + 2} }`),
    `z${n}: { integral: ${rate}*(u${feedback}) }`,
    `y: { value: ${b.map((c, k) => `(${c})*z${k + 1}`).join(' + ')} }`,
  ].join('\n');
}

/** The coefficients of a sum of two polynomials in descending powers. */
export function sumOf(a: number[], b: number[]): number[] {
  const length = Math.max(a.length, b.length);
  const padded = (of: number[]): number[] => [...new Array<number>(length - of.length).fill(0), ...of];
  const [p, q] = [padded(a), padded(b)];
  return p.map((c, i) => c + q[i]);
}
