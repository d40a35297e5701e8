import { Cursor } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';

/** One line of a file of hexadecimal records. */
export interface TextRecord {
  /** From 1. */
  line: number;
  /** What stands before the hexadecimal digits: `:` or `S` and a digit. */
  mark: string;
  /** Its bytes, checksum included; numbers in them are big-endian. */
  cursor: Cursor;
  bytes: Uint8Array;
}

/**
 * The records of a file, line by line.
 * @param mark what a record begins with
 * @throws FirmwareError `malformed_image` with the line that is no record
 */
export function* textRecords(bytes: Uint8Array, name: string, mark: RegExp): Generator<TextRecord> {
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  let line = 0;
  for (let start = 0; start < text.length; ) {
    const newline = text.indexOf(10, start);
    const end = newline < 0 ? text.length : newline;
    const written = text.toString('latin1', start, Math.min(end, start + longestLine)).trim();
    start = end + 1;
    line++;
    if (written === '') continue;
    const found = mark.exec(written);
    const digits = found ? written.slice(found[0].length) : '';
    if (!found || digits.length < 4 || digits.length % 2 !== 0 || !/^[0-9A-Fa-f]+$/.test(digits)) {
      throw recordError(name, line, `${quoted(written.slice(0, 24))} is no record`);
    }
    const content = Buffer.from(digits, 'hex');
    yield {
      line,
      mark: found[0],
      cursor: new Cursor(content, false, `line ${line} of ${quoted(name)}`),
      bytes: content,
    };
  }
}

/** A record has at most 255 bytes behind its own few: a longer line is cut here, and then found to be damaged. */
const longestLine = 1024;

/** An error in one line, or in the whole file where the line is 0. */
export function recordError(name: string, line: number, trouble: string): FirmwareError {
  if (line === 0) return new FirmwareError('malformed_image', `${quoted(name)}: ${trouble}`);
  return new FirmwareError('malformed_image', `${quoted(name)}, line ${line}: ${trouble}`);
}

/** The low byte of the sum of all bytes. */
export function byteSum(bytes: Uint8Array): number {
  let sum = 0;
  for (const byte of bytes) sum += byte;
  return sum & 0xff;
}
