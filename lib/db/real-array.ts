/**
 * PostgreSQL's binary form of `real[]`: dimensions, null flag, element type, size and lower bound, then length and value of
 * each element (array_send and array_recv in the server's arrayfuncs; all integers big-endian).
 */
const FLOAT4_OID = 700;
const HEADER_BYTES = 20;

export const realArrayBytes = (length: number): number => HEADER_BYTES + 8 * length;

/** Writes `values` at `offset` and returns the offset after them. Shapes: any length from 1. */
export function writeRealArray(target: Buffer, offset: number, values: Float32Array | Float64Array): number {
  target.writeInt32BE(1, offset);
  target.writeInt32BE(0, offset + 4);
  target.writeInt32BE(FLOAT4_OID, offset + 8);
  target.writeInt32BE(values.length, offset + 12);
  target.writeInt32BE(1, offset + 16);
  let at = offset + HEADER_BYTES;
  for (const value of values) {
    target.writeInt32BE(4, at);
    target.writeFloatBE(value, at + 4);
    at += 8;
  }
  return at;
}

/** Reads what array_send made of a one-dimensional `real[]`; a null element becomes NaN. Throws on any other array. */
export function readRealArray(source: Buffer): Float32Array {
  if (source.readInt32BE(0) === 0) return new Float32Array(0);
  if (source.readInt32BE(0) !== 1 || source.readInt32BE(8) !== FLOAT4_OID) {
    throw new RangeError(
      `readRealArray: not a one-dimensional real[] (${source.readInt32BE(0)} dimensions, type ${source.readInt32BE(8)})`,
    );
  }
  const view = new DataView(source.buffer, source.byteOffset, source.byteLength);
  const length = view.getInt32(12);
  const values = new Float32Array(length);
  let at = HEADER_BYTES;
  for (let i = 0; i < length; i++) {
    const bytes = view.getInt32(at);
    values[i] = bytes === 4 ? view.getFloat32(at + 4) : Number.NaN;
    at += bytes === 4 ? 8 : 4;
  }
  return values;
}
