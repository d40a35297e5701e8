import type { NumberFormat } from '../coefficient.js';
import { numberOf, storedText } from '../decode_number.js';
import { FirmwareError, quoted } from '../failure.js';
import { formatText } from '../number_format.js';

/**
 * The bits in which a format stores a number, and the value which they mean. A float is rounded to the nearest of the format, as
 * a compiler does; an integer, the raw one where the format is fixed-point, must fit.
 * @throws FirmwareError `format_mismatch` for a number that the format cannot hold
 */
export function encoded(
  given: { value: number | bigint },
  format: NumberFormat,
  what: string,
): { value: number; stored: string } {
  const bits =
    format.kind === 'float'
      ? floatBits(Number(given.value), format.bits, what)
      : integerBits(given.value, format, what);
  return { value: numberOf(bits, format), stored: storedText(bits, format.bits) };
}

function integerBits(
  value: number | bigint,
  format: NumberFormat & { kind: 'integer' | 'fixed' },
  what: string,
): bigint {
  if (typeof value === 'number' && !Number.isSafeInteger(value)) {
    throw new FirmwareError(
      'format_mismatch',
      `${quoted(what)} is ${value}: ${formatText(format)} stores integers only; leave the format out, or give the stored integer`,
    );
  }
  const whole = BigInt(value);
  const bits = BigInt.asUintN(format.bits, whole);
  if ((format.signed ? BigInt.asIntN(format.bits, bits) : bits) !== whole) {
    throw new FirmwareError(
      'format_mismatch',
      `${quoted(what)} is ${whole}, which does not fit the ${format.bits} bits of ${formatText(format)}`,
    );
  }
  return bits;
}

function floatBits(value: number, bits: 16 | 32 | 64, what: string): bigint {
  const view = new DataView(new ArrayBuffer(8));
  if (bits === 64) {
    view.setFloat64(0, value);
    return view.getBigUint64(0);
  }
  if (bits === 32) {
    view.setFloat32(0, value);
    return BigInt(view.getUint32(0));
  }
  const rounded = float16Bits(value);
  if (rounded === undefined)
    throw new FirmwareError(
      'format_mismatch',
      `${quoted(what)} is ${value}, which is no float16; it would have to be rounded`,
    );
  return rounded;
}

/** The float16 of exactly this value, undefined when there is none. */
function float16Bits(value: number): bigint | undefined {
  for (let bits = 0n; bits < 0x10000n; bits++) {
    if (Object.is(numberOf(bits, { kind: 'float', bits: 16 }), value)) return bits;
  }
  return undefined;
}
