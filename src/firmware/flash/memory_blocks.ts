import { hex } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';

/** Bytes which are to stand at an address. */
export interface MemoryBlock {
  address: number;
  bytes: Uint8Array;
}

/**
 * Sorts blocks by address and joins those which touch.
 * @throws FirmwareError `malformed_image` where two of them put different bytes at one address
 */
export function joinedBlocks(blocks: MemoryBlock[], name: string): MemoryBlock[] {
  const sorted = blocks.filter((block) => block.bytes.length > 0).sort((a, b) => a.address - b.address);
  const joined: MemoryBlock[] = [];
  let run: MemoryBlock[] = [];
  let end = -1;
  const close = () => {
    if (run.length > 0)
      joined.push({ address: run[0].address, bytes: Buffer.concat(run.map((block) => block.bytes)) });
  };
  for (const block of sorted) {
    if (block.address > end) {
      close();
      run = [block];
      end = block.address + block.bytes.length;
      continue;
    }
    const overlap = end - block.address;
    checkSame(run, block, overlap, name);
    const fresh = block.bytes.subarray(Math.min(overlap, block.bytes.length));
    run.push({ address: end, bytes: fresh });
    end += fresh.length;
  }
  close();
  return joined;
}

function checkSame(run: MemoryBlock[], block: MemoryBlock, overlap: number, name: string): void {
  if (overlap === 0) return;
  const shared = block.bytes.subarray(0, Math.min(overlap, block.bytes.length));
  const before = bytesAt(run, block.address, shared.length);
  if (!before || Buffer.compare(before, shared) !== 0) {
    throw new FirmwareError(
      'malformed_image',
      `${quoted(name)} puts different bytes at ${hex(block.address)} twice`,
    );
  }
}

/** The bytes of a range, which may be spread over blocks that touch; undefined when one of them is missing. */
export function bytesAt(
  blocks: readonly MemoryBlock[],
  address: number,
  size: number,
): Uint8Array | undefined {
  const parts: Uint8Array[] = [];
  let next = address;
  const end = address + size;
  for (const block of blocks) {
    if (next >= end) break;
    const blockEnd = block.address + block.bytes.length;
    if (next < block.address || next >= blockEnd) continue;
    parts.push(block.bytes.subarray(next - block.address, Math.min(end, blockEnd) - block.address));
    next = Math.min(end, blockEnd);
  }
  return next >= end ? (parts.length === 1 ? parts[0] : Buffer.concat(parts)) : undefined;
}
