/** A decimal number as written, times 10^tens, rounded once: `400` and -6 give exactly the number 0.0004. */
export function timesTenTo(digits: string, tens: number): number {
  const [mantissa, exponent = '0'] = digits.toLowerCase().split('e');
  return Number(`${mantissa}e${Number(exponent) + tens}`);
}

/** A number times a factor; a power of ten moves the decimal point and nothing else. */
export function scaled(value: number, by: number): number {
  const tens = Math.round(Math.log10(Math.abs(by)));
  const power = Number(`1e${tens}`);
  const decimal = Number.isFinite(value) && Number.isFinite(tens) && Math.abs(by / power - 1) < 1e-14;
  return decimal ? timesTenTo(String(value), tens) : value * by;
}
