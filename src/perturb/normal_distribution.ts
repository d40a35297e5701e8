/**
 * The share of a standard normal distribution below x, by its series about zero (Marsaglia 2004), to about 1e-16 in
 * absolute terms; 0 and 1 beyond eight standard deviations.
 */
export function normalShareBelow(x: number): number {
  if (x < -8) return 0;
  if (x > 8) return 1;
  let sum = x;
  let term = x;
  for (let i = 3; i < 400 && sum + term !== sum; i += 2) {
    term *= (x * x) / i;
    sum += term;
  }
  return 0.5 + sum * Math.exp(-0.5 * x * x) * (1 / Math.sqrt(2 * Math.PI));
}

/**
 * The x below which a share lies, 0 < share < 1, to about 1e-16 relative (Wichura 1988, algorithm AS 241; coefficients from
 * memory, held against an independent implementation in the tests).
 */
export function normalQuantile(share: number): number {
  const q = share - 0.5;
  if (Math.abs(q) <= 0.425) {
    const r = 0.180625 - q * q;
    return (q * polynomial(middleTop, r)) / polynomial(middleBottom, r);
  }
  const r = Math.sqrt(-Math.log(q < 0 ? share : 1 - share));
  const x =
    r <= 5
      ? polynomial(outerTop, r - 1.6) / polynomial(outerBottom, r - 1.6)
      : polynomial(tailTop, r - 5) / polynomial(tailBottom, r - 5);
  return q < 0 ? -x : x;
}

/** Ascending powers. */
function polynomial(coefficients: readonly number[], x: number): number {
  return coefficients.reduceRight((sum, coefficient) => sum * x + coefficient, 0);
}

const middleTop = [
  3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946, 45921.95393154987,
  67265.7709270087, 33430.57558358813, 2509.0809287301227,
];
const middleBottom = [
  1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271,
  28729.085735721943, 5226.495278852854,
];
const outerTop = [
  1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684,
  0.2417807251774506, 0.022723844989269184, 0.0007745450142783414,
];
const outerBottom = [
  1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457,
  0.0005475938084995345, 1.0507500716444169e-9,
];
const tailTop = [
  6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124,
  0.0012426609473880784, 2.7115555687434876e-5, 2.0103343992922881e-7,
];
const tailBottom = [
  1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 0.0007868691311456133,
  1.8463183175100548e-5, 1.421511758316446e-7, 2.0442631033899397e-15,
];
