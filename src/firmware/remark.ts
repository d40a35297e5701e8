import type { NumberFormat, StoredElement, StoredRemark } from './coefficient.js';

/** Adds to each element the step to the next number of its format, and a remark where a value is conspicuous. */
export function remarked(elements: StoredElement[], format: NumberFormat): StoredElement[] {
  const allOnes = elements.map((element) => /^0x[137]?f+$/.test(element.stored));
  // −1 is an ordinary integer; a whole table of them is flash that nobody wrote.
  const erased = elements.length > 0 && allOnes.every(Boolean);
  return elements.map((element, i) => {
    const remark = erased || (format.kind === 'float' && allOnes[i]) ? 'erased' : remarkOn(element, format);
    const quantum = quantumOf(element.value, format);
    return { ...element, ...(quantum === undefined ? {} : { quantum }), ...(remark ? { remark } : {}) };
  });
}

function remarkOn(element: StoredElement, format: NumberFormat): StoredRemark | undefined {
  if (format.kind !== 'float') return undefined;
  const { value } = element;
  if (Number.isNaN(value)) return 'not_a_number';
  if (!Number.isFinite(value)) return 'infinite';
  return value !== 0 && Math.abs(value) < 2 ** leastExponent(format.bits) ? 'denormal' : undefined;
}

/**
 * The distance from a stored number to the next one: 2^−n for fixed point, 1 for integers, one unit in the last place for
 * floats (IEEE 754-2019, 3.3); undefined for what is not finite.
 */
export function quantumOf(value: number, format: NumberFormat): number | undefined {
  if (format.kind === 'fixed') return 2 ** -format.fractionalBits;
  if (format.kind === 'integer') return 1;
  if (!Number.isFinite(value)) return undefined;
  const exponent = Math.max(exponentOf(Math.abs(value)), leastExponent(format.bits));
  return 2 ** (exponent - fractionBits(format.bits));
}

function fractionBits(bits: 16 | 32 | 64): number {
  return bits === 16 ? 10 : bits === 32 ? 23 : 52;
}

/** Exponent of the smallest normal number. */
function leastExponent(bits: 16 | 32 | 64): number {
  return bits === 16 ? -14 : bits === 32 ? -126 : -1022;
}

/** The exponent e of 2^e ≤ magnitude < 2^(e+1), read from the bits since a logarithm rounds. */
function exponentOf(magnitude: number): number {
  const view = new DataView(new ArrayBuffer(8));
  view.setFloat64(0, magnitude);
  const field = (view.getUint16(0) >> 4) & 0x7ff;
  return field === 0 ? -1074 : field - 1023;
}
