/** How a product loses the bits that its format does not have. */
export const roundings = ['truncate', 'toward_zero', 'nearest', 'half_even'] as const;

/** What becomes of a result outside the format. */
export const overflows = ['saturate', 'wrap'] as const;

/** A fixed-point format; an integer has no fractional bits. Its numbers are multiples of 2^-fractionalBits. */
export interface FixedFormat {
  bits: number;
  signed: boolean;
  fractionalBits: number;
}

/** Widths in which signals are kept; with 64 bits they would not be exact in a trace of float64 numbers. */
const widths = [8, 16, 32];

/**
 * The format that a text names: `Qm.n` and `UQm.n`, where m counts the sign and m + n is the width; `Q15` and `Q31` for Q1.15
 * and Q1.31 (common practice); `int8` … `uint32`. A text where it names none is told from one with a fault in it.
 */
export function parseFixedFormat(text: string): FixedFormat | { fault: string } | undefined {
  const integer = /^(u?)int(\d+)$/.exec(text);
  if (integer) return ofWidth(text, Number(integer[2]), integer[1] === '', 0);
  const fixed = /^(U?)Q(?:(\d{1,2})\.)?(\d{1,2})$/.exec(text);
  if (!fixed) return undefined;
  const signed = fixed[1] === '';
  const fractionalBits = Number(fixed[3]);
  const integerBits = fixed[2] === undefined ? Number(signed) : Number(fixed[2]);
  if (signed && integerBits === 0) return { fault: 'has no bit for its sign: m counts it' };
  return ofWidth(text, integerBits + fractionalBits, signed, fractionalBits);
}

function ofWidth(
  text: string,
  bits: number,
  signed: boolean,
  fractionalBits: number,
): FixedFormat | { fault: string } {
  if (widths.includes(bits)) return { bits, signed, fractionalBits };
  const advice = bits > 32 ? '; wider sums are kept in the `accumulator`' : '';
  const sum = text.includes('Q') ? ' (m + n, where m counts the sign)' : '';
  return { fault: `is ${bits} bits wide${sum}; a signal has 8, 16 or 32${advice}` };
}
