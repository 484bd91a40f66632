import * as zlib from 'node:zlib';

const TABLE = Uint32Array.from({ length: 256 }, (_, byte) => {
  let rest = byte;
  for (let bit = 0; bit < 8; bit++) rest = rest & 1 ? (rest >>> 1) ^ 0xedb88320 : rest >>> 1;
  return rest;
});

/**
 * The CRC-32 of bytes that come in pieces: give the result of the piece before, 0 for the first.
 *
 * Source  ISO/IEC/IEEE 8802-3, the reflected polynomial EDB88320.
 */
export function crc32ByTable(bytes: Uint8Array, before = 0): number {
  let crc = ~before;
  for (let i = 0; i < bytes.length; i++) crc = (crc >>> 8) ^ (TABLE[(crc ^ (bytes[i] ?? 0)) & 0xff] ?? 0);
  return ~crc >>> 0;
}

/** The same; built into Node.js from 20.15 on. */
export const crc32: typeof crc32ByTable = typeof zlib.crc32 === 'function' ? zlib.crc32 : crc32ByTable;
