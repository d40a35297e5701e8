import type { NumberFormat } from './coefficient.js';
import { FirmwareError, quoted } from './failure.js';
import { nearestNames } from './nearest.js';

const widths = [8, 16, 32, 64] as const;
const plainFormats: Record<string, NumberFormat> = {
  float16: { kind: 'float', bits: 16 },
  float32: { kind: 'float', bits: 32 },
  float64: { kind: 'float', bits: 64 },
  ...Object.fromEntries(
    widths.flatMap((bits): [string, NumberFormat][] => [
      [`int${bits}`, { kind: 'integer', bits, signed: true }],
      [`uint${bits}`, { kind: 'integer', bits, signed: false }],
    ]),
  ),
};

/**
 * The number format that a text names: `float16/32/64`, `int8` … `uint64`, `Qm.n`, `UQm.n`. In `Qm.n` m counts the
 * sign, so that m + n is the stored width: Q2.14 is 16 bits. `Q15` and `Q31` are the usual short forms of Q1.15 and
 * Q1.31 (common practice).
 * @throws FirmwareError `bad_format`, naming the nearest valid choice
 */
export function parseFormat(text: string): NumberFormat {
  const plain = Object.hasOwn(plainFormats, text) ? plainFormats[text] : undefined;
  if (plain) return plain;
  const fixed = /^(U?)Q(?:(\d{1,2})\.)?(\d{1,2})$/.exec(text);
  if (!fixed) throw unknownFormat(text);
  const signed = fixed[1] === '';
  const fractionalBits = Number(fixed[3]);
  const integerBits = fixed[2] === undefined ? (signed ? 1 : 0) : Number(fixed[2]);
  const bits = widths.find((width) => width === integerBits + fractionalBits);
  if (bits === undefined) throw oddWidth(text, signed, integerBits, fractionalBits);
  if (signed && integerBits === 0) {
    throw new FirmwareError(
      'bad_format',
      `format ${quoted(text)}: m counts the sign, so it is at least 1; did you mean Q1.${bits - 1} or U${text}?`,
    );
  }
  return { kind: 'fixed', bits, signed, fractionalBits };
}

/** The text which `parseFormat` reads back as this format. */
export function formatText(format: NumberFormat): string {
  if (format.kind === 'float') return `float${format.bits}`;
  if (format.kind === 'integer') return `${format.signed ? '' : 'u'}int${format.bits}`;
  return `${format.signed ? '' : 'U'}Q${format.bits - format.fractionalBits}.${format.fractionalBits}`;
}

function unknownFormat(text: string): FirmwareError {
  const nearest = nearestNames(text, [...Object.keys(plainFormats), 'Q1.15', 'Q2.14', 'UQ8.8', 'Q16.16']);
  return new FirmwareError(
    'bad_format',
    `format ${quoted(text)} is not known; expected float16/32/64, int8 to int64, uint8 to uint64, Qm.n or UQm.n` +
      (nearest.length > 0 ? `; nearest: ${nearest.join(', ')}` : ''),
  );
}

function oddWidth(text: string, signed: boolean, integerBits: number, fractionalBits: number): FirmwareError {
  const total = integerBits + fractionalBits;
  const bits = widths.find((width) => width >= total) ?? 64;
  const whole = Math.max(signed ? 1 : 0, bits - fractionalBits);
  const cure = `${signed ? '' : 'U'}Q${whole}.${bits - whole}`;
  return new FirmwareError(
    'bad_format',
    `format ${quoted(text)} is ${total} bits wide; m + n (m counts the sign) must be 8, 16, 32 or 64: nearest is ${cure}`,
  );
}
