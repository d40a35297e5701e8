/** Builds the bytes of an image, malformed ones included; numbers are little-endian unless said otherwise. */
export class ByteWriter {
  private readonly bytes: number[] = [];

  constructor(readonly littleEndian = true) {}

  get length(): number {
    return this.bytes.length;
  }

  get result(): Uint8Array {
    return Uint8Array.from(this.bytes);
  }

  number(value: number | bigint, size: number): this {
    let left = BigInt.asUintN(8 * size, BigInt(value));
    const written: number[] = [];
    for (let i = 0; i < size; i++, left >>= 8n) written.push(Number(left & 0xffn));
    this.bytes.push(...(this.littleEndian ? written : written.reverse()));
    return this;
  }

  u8(value: number): this {
    return this.number(value, 1);
  }

  u16(value: number): this {
    return this.number(value, 2);
  }

  u32(value: number): this {
    return this.number(value, 4);
  }

  u64(value: number | bigint): this {
    return this.number(value, 8);
  }

  uleb(value: number | bigint): this {
    let left = BigInt(value);
    do {
      const more = left >= 0x80n;
      this.bytes.push(Number(left & 0x7fn) | (more ? 0x80 : 0));
      left >>= 7n;
    } while (left > 0n);
    return this;
  }

  sleb(value: number | bigint): this {
    let left = BigInt(value);
    for (;;) {
      const low = Number(left & 0x7fn);
      left >>= 7n;
      const done = (left === 0n && low < 0x40) || (left === -1n && low >= 0x40);
      this.bytes.push(low | (done ? 0 : 0x80));
      if (done) return this;
    }
  }

  text(value: string): this {
    this.bytes.push(...Buffer.from(value), 0);
    return this;
  }

  raw(value: Iterable<number>): this {
    this.bytes.push(...value);
    return this;
  }

  /** Overwrites a number which was written as a place-holder. */
  patch(at: number, value: number, size: number): void {
    const fresh = new ByteWriter(this.littleEndian).number(value, size).bytes;
    this.bytes.splice(at, size, ...fresh);
  }
}
