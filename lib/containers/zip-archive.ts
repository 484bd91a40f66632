import { Readable, pipeline, type Transform } from 'node:stream';
import { createInflateRaw } from 'node:zlib';
import { fromRandomAccessReaderPromise, RandomAccessReader, type Entry, type ZipFile } from 'yauzl';
import { TrendError } from '../trends/types';
import type { ChunkedBytes } from './chunked-bytes';
import { crc32 } from './crc32';
import { entryName } from './member-name';
import { refuseRatio, type UnpackBudget } from './unpack-budget';

const MOST_MEMBERS = 2000;
const LOCAL_HEADER_BYTES = 30;
const STORED = 0;
const DEFLATED = 8;

export interface ZipMember {
  /** As the archive has it; not yet safe to show. */
  path: string;
  isDirectory: boolean;
  isLink: boolean;
  sizeBytes: number;
  entry: Entry;
}

/** A zip archive over stored pieces: the list of its members, and the bytes of each. */
export class ZipArchive {
  private constructor(
    private readonly name: string,
    private readonly bytes: ChunkedBytes,
    private readonly reader: StoredReader,
    private readonly zip: ZipFile,
    readonly members: readonly ZipMember[],
  ) {}

  /**
   * Reads the directory of an archive; `name` is what the file is called in sentences.
   *
   * Throws  TrendError `unsupported`, in words, for an archive that is damaged, cut short, split, encrypted as a whole, has too
   *         many members, or members that share bytes; what the store throws, unchanged.
   */
  static async open(name: string, bytes: ChunkedBytes): Promise<ZipArchive> {
    const reader = new StoredReader(bytes);
    try {
      const zip = await reader.orFailure(
        fromRandomAccessReaderPromise(reader, bytes.sizeBytes, { decodeStrings: false, autoClose: false }),
      );
      if (zip.entryCount > MOST_MEMBERS) throw tooMany(name, zip.entryCount);
      const members = await reader.orFailure(listMembers(zip));
      refuseOverlap(name, members);
      return new ZipArchive(name, bytes, reader, zip, members);
    } catch (error) {
      throw inWords(name, error, bytes);
    }
  }

  /**
   * The unpacked bytes of one member, counted and checked against its size and CRC-32. `label` is its name in sentences.
   *
   * Throws (while iterating)  TrendError `unsupported`, in words, for an encrypted member, another method than stored and
   *                           deflate, damage, a bomb, and what the budget refuses.
   */
  async *read(member: ZipMember, label: string, budget: UnpackBudget): AsyncGenerator<Buffer> {
    const { entry } = member;
    this.refuseUnreadable(entry, label);
    refuseRatio(label, entry.uncompressedSize, entry.compressedSize);
    budget.announce(entry.uncompressedSize);
    let crc = 0;
    let count = 0;
    try {
      for await (const piece of this.inflated(entry)) {
        crc = crc32(piece, crc);
        count += piece.length;
        if (count > entry.uncompressedSize) throw damagedMember(label, 'it is longer than the archive says');
        budget.addInflated(piece.length);
        yield piece;
      }
    } catch (error) {
      if (this.bytes.failure !== undefined || !isZlibError(error)) throw inWords(this.name, error, this.bytes);
      throw damagedMember(label, 'its bytes cannot be unpacked');
    }
    if (count < entry.uncompressedSize) throw damagedMember(label, 'it is shorter than the archive says');
    if (crc !== entry.crc32) throw damagedMember(label, 'its checksum is wrong');
  }

  private async *inflated(entry: Entry): AsyncGenerator<Buffer> {
    const { fileDataStart: start } = await this.reader.orFailure(
      this.zip.readLocalFileHeaderPromise(entry, { minimal: true }),
    );
    const packed = this.bytes.range(start, start + entry.compressedSize);
    if (entry.compressionMethod === STORED) {
      for await (const piece of packed) yield Buffer.from(piece.buffer, piece.byteOffset, piece.byteLength);
      return;
    }
    yield* through(packed, createInflateRaw({ chunkSize: 64 * 1024 }));
  }

  private refuseUnreadable(entry: Entry, label: string): void {
    if (entry.isEncrypted()) {
      const message = `"${label}" is encrypted, and nobody here has its password. Pack it again without a password and send it again.`;
      throw new TrendError('unsupported', message);
    }
    const method = entry.compressionMethod;
    if (method !== STORED && method !== DEFLATED) {
      const message = `"${label}" is packed by a method (number ${method}) that is not read here. Pack it as an ordinary zip file (deflate) and send it again.`;
      throw new TrendError('unsupported', message);
    }
  }
}

/**
 * A source's bytes sent through a stream of node:zlib, in pieces. A failure of the source itself comes out unchanged.
 */
export async function* through(source: AsyncIterable<Uint8Array>, stream: Transform): AsyncGenerator<Buffer> {
  let sourceFailure: unknown;
  const input = Readable.from(source, { objectMode: false });
  input.on('error', (error) => (sourceFailure = error));
  // What goes wrong on the way reaches the loop below through the last stream.
  const output = pipeline(input, stream, () => undefined);
  try {
    yield* output as AsyncIterable<Buffer>;
  } catch (error) {
    throw sourceFailure ?? error;
  }
}

/** Answers the archive library from stored pieces. What it throws in a callback must end the reading, not the process. */
class StoredReader extends RandomAccessReader {
  private fail: (error: unknown) => void = () => undefined;
  private readonly failed = new Promise<never>((_, reject) => (this.fail = reject));

  constructor(private readonly bytes: ChunkedBytes) {
    super();
    this.failed.catch(() => undefined);
  }

  orFailure<Result>(work: Promise<Result>): Promise<Result> {
    return Promise.race([work, this.failed]);
  }

  override _readStreamForRange(start: number, end: number): Readable {
    return Readable.from(this.bytes.range(start, end), { objectMode: false });
  }

  override read(
    buffer: Buffer,
    offset: number,
    length: number,
    position: number,
    callback: (error: Error | null) => void,
  ): void {
    this.bytes
      .read(position, length)
      .then((piece) => {
        piece.copy(buffer, offset);
        callback(piece.length < length ? new Error('unexpected end') : null);
      })
      .catch((error: unknown) => this.fail(error));
  }
}

async function listMembers(zip: ZipFile): Promise<ZipMember[]> {
  const members: ZipMember[] = [];
  for await (const entry of zip.eachEntry()) {
    const path = entryName(entry);
    const isDirectory = path.endsWith('/');
    members.push({ path, isDirectory, isLink: isLink(entry), sizeBytes: entry.uncompressedSize, entry });
  }
  return members;
}

/** A symbolic link, which only archives made on Unix-like systems have: its content is a path. */
const isLink = (entry: Entry): boolean =>
  entry.versionMadeBy >> 8 === 3 && ((entry.externalFileAttributes >>> 16) & 0xf000) === 0xa000;

/** Members that share bytes make a small archive endless. */
function refuseOverlap(name: string, members: readonly ZipMember[]): void {
  const inOrder = members
    .map(({ entry }) => entry)
    .sort((a, b) => a.relativeOffsetOfLocalHeader - b.relativeOffsetOfLocalHeader);
  inOrder.forEach((entry, index) => {
    const next = inOrder[index + 1];
    if (!next) return;
    const end = entry.relativeOffsetOfLocalHeader + LOCAL_HEADER_BYTES + entry.compressedSize;
    if (end <= next.relativeOffsetOfLocalHeader) return;
    throw new TrendError(
      'unsupported',
      `"${name}" is not read: two of its members share the same bytes, which no ordinary zip archive does. Pack it again and send it again.`,
    );
  });
}

const tooMany = (name: string, count: number): TrendError =>
  new TrendError(
    'unsupported',
    `"${name}" has ${count.toLocaleString('en-US')} members; up to ${MOST_MEMBERS.toLocaleString('en-US')} are read. Split it and send the parts one by one.`,
  );

const damagedMember = (label: string, what: string): TrendError =>
  new TrendError('unsupported', `"${label}" is damaged: ${what}. Pack the archive again and send it again.`);

const isZlibError = (error: unknown): boolean =>
  error instanceof Error && 'code' in error && String(error.code).startsWith('Z_');

/** What the archive library says, as a sentence for the person. A failure of the store stays what it is. */
function inWords(name: string, error: unknown, { failure }: ChunkedBytes): unknown {
  if (failure !== undefined) return failure;
  if (error instanceof TrendError || !(error instanceof Error)) return error;
  if (/multi-disk/.test(error.message)) {
    const message = `"${name}" is one part of a split zip archive. Pack it in one piece and send it again.`;
    return new TrendError('unsupported', message);
  }
  if (/encrypt/.test(error.message)) {
    const message = `"${name}" is encrypted, and nobody here has its password. Pack it again without a password and send it again.`;
    return new TrendError('unsupported', message);
  }
  return damaged(name);
}

const damaged = (name: string): TrendError =>
  new TrendError(
    'unsupported',
    `"${name}" is a damaged zip archive, or one that was cut short: its list of members cannot be read. Pack it again and send it again.`,
  );
