import { promisify } from 'node:util';
import { gzip } from 'node:zlib';
import type { EntityManager } from '@mikro-orm/postgresql';
import type { Upload } from '@/entities';
import { startsAsGzip, unpackContainer, type MemberSink, type MemberWriter } from '../containers/unpack-container';
import { UnpackBudget } from '../containers/unpack-budget';
import type { ChunkSource } from '../containers/chunked-bytes';
import { CHUNK_BYTES } from '../db/chunks';
import { query, queryOne } from '../db/sql';
import { withTenant } from '../db/tenant';
import { isZip } from '../trends/encoding';
import type { TrendProblem } from '../trends/types';
import { readChunk } from './import-source';
import { uploadLimitBytes } from './upload-limit';

/** One entry of `upload.files`: a file as received, or a member of one that was a container. */
export interface UploadFile {
  name: string;
  sizeBytes: number;
  receivedBytes?: number;
  sha256?: string;
  gzip?: boolean;
  /** Where its bytes are (upload_chunk.file_index) when that is not its place in the list: of members. */
  fileIndex?: number;
  /** A container whose members follow as entries of their own: it stays for the record, its bytes are gone. */
  unpacked?: boolean;
  /** What of a container was passed over. */
  problems?: TrendProblem[];
}

/** A stored text file of an upload; `index` is its upload_chunk.file_index. */
export interface TextFile {
  index: number;
  name: string;
  sizeBytes: number;
}

export interface UnpackHooks {
  signal: AbortSignal;
  fence: (em: EntityManager) => Promise<void>;
}

const pack = promisify(gzip);

/** The text files of an upload to read, in order: those received as text and the members of its unpacked containers. */
export function textFiles(upload: { files: readonly UploadFile[] }): TextFile[] {
  return upload.files.flatMap(({ name, sizeBytes, fileIndex, unpacked }, place) =>
    unpacked === true ? [] : [{ index: fileIndex ?? place, name, sizeBytes }],
  );
}

/**
 * Makes text files of the zip archives, workbooks and gzip files of a received upload: members become files of the same upload, stored like
 * them. It counts in one transaction at the end, in which `upload.files` names the members (here too, in place) and the
 * containers' own bytes go. Safe to run again: what an attempt left half done is deleted first, and a finished one is recognised.
 * Memory: a few MiB and a workbook's shared strings. Every write is fenced.
 *
 * Returns  the files and what was passed over, as warnings.
 * Throws   TrendError, with a sentence for the person, when a container cannot be unpacked.
 */
export async function unpackUpload(
  upload: Upload,
  hooks: UnpackHooks,
): Promise<{ files: UploadFile[]; problems: TrendProblem[] }> {
  const files: readonly UploadFile[] = upload.files;
  const containers = await findContainers(upload, files, hooks.signal);
  if (containers.length === 0) return { files: [...files], problems: files.flatMap((each) => each.problems ?? []) };

  const inTenant = tenantOf(upload, hooks);
  const firstFree = 1 + Math.max(-1, ...files.map(({ fileIndex }, place) => Math.max(fileIndex ?? 0, place)));
  await inTenant((em) =>
    query(em, `delete from upload_chunk where organization_id = $1 and upload_id = $2 and file_index >= $3`, [
      upload.organizationId,
      upload.id,
      firstFree,
    ]),
  );
  const others = files.filter((_, place) => !containers.includes(place));
  const budget = new UnpackBudget(
    uploadLimitBytes(),
    others.reduce((sum, each) => sum + each.sizeBytes, 0),
  );
  const sink = new ChunkSink(upload, hooks, firstFree);
  const next: UploadFile[] = [...files];
  for (const [nth, place] of containers.entries()) {
    const file = files[place];
    if (!file) continue;
    sink.share = { from: nth / containers.length, to: (nth + 1) / containers.length };
    const problems = await unpackContainer(sink.watched(place, file.sizeBytes), file.name, sink, budget);
    next[place] = { ...file, unpacked: true, problems };
  }
  next.push(...sink.kept);
  await inTenant(async (em) => {
    await query(em, `update upload set files = $3, progress = 0 where id = $2 and organization_id = $1`, [
      upload.organizationId,
      upload.id,
      JSON.stringify(next),
    ]);
    await query(em, `delete from upload_chunk where organization_id = $1 and upload_id = $2 and file_index = any($3)`, [
      upload.organizationId,
      upload.id,
      containers,
    ]);
  });
  // Callers go on with the entity they loaded; the wider entries fit its narrower type where it looks.
  (upload as { files: UploadFile[] }).files = next;
  return { files: next, problems: next.flatMap((each) => each.problems ?? []) };
}

/** Places of the files that are zip archives or gzip by their first bytes; gzip is stored packed only of a resumable upload. */
async function findContainers(upload: Upload, files: readonly UploadFile[], signal: AbortSignal): Promise<number[]> {
  const found: number[] = [];
  for (const [place, { unpacked, fileIndex }] of files.entries()) {
    // A member has been looked at when it was unpacked.
    if (unpacked === true || fileIndex !== undefined) continue;
    signal.throwIfAborted();
    const head = await readChunk(upload.organizationId, upload.id, place, 0);
    if (head !== null && (isZip(head) || startsAsGzip(head))) found.push(place);
  }
  return found;
}

const tenantOf =
  (upload: Upload, hooks: UnpackHooks) =>
  <Result>(work: (em: EntityManager) => Promise<Result>): Promise<Result> =>
    withTenant({ organizationIds: [upload.organizationId] }, async (em) => {
      await hooks.fence(em);
      return work(em);
    });

/** Stores members under the next free file indexes of the upload. */
class ChunkSink implements MemberSink {
  readonly kept: UploadFile[] = [];
  /** The part of the progress bar that the present container has. */
  share = { from: 0, to: 1 };
  private done = 0;
  readonly inTenant: ReturnType<typeof tenantOf>;

  constructor(
    readonly upload: Upload,
    private readonly hooks: UnpackHooks,
    private nextIndex: number,
  ) {
    this.inTenant = tenantOf(upload, hooks);
  }

  /** A stored container, read under the job's signal; how far into it the reading is shows as progress. */
  watched(fileIndex: number, sizeBytes: number): ChunkSource {
    const { organizationId, id } = this.upload;
    this.done = 0;
    return {
      sizeBytes,
      chunkBytes: CHUNK_BYTES,
      readChunk: async (index) => {
        this.hooks.signal.throwIfAborted();
        const chunk = await readChunk(organizationId, id, fileIndex, index);
        const reached = ((index + 1) * CHUNK_BYTES) / Math.max(1, sizeBytes);
        // The list of members stands at the end and is read first.
        if (reached < 1) this.done = Math.max(this.done, reached);
        return chunk;
      },
    };
  }

  begin(name: string): MemberWriter {
    return new ChunkWriter(this, name, this.nextIndex++);
  }

  async store(fileIndex: number, seq: number, plain: Uint8Array): Promise<void> {
    this.hooks.signal.throwIfAborted();
    const { id, organizationId } = this.upload;
    const data = await pack(plain, { level: 1 });
    const progress = this.share.from + (this.share.to - this.share.from) * this.done;
    await this.inTenant(async (em) => {
      const open = await queryOne(
        em,
        `update upload set progress = $3 where id = $2 and organization_id = $1 and removed_at is null
           and status in ('received', 'importing') returning 1`,
        [organizationId, id, progress],
      );
      if (!open) throw new Error(`unpackUpload: upload ${id} was removed or given up in the meantime`);
      await query(
        em,
        `insert into upload_chunk (organization_id, upload_id, file_index, seq, raw_bytes, data) values ($1, $2, $3, $4, $5, $6)`,
        [organizationId, id, fileIndex, seq, plain.byteLength, data],
      );
    });
  }
}

/** Cuts a member into chunks. */
class ChunkWriter implements MemberWriter {
  private readonly piece = Buffer.allocUnsafe(CHUNK_BYTES);
  private filled = 0;
  private seq = 0;
  private sizeBytes = 0;

  constructor(
    private readonly sink: ChunkSink,
    private readonly name: string,
    private readonly fileIndex: number,
  ) {}

  async write(bytes: Uint8Array): Promise<void> {
    this.sizeBytes += bytes.byteLength;
    for (let at = 0; at < bytes.byteLength;) {
      const part = bytes.subarray(at, at + CHUNK_BYTES - this.filled);
      this.piece.set(part, this.filled);
      at += part.byteLength;
      this.filled += part.byteLength;
      if (this.filled === CHUNK_BYTES) await this.flush();
    }
  }

  async keep(): Promise<void> {
    await this.flush();
    this.sink.kept.push({ name: this.name, sizeBytes: this.sizeBytes, fileIndex: this.fileIndex });
  }

  async reopen(): Promise<ChunkSource> {
    await this.flush();
    const { organizationId, id } = this.sink.upload;
    return {
      sizeBytes: this.sizeBytes,
      chunkBytes: CHUNK_BYTES,
      readChunk: (index) => readChunk(organizationId, id, this.fileIndex, index),
    };
  }

  async discard(): Promise<void> {
    if (this.seq === 0) return;
    const { organizationId, id } = this.sink.upload;
    await this.sink.inTenant((em) =>
      query(em, `delete from upload_chunk where organization_id = $1 and upload_id = $2 and file_index = $3`, [
        organizationId,
        id,
        this.fileIndex,
      ]),
    );
  }

  private async flush(): Promise<void> {
    if (this.filled === 0) return;
    await this.sink.store(this.fileIndex, this.seq++, this.piece.subarray(0, this.filled));
    this.filled = 0;
  }
}
