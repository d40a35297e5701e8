import type { NumberFormat } from './coefficient.js';
import { FirmwareError } from './failure.js';

/** The bits of some bytes as one unsigned number, in the byte order of the target. */
export function bitsOf(bytes: Uint8Array, littleEndian: boolean): bigint {
  let bits = 0n;
  for (let i = 0; i < bytes.length; i++) {
    const byte = bytes[littleEndian ? bytes.length - 1 - i : i];
    bits = (bits << 8n) | BigInt(byte);
  }
  return bits;
}

/** Stored bits as text: `0x`, most significant digit first, as wide as the type. */
export function storedText(bits: bigint, width: number): string {
  return `0x${bits.toString(16).padStart(Math.ceil(width / 4), '0')}`;
}

/**
 * The number which stored bits mean.
 * @param bits unsigned, `format.bits` wide
 * @throws FirmwareError `not_exact` for a 64-bit integer which a float64 cannot hold
 */
export function numberOf(bits: bigint, format: NumberFormat): number {
  if (format.kind === 'float') return floatOf(bits, format.bits);
  const integer = format.signed ? BigInt.asIntN(format.bits, bits) : bits;
  const value = Number(integer);
  if (BigInt(value) !== integer || !Number.isSafeInteger(value)) {
    throw new FirmwareError(
      'not_exact',
      `the stored integer ${integer} is beyond 2^53 and cannot be used exactly`,
    );
  }
  return format.kind === 'fixed' ? value / 2 ** format.fractionalBits : value;
}

function floatOf(bits: bigint, width: 16 | 32 | 64): number {
  if (width === 16) return float16Of(Number(bits));
  const view = new DataView(new ArrayBuffer(8));
  if (width === 32) {
    view.setUint32(0, Number(bits));
    return view.getFloat32(0);
  }
  view.setBigUint64(0, bits);
  return view.getFloat64(0);
}

/** IEEE 754-2019 binary16: 1 sign bit, 5 of exponent (bias 15), 10 of significand. */
function float16Of(bits: number): number {
  const sign = bits & 0x8000 ? -1 : 1;
  const exponent = (bits >> 10) & 0x1f;
  const fraction = bits & 0x3ff;
  if (exponent === 0x1f) return fraction === 0 ? sign * Number.POSITIVE_INFINITY : Number.NaN;
  if (exponent === 0) return sign * fraction * 2 ** -24;
  return sign * (1 + fraction / 1024) * 2 ** (exponent - 15);
}
