import { joinedBlocks, type MemoryBlock } from './memory_blocks.js';
import { byteSum, recordError, textRecords } from './text_records.js';

const kind = { data: 0, end: 1, segment: 2, startSegment: 3, linear: 4, startLinear: 5 } as const;

/**
 * Reads Intel HEX (Intel, Hexadecimal Object File Format Specification, revision A, 1988); every checksum is verified.
 * @throws FirmwareError `malformed_image` with the line
 */
export function readIntelHex(bytes: Uint8Array, name: string): MemoryBlock[] {
  const blocks: MemoryBlock[] = [];
  let base = 0;
  let ended = false;
  for (const record of textRecords(bytes, name, /^:/)) {
    const { cursor, line } = record;
    if (ended) throw recordError(name, line, 'a record behind the end record');
    if (byteSum(record.bytes) !== 0) throw recordError(name, line, 'the checksum is wrong');
    const length = cursor.u8();
    const address = cursor.u16();
    const type = cursor.u8();
    if (record.bytes.length !== length + 5) {
      throw recordError(
        name,
        line,
        `the record has ${record.bytes.length - 5} bytes of data, but claims ${length}`,
      );
    }
    const data = cursor.slice(length);
    if (type === kind.data) blocks.push({ address: base + address, bytes: data });
    else if (type === kind.end) ended = true;
    else if ((type === kind.segment || type === kind.linear) && length === 2) {
      base = (data[0] * 256 + data[1]) * (type === kind.segment ? 16 : 65536);
    } else if (type !== kind.startSegment && type !== kind.startLinear) {
      throw recordError(name, line, `a record of type ${type} with ${length} bytes is not known`);
    }
  }
  if (!ended) throw recordError(name, 0, 'the end record is missing: the file is cut off');
  return joinedBlocks(blocks, name);
}
