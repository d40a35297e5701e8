import { joinedBlocks, type MemoryBlock } from './memory_blocks.js';
import { byteSum, recordError, textRecords } from './text_records.js';

/** Bytes of the address in each type of record; types 5 and 6 hold a count in its place. */
const addressBytes: Record<string, number> = {
  S0: 2,
  S1: 2,
  S2: 3,
  S3: 4,
  S5: 2,
  S6: 3,
  S7: 4,
  S8: 3,
  S9: 2,
};

/**
 * Reads Motorola S-records; every checksum is verified, and so is the count of data records where the file states it.
 * @throws FirmwareError `malformed_image` with the line
 */
export function readSRecords(bytes: Uint8Array, name: string): MemoryBlock[] {
  const blocks: MemoryBlock[] = [];
  let dataRecords = 0;
  let ended = false;
  for (const record of textRecords(bytes, name, /^S\d/)) {
    const { cursor, line, mark } = record;
    const width = addressBytes[mark];
    if (ended) throw recordError(name, line, 'a record behind the end record');
    if (width === undefined) throw recordError(name, line, `records of type ${mark} are reserved`);
    if (byteSum(record.bytes) !== 0xff) throw recordError(name, line, 'the checksum is wrong');
    const count = cursor.u8();
    if (record.bytes.length !== count + 1 || count < width + 1) {
      throw recordError(name, line, `the record has ${record.bytes.length - 1} bytes, but claims ${count}`);
    }
    const address = cursor.unsigned(width);
    if (mark === 'S1' || mark === 'S2' || mark === 'S3') {
      dataRecords++;
      blocks.push({ address, bytes: cursor.slice(count - width - 1) });
    } else if ((mark === 'S5' || mark === 'S6') && address !== dataRecords) {
      throw recordError(name, line, `${address} data records are announced, ${dataRecords} were there`);
    } else if (mark === 'S7' || mark === 'S8' || mark === 'S9') ended = true;
  }
  if (!ended) throw recordError(name, 0, 'the end record (S7, S8 or S9) is missing: the file is cut off');
  return joinedBlocks(blocks, name);
}
