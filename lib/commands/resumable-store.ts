import type { Readable } from 'node:stream';
import { DataStore, Metadata, Upload } from '@tus/server';
import { CHUNK_BYTES, storeChunkFrom } from '../db/chunks';
import { isoInstant, queryOne } from '../db/sql';
import { withTenant } from '../db/tenant';
import { problem, type ProblemError } from '../http/problem';
import { readChunk } from './import-source';
import { failUpload, openUpload, type UploadOwner } from './open-upload';
import { refuseUnreadable } from './plain-content';
import { safeFilename } from './upload-files';

/** An unfinished upload ends when nothing came for this long; the database's end_abandoned_uploads says the same. */
export const RESUMABLE_FOR_MS = 24 * 60 * 60 * 1000;
/** A slow sender's bytes are not left in memory for longer than this. */
const COMMIT_EVERY_MS = 2000;
const MOST_METADATA = 8192;
const FIRST_FILE = 0;

export const uploadEnded = (): ProblemError =>
  problem(410, 'Gone', 'The upload ended before the whole file had arrived. Nothing of it is kept; begin again.');

export const offsetConflict = (): ProblemError =>
  problem(
    409,
    'Conflict',
    'The file does not end at this Upload-Offset: ask with HEAD how far it has come, and go on from there.',
  );

interface Row {
  filename: string;
  size_bytes: string;
  announced_bytes: string;
  tus_metadata: string | null;
  status: string;
  sha256: string | null;
  last_chunk_at: string;
}

/**
 * The uploads of one plant as the tus protocol sees them, kept in PostgreSQL with the others: any web process goes on where
 * another stopped. The file grows by committed pieces, the last of them short until more comes; `offset` is the bytes committed,
 * so a crash loses only what no answer has promised. No lock is held between pieces (see `storeChunkFrom`).
 */
export class ResumableStore extends DataStore {
  private writing: Promise<unknown> = Promise.resolve();

  constructor(private readonly owner: UploadOwner) {
    super();
    this.extensions = ['creation', 'creation-with-upload', 'termination', 'expiration'];
  }

  override async create(upload: Upload): Promise<Upload> {
    const metadata = upload.metadata ? Metadata.stringify(upload.metadata) : null;
    if ((metadata?.length ?? 0) > MOST_METADATA)
      throw problem(400, 'Invalid input', `Upload-Metadata may have ${MOST_METADATA} letters at the most.`);
    const name = safeFilename(upload.metadata?.filename ?? undefined);
    await openUpload(this.owner, name, { id: upload.id, announcedBytes: upload.size ?? 0, metadata });
    return upload;
  }

  override async getUpload(id: string): Promise<Upload> {
    const row = await this.row(id);
    // What was taken in has its hash; one that ended without it is gone.
    if (!row || (row.status !== 'receiving' && row.sha256 === null)) throw uploadEnded();
    const size = Number(row.announced_bytes);
    return new Upload({
      id,
      size,
      offset: row.status === 'receiving' ? Number(row.size_bytes) : size,
      ...(row.tus_metadata === null ? {} : { metadata: Metadata.parse(row.tus_metadata) }),
      // The server counts the time to live from here.
      creation_date: isoInstant(row.last_chunk_at),
    });
  }

  override write(stream: Readable, id: string, offset: number): Promise<number> {
    const written = this.append(stream, id, offset);
    this.writing = written.catch(() => undefined);
    return written;
  }

  /** The server refuses a body that is too long while the bytes before are still being stored: wait for them. */
  async settled(): Promise<void> {
    await this.writing;
  }

  override async remove(id: string): Promise<void> {
    const row = await this.row(id);
    if (row?.status !== 'receiving')
      throw problem(409, 'Conflict', 'The whole file has arrived: remove the upload instead.');
    await failUpload(this.owner, id, 'half-finished', 'Its sender ended the upload before the whole file had arrived.');
  }

  override getExpiration(): number {
    return RESUMABLE_FOR_MS;
  }

  private async append(stream: Readable, id: string, offset: number): Promise<number> {
    const row = await this.row(id);
    if (!row) throw uploadEnded();
    const growing = await GrowingFile.open(
      this.owner,
      { id, name: row.filename, whole: Number(row.announced_bytes) },
      offset,
    );
    try {
      for await (const bytes of stream as AsyncIterable<Buffer>) await growing.add(bytes);
    } catch (error) {
      // What came before is good, unless it was a piece of it that was refused.
      if (growing.isOpen) await growing.commit();
      throw error;
    }
    await growing.commit();
    return growing.committedBytes;
  }

  private row(id: string): Promise<Row | null> {
    return withTenant({ organizationIds: [this.owner.organizationId] }, (em) =>
      queryOne<Row>(
        em,
        `select filename, size_bytes, announced_bytes, tus_metadata, status, sha256, last_chunk_at from upload
         where id = $1 and organization_id = $2 and plant_id = $3 and announced_bytes is not null and removed_at is null`,
        [id, this.owner.organizationId, this.owner.plantId],
      ),
    );
  }
}

/** The end of a file under way: at most a MiB in memory, begun with the short last piece that is stored already. */
class GrowingFile {
  /** False once a piece was refused: nothing more is to be stored. */
  isOpen = true;
  private lastCommit = Date.now();

  private constructor(
    private readonly owner: UploadOwner,
    private readonly upload: { id: string; name: string; whole: number },
    public committedBytes: number,
    private readonly piece: Buffer,
    private reachedBytes: number,
  ) {}

  static async open(
    owner: UploadOwner,
    upload: { id: string; name: string; whole: number },
    offset: number,
  ): Promise<GrowingFile> {
    const piece = Buffer.allocUnsafe(CHUNK_BYTES);
    const stored = offset % CHUNK_BYTES;
    if (stored > 0) {
      const seq = Math.floor(offset / CHUNK_BYTES);
      const kept = await readChunk(owner.organizationId, upload.id, FIRST_FILE, seq);
      // Another sender has been here since the offset was read.
      if (kept?.byteLength !== stored) throw offsetConflict();
      piece.set(kept);
    }
    return new GrowingFile(owner, upload, offset, piece, offset);
  }

  async add(bytes: Buffer): Promise<void> {
    for (let at = 0; at < bytes.byteLength;) {
      const copied = bytes.copy(this.piece, this.reachedBytes % CHUNK_BYTES, at);
      at += copied;
      this.reachedBytes += copied;
      if (this.reachedBytes % CHUNK_BYTES === 0) await this.commit();
    }
    if (Date.now() - this.lastCommit > COMMIT_EVERY_MS) await this.commit();
  }

  async commit(): Promise<void> {
    if (this.reachedBytes === this.committedBytes) return;
    const { organizationId } = this.owner;
    const seq = Math.floor((this.reachedBytes - 1) / CHUNK_BYTES);
    const plain = this.piece.subarray(0, this.reachedBytes - seq * CHUNK_BYTES);
    this.isOpen = false;
    if (seq === 0) refuseUnreadable(this.upload.name, plain, false);
    const reach = { fromBytes: this.committedBytes, toBytes: this.reachedBytes };
    const of = { organizationId, uploadId: this.upload.id, fileIndex: FIRST_FILE, seq };
    if (!(await storeChunkFrom(of, plain, reach))) throw offsetConflict();
    this.isOpen = true;
    this.committedBytes = this.reachedBytes;
    this.lastCommit = Date.now();
  }
}
