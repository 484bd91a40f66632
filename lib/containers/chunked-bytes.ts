/** Bytes kept in pieces of one length, the last one shorter: a stored file, or anything that answers like one. */
export interface ChunkSource {
  sizeBytes: number;
  chunkBytes: number;
  /** The piece with this number from 0; null when there is none. */
  readChunk: (index: number) => Promise<Uint8Array | null>;
}

/** Pieces kept at hand: a directory is read in small steps that often stay inside one. */
const MOST_KEPT = 3;

/** Random access to a file that is stored in pieces; memory is a few pieces, whatever the file's length. */
export class ChunkedBytes {
  private readonly kept = new Map<number, Promise<Uint8Array>>();
  /** Bytes handed out by `range` so far, for a progress bar. */
  bytesRead = 0;
  /** What the store itself failed with: not the fault of the file, however a reader of it puts that. */
  failure: unknown = undefined;

  constructor(private readonly source: ChunkSource) {}

  get sizeBytes(): number {
    return this.source.sizeBytes;
  }

  /** Up to `length` bytes from `position`; fewer where the file ends. */
  async read(position: number, length: number): Promise<Buffer> {
    const parts: Uint8Array[] = [];
    for await (const part of this.range(position, position + length)) parts.push(part);
    return Buffer.concat(parts);
  }

  /** The bytes from `start` up to but without `end`, or up to the file's end. */
  async *range(start: number, end: number): AsyncGenerator<Uint8Array> {
    const { chunkBytes, sizeBytes } = this.source;
    const stop = Math.min(end, sizeBytes);
    for (let at = start; at < stop;) {
      const index = Math.floor(at / chunkBytes);
      const chunk = await this.chunk(index);
      const from = at - index * chunkBytes;
      const part = chunk.subarray(from, Math.min(chunk.length, stop - index * chunkBytes));
      if (part.length === 0) throw (this.failure = new Error(`chunk ${index} is shorter than its file says`));
      at += part.length;
      this.bytesRead += part.length;
      yield part;
    }
  }

  private chunk(index: number): Promise<Uint8Array> {
    const known = this.kept.get(index);
    if (known) return known;
    const read = this.source.readChunk(index).then((chunk) => {
      if (chunk === null) throw new Error(`chunk ${index} of a stored file is missing`);
      return chunk;
    });
    // A failed read is told to whoever waits for it, and is not kept.
    read.catch((error: unknown) => {
      this.failure = error;
      this.kept.delete(index);
    });
    this.kept.set(index, read);
    const [oldest] = this.kept.keys();
    if (this.kept.size > MOST_KEPT && oldest !== undefined) this.kept.delete(oldest);
    return read;
  }
}
