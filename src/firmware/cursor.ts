import { FirmwareError } from './failure.js';

/** Longest LEB128 accepted: ten bytes hold 64 bits. */
const longestLeb128 = 10;

/**
 * The one thing that reads bytes of an image. Each read is checked against the end of the region; the first bad
 * read fails and names the region, the offset, what was wanted and what was there.
 */
export class Cursor {
  private readonly view: DataView;

  /**
   * @param bytes the region: a section or a whole file
   * @param region what people call it, e.g. `.debug_info of azimuth.elf`
   * @param position offset of the next read
   * @param end offset behind the last readable byte
   */
  constructor(
    readonly bytes: Uint8Array,
    readonly littleEndian: boolean,
    readonly region: string,
    public position = 0,
    readonly end = bytes.length,
    view?: DataView,
  ) {
    this.view = view ?? new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
    if (end > bytes.length) throw this.failure(`ends at ${hex(end)}, behind its ${bytes.length} bytes`);
  }

  /** Another cursor over the same region. */
  at(position: number): Cursor {
    return new Cursor(this.bytes, this.littleEndian, this.region, 0, this.end, this.view).moveTo(position);
  }

  /** An error which says where in the region the trouble is. */
  failure(trouble: string): FirmwareError {
    return new FirmwareError(
      'malformed_image',
      `${this.region} is damaged at offset ${hex(this.position)}: ${trouble}`,
    );
  }

  /** Whether nothing is left to read. */
  get atEnd(): boolean {
    return this.position >= this.end;
  }

  /** Moves to an offset of the region. @throws FirmwareError outside of it */
  moveTo(offset: number): this {
    if (!(offset >= 0 && offset <= this.end)) throw this.failure(`points to offset ${hex(offset)}, outside`);
    this.position = offset;
    return this;
  }

  /** Passes over bytes. @throws FirmwareError past the end */
  skip(length: number): void {
    this.take(length);
  }

  u8(): number {
    return this.view.getUint8(this.take(1));
  }

  u16(): number {
    return this.view.getUint16(this.take(2), this.littleEndian);
  }

  u32(): number {
    return this.view.getUint32(this.take(4), this.littleEndian);
  }

  u64(): bigint {
    return this.view.getBigUint64(this.take(8), this.littleEndian);
  }

  /** An unsigned number of 1, 2, 3, 4 or 8 bytes; above 2^53 it is no longer exact (only tombstones are that large). */
  unsigned(size: number): number {
    switch (size) {
      case 1:
        return this.u8();
      case 2:
        return this.u16();
      case 3: {
        const [a, b, c] = this.slice(3);
        return this.littleEndian ? a | (b << 8) | (c << 16) : (a << 16) | (b << 8) | c;
      }
      case 4:
        return this.u32();
      case 8:
        return Number(this.u64());
      default:
        throw this.failure(`a number of ${size} bytes is not readable`);
    }
  }

  /** A length or an offset, which must be exact. */
  length(size: number): number {
    const length = this.unsigned(size);
    if (!Number.isSafeInteger(length)) throw this.failure(`a length of ${length} bytes is absurd`);
    return length;
  }

  /** Unsigned LEB128 of up to 64 bits. @throws FirmwareError when overlong */
  uleb64(): bigint {
    let value = 0n;
    for (let i = 0; i < longestLeb128; i++) {
      const byte = this.u8();
      value |= BigInt(byte & 0x7f) << BigInt(7 * i);
      if (byte < 0x80) return BigInt.asUintN(64, value);
    }
    throw this.failure(`a LEB128 number is longer than ${longestLeb128} bytes`);
  }

  /** Signed LEB128 of up to 64 bits. @throws FirmwareError when overlong */
  sleb64(): bigint {
    const start = this.position;
    const value = this.uleb64();
    const digits = 7 * (this.position - start);
    return BigInt.asIntN(Math.min(digits, 64), value);
  }

  /** Unsigned LEB128 as a number. @throws FirmwareError when overlong or above 2^53 */
  uleb(): number {
    const first = this.position < this.end ? this.view.getUint8(this.position) : 0x80;
    if (first < 0x80) {
      this.position += 1;
      return first;
    }
    const value = Number(this.uleb64());
    if (!Number.isSafeInteger(value)) throw this.failure(`the LEB128 number ${value} is absurd`);
    return value;
  }

  /** Passes over a LEB128 number of either sign. */
  skipLeb(): void {
    for (let i = 0; i < longestLeb128; i++) if (this.u8() < 0x80) return;
    throw this.failure(`a LEB128 number is longer than ${longestLeb128} bytes`);
  }

  /** A view of the next bytes, not a copy. */
  slice(length: number): Uint8Array {
    const start = this.take(length);
    return this.bytes.subarray(start, start + length);
  }

  /** Text up to a NUL byte, which is passed over. */
  text(): string {
    const start = this.position;
    this.skipText();
    return textDecoder.decode(this.bytes.subarray(start, this.position - 1));
  }

  /** Passes over text and its NUL byte. */
  skipText(): void {
    const nul = this.bytes.indexOf(0, this.position);
    if (nul < 0 || nul >= this.end) throw this.failure('text without its closing zero byte');
    this.position = nul + 1;
  }

  private take(length: number): number {
    const start = this.position;
    if (!(length >= 0 && start + length <= this.end)) {
      throw this.failure(`wanted ${length} bytes, available ${Math.max(0, this.end - start)}`);
    }
    this.position = start + length;
    return start;
  }
}

const textDecoder = new TextDecoder('utf-8');

/** A number as people read addresses: `0x` and lower-case digits. */
export function hex(value: number | bigint): string {
  return `0x${value.toString(16)}`;
}

/** The first offset from a start on at which a pattern occurs, −1 when there is none. */
export function nextOccurrence(bytes: Uint8Array, pattern: Uint8Array, start: number): number {
  return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).indexOf(pattern, start);
}

/**
 * Offsets at which a pattern occurs, ascending; undefined when there are more than `most` (looking at everything is
 * cheaper then).
 */
export function occurrences(bytes: Uint8Array, pattern: Uint8Array, most: number): number[] | undefined {
  const haystack = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  const found: number[] = [];
  for (let at = haystack.indexOf(pattern); at >= 0; at = haystack.indexOf(pattern, at + 1)) {
    if (found.length >= most) return undefined;
    found.push(at);
  }
  return found;
}

/** The four bytes of a number, in the order of the image. */
export function bytesOfU32(value: number, littleEndian: boolean): Uint8Array {
  const bytes = new Uint8Array(4);
  new DataView(bytes.buffer).setUint32(0, value, littleEndian);
  return bytes;
}
