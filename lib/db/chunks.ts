/**
 * Files as received: rows of upload_chunk, each a MiB of plain bytes compressed by itself. Every chunk is a short transaction
 * of its own, so that an upload of any length holds neither memory nor a connection.
 */
import { promisify } from 'node:util';
import { gzip } from 'node:zlib';
import type { EntityManager } from '@mikro-orm/postgresql';
import { query, queryOne } from './sql';
import { withTenant } from './tenant';

/** Plain bytes a row. */
export const CHUNK_BYTES = 1024 * 1024;
// The fastest level: trend logs shrink to a fifth at it, and the receiver has to keep up with the network.
const LEVEL = 1;

const pack = promisify(gzip);

export interface ChunkOf {
  organizationId: string;
  uploadId: string;
  fileIndex: number;
  seq: number;
}

/**
 * Stores one chunk and notes the upload's progress. False when the upload is no longer being received (it was given up as
 * abandoned, or removed): then nothing is stored and nothing further should be.
 */
export async function storeChunk(
  of: ChunkOf,
  plain: Uint8Array,
  arrived: { receivedBytes: number; announcedBytes: number | null },
): Promise<boolean> {
  const { receivedBytes, announcedBytes } = arrived;
  const progress = announcedBytes === null ? 0 : Math.min(1, receivedBytes / Math.max(1, announcedBytes));
  const data = await pack(plain, { level: LEVEL });
  return withTenant({ organizationIds: [of.organizationId] }, async (em) => {
    const open = await queryOne(
      em,
      `update upload set last_chunk_at = now(), size_bytes = $3, progress = $4
       where id = $1 and organization_id = $2 and status = 'receiving' returning 1`,
      [of.uploadId, of.organizationId, receivedBytes, progress],
    );
    if (!open) return false;
    await query(
      em,
      `insert into upload_chunk (organization_id, upload_id, file_index, seq, raw_bytes, data) values ($1, $2, $3, $4, $5, $6)`,
      [of.organizationId, of.uploadId, of.fileIndex, of.seq, plain.byteLength, data],
    );
    return true;
  });
}

/**
 * Stores one chunk of a file that is sent with pauses, in the place of a shorter one with its number, if the file has come exactly
 * as far as `fromBytes`. Two senders at once cannot mix their bytes: whoever commits second finds the file further on. False then,
 * and when the upload is no longer being received; nothing is stored.
 */
export async function storeChunkFrom(
  of: ChunkOf,
  plain: Uint8Array,
  reach: { fromBytes: number; toBytes: number },
): Promise<boolean> {
  const data = await pack(plain, { level: LEVEL });
  return withTenant({ organizationIds: [of.organizationId] }, async (em) => {
    // The row stays locked to the end of the transaction.
    const open = await queryOne(
      em,
      `update upload set last_chunk_at = now(), size_bytes = $4::bigint, progress = least(1, $4::bigint::real / announced_bytes)
       where id = $1 and organization_id = $2 and status = 'receiving' and size_bytes = $3 returning 1`,
      [of.uploadId, of.organizationId, reach.fromBytes, reach.toBytes],
    );
    if (!open) return false;
    const key = [of.organizationId, of.uploadId, of.fileIndex, of.seq];
    await query(
      em,
      `delete from upload_chunk where organization_id = $1 and upload_id = $2 and file_index = $3 and seq = $4`,
      key,
    );
    await query(
      em,
      `insert into upload_chunk (organization_id, upload_id, file_index, seq, raw_bytes, data) values ($1, $2, $3, $4, $5, $6)`,
      [...key, plain.byteLength, data],
    );
    return true;
  });
}

/** Lets go of everything received of an upload. */
export async function deleteChunks(em: EntityManager, organizationId: string, uploadId: string): Promise<void> {
  await query(em, `delete from upload_chunk where organization_id = $1 and upload_id = $2`, [organizationId, uploadId]);
}
