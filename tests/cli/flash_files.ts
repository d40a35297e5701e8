/** Address of the first byte of the flash of the demo's target. */
export const base = 0x08000000;

const hexByte = (value: number): string => (value & 0xff).toString(16).toUpperCase().padStart(2, '0');
const sumOf = (bytes: readonly number[]): number => bytes.reduce((sum, byte) => sum + byte, 0);

/** Rows of sixteen bytes, each with its address on the target. */
function rowsOf(bytes: Uint8Array): { address: number; data: number[] }[] {
  const starts = Array.from({ length: Math.ceil(bytes.length / 16) }, (_, row) => 16 * row);
  return starts.map((start) => ({ address: base + start, data: [...bytes.subarray(start, start + 16)] }));
}

/** Bytes from `base` on as Intel HEX (Intel, revision A, 1988): the sum of all bytes of a record, its checksum included, is 0 modulo 256. */
export function intelHex(bytes: Uint8Array): string {
  const record = (type: number, address: number, data: number[]): string => {
    const all = [data.length, (address >> 8) & 0xff, address & 0xff, type, ...data];
    return `:${[...all, -sumOf(all)].map(hexByte).join('')}`;
  };
  const rows = rowsOf(bytes).map(({ address, data }) => record(0, address & 0xffff, data));
  return [record(4, 0, [base >>> 24, (base >>> 16) & 0xff]), ...rows, ':00000001FF', ''].join('\n');
}

/** Bytes from `base` on as Motorola S-records with addresses of four bytes: the checksum is the ones' complement of the sum. */
export function sRecords(bytes: Uint8Array): string {
  const record = (type: number, address: number, data: number[]): string => {
    const all = [
      data.length + 5,
      address >>> 24,
      (address >>> 16) & 0xff,
      (address >>> 8) & 0xff,
      address & 0xff,
      ...data,
    ];
    return `S${type}${[...all, ~sumOf(all)].map(hexByte).join('')}`;
  };
  return [
    ...rowsOf(bytes).map(({ address, data }) => record(3, address, data)),
    record(7, base, []),
    '',
  ].join('\n');
}
