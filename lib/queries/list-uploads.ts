import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import { query, queryOne } from '../db/sql';
import { decodeCursor, pageOf } from '../http/cursor';
import { presentUpload, UPLOAD_COLUMNS, type UploadRecord, type UploadRow } from './present-upload';

const CursorKey = z.tuple([z.string(), z.uuid()]);

/** A plant's uploads, newest first. `madeByToken` narrows them to what one token has sent. */
export async function listUploads(
  em: EntityManager,
  input: {
    organizationId: string;
    plantId: string;
    limit: number;
    cursor?: string | undefined;
    madeByToken?: string | null;
  },
): Promise<{ items: UploadRecord[]; nextCursor: string | null }> {
  const after = decodeCursor(CursorKey, input.cursor);
  const rows = await query<UploadRow & Record<string, unknown>>(
    em,
    `select ${UPLOAD_COLUMNS} from upload
     where organization_id = $1 and plant_id = $2 and removed_at is null and ($3::uuid is null or created_by_token = $3)
       and ($4::timestamptz is null or (created_at, id) < ($4, $5::uuid))
     order by created_at desc, id desc limit $6`,
    [
      input.organizationId,
      input.plantId,
      input.madeByToken ?? null,
      after?.[0] ?? null,
      after?.[1] ?? null,
      input.limit + 1,
    ],
  );
  // The cursor keeps PostgreSQL's own text of the instant: a Date would drop its microseconds, and rows with them.
  return pageOf(rows, input.limit, (row) => [row.created_at, row.id], presentUpload);
}

/** One upload, or null. */
export async function readUpload(
  em: EntityManager,
  input: { organizationId: string; uploadId: string },
): Promise<UploadRecord | null> {
  const row = await queryOne<UploadRow & Record<string, unknown>>(
    em,
    `select ${UPLOAD_COLUMNS} from upload where id = $1 and organization_id = $2 and removed_at is null`,
    [input.uploadId, input.organizationId],
  );
  return row && presentUpload(row);
}
