import { createHash } from 'node:crypto';
import { Readable, pipeline } from 'node:stream';
import { createGunzip } from 'node:zlib';
import { CHUNK_BYTES } from '../db/chunks';
import { problem } from '../http/problem';

/** Files that are neither text nor unpacked later on (zip archives and workbooks are), by their first bytes. */
const UNREADABLE: readonly { magic: readonly number[]; what: string }[] = [
  { magic: [0x50, 0x4b, 0x05, 0x06], what: 'an empty ZIP file' },
  { magic: [0x50, 0x4b, 0x07, 0x08], what: 'one part of a split ZIP file' },
  { magic: [0xd0, 0xcf, 0x11, 0xe0], what: 'an old or a password-protected spreadsheet workbook' },
  { magic: [0x25, 0x50, 0x44, 0x46], what: 'a PDF' },
  { magic: [0x42, 0x5a, 0x68], what: 'a bzip2 file' },
  { magic: [0xfd, 0x37, 0x7a, 0x58, 0x5a], what: 'an xz file' },
  { magic: [0x28, 0xb5, 0x2f, 0xfd], what: 'a zstd file' },
  { magic: [0x52, 0x61, 0x72, 0x21, 0x1a, 0x07], what: 'a RAR file' },
  { magic: [0x37, 0x7a, 0xbc, 0xaf], what: 'a 7z file' },
];
const GZIP = [0x1f, 0x8b];
const SNIFFED_BYTES = 8;

const startsWith = (bytes: Uint8Array, magic: readonly number[]): boolean =>
  magic.every((byte, index) => bytes[index] === byte);

/** Limits on one upload, counted over its files. */
export interface Meter {
  plainBytes: number;
  limitBytes: number;
  /** Throws when what has come in, or what came out of it, is more than the limit. */
  check: () => void;
}

export interface PlainContent {
  /** The file's plain bytes (of a zip archive or a workbook: its own) cut into pieces of a MiB, the last one shorter. A piece is valid until the next is asked for. */
  pieces: AsyncGenerator<Buffer>;
  /** Known once `pieces` has ended. */
  summary: () => { sizeBytes: number; receivedBytes: number; sha256: string; gzip: boolean };
}

/**
 * Reads a file as received: unpacks gzip, hashes and counts the bytes as they came, cuts the plain bytes into pieces.
 *
 * Throws (while iterating)  415 for what is neither text nor a zip archive, in words that say what to do; 400 for gzip that is damaged
 *                           or cut short; what `meter.check` throws.
 */
export function plainContent(name: string, content: Readable, meter: Meter): PlainContent {
  const hash = createHash('sha256');
  let receivedBytes = 0;
  let sizeBytes = 0;
  let gzip = false;

  async function* received(): AsyncGenerator<Buffer> {
    // The connection belongs to the caller: leaving early must not cut it before the refusal has been sent.
    for await (const chunk of content.iterator({ destroyOnReturn: false }) as AsyncIterable<Buffer>) {
      hash.update(chunk);
      receivedBytes += chunk.byteLength;
      meter.check();
      yield chunk;
    }
  }

  async function* plain(): AsyncGenerator<Buffer> {
    const source = received();
    const head = await readHead(source);
    refuseUnreadable(name, head, false);
    gzip = startsWith(head, GZIP);
    if (!gzip) {
      if (head.byteLength > 0) yield head;
      yield* source;
      return;
    }
    const unpacked = unpack(name, head, source);
    const plainHead = await readHead(unpacked);
    refuseUnreadable(name, plainHead, true);
    if (plainHead.byteLength > 0) yield plainHead;
    yield* unpacked;
  }

  async function* counted(): AsyncGenerator<Buffer> {
    for await (const chunk of plain()) {
      sizeBytes += chunk.byteLength;
      meter.plainBytes += chunk.byteLength;
      meter.check();
      yield chunk;
    }
  }

  const summary = () => ({ sizeBytes, receivedBytes, sha256: hash.digest('hex'), gzip });
  return { pieces: cut(counted()), summary };
}

/** Enough bytes to tell what a file is, or all of a shorter one. */
async function readHead(source: AsyncGenerator<Buffer>): Promise<Buffer> {
  let head: Buffer = Buffer.alloc(0);
  while (head.byteLength < SNIFFED_BYTES) {
    const next = await source.next();
    if (next.done === true) break;
    head = head.byteLength === 0 ? next.value : Buffer.concat([head, next.value]);
  }
  return head;
}

/** Throws 415, in words that say what to do, for a file whose first bytes are of a kind that is never read here. */
export function refuseUnreadable(name: string, head: Buffer, packed: boolean): void {
  const found = UNREADABLE.find(({ magic }) => startsWith(head, magic));
  const what = found?.what ?? (packed && startsWith(head, GZIP) ? 'another gzip file' : null);
  if (what === null) return;
  const inside = packed ? 'holds' : 'is';
  const message = `"${name}" ${inside} ${what}, which is not read here. In the program it comes from, export it as CSV and drop that.`;
  throw problem(415, 'Unsupported media type', message);
}

async function* unpack(name: string, head: Buffer, rest: AsyncGenerator<Buffer>): AsyncGenerator<Buffer> {
  async function* packed(): AsyncGenerator<Buffer> {
    yield head;
    yield* rest;
  }
  let sourceFailure: Error | undefined;
  const source = Readable.from(packed(), { objectMode: false });
  source.on('error', (error) => (sourceFailure = error));
  // Everything that goes wrong reaches the loop below through the last stream.
  const gunzip = pipeline(source, createGunzip({ chunkSize: 256 * 1024 }), () => undefined);
  try {
    yield* gunzip as AsyncIterable<Buffer>;
  } catch (error) {
    if (sourceFailure !== undefined) throw sourceFailure;
    if (error instanceof Error && 'code' in error && String(error.code).startsWith('Z_')) {
      const message = `"${name}" is a damaged gzip file, or one that was cut short: it cannot be unpacked to its end. Pack it again and send it again.`;
      throw problem(400, 'Invalid input', message);
    }
    throw error;
  }
}

async function* cut(source: AsyncGenerator<Buffer>): AsyncGenerator<Buffer> {
  const piece = Buffer.allocUnsafe(CHUNK_BYTES);
  let filled = 0;
  for await (const chunk of source) {
    for (let at = 0; at < chunk.byteLength;) {
      const copied = chunk.copy(piece, filled, at);
      at += copied;
      filled += copied;
      if (filled < CHUNK_BYTES) continue;
      yield piece;
      filled = 0;
    }
  }
  if (filled > 0) yield piece.subarray(0, filled);
}
