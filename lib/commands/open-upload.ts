import type { EntityManager } from '@mikro-orm/postgresql';
import { deleteChunks } from '../db/chunks';
import { enqueue } from '../db/enqueue';
import { query, queryOne } from '../db/sql';
import { withTenant } from '../db/tenant';

/** Whose upload it is and who sends it. */
export interface UploadOwner {
  organizationId: string;
  plantId: string;
  userId: string | null;
  tokenId: string | null;
}

export interface ReceivedFile {
  name: string;
  /** As kept, which is unpacked. */
  sizeBytes: number;
  /** Size and hash as received: what the sender's own tools say of the file. */
  receivedBytes: number;
  sha256: string;
  gzip: boolean;
}

const tenancy = (owner: UploadOwner) => ({ organizationIds: [owner.organizationId] });

/** The row that people see while bytes still come in. `resumable` is of a file that is sent with pauses, by the tus protocol. */
export async function openUpload(
  owner: UploadOwner,
  filename: string,
  resumable?: { id: string; announcedBytes: number; metadata: string | null },
): Promise<string> {
  return withTenant(tenancy(owner), async (em) => {
    const row = await queryOne<{ id: string }>(
      em,
      `insert into upload (organization_id, plant_id, filename, created_by, created_by_token, id, announced_bytes, tus_metadata)
       values ($1, $2, $3, $4, $5, coalesce($6, gen_random_uuid()), $7, $8) returning id`,
      [
        owner.organizationId,
        owner.plantId,
        filename,
        owner.userId,
        owner.tokenId,
        resumable?.id ?? null,
        resumable?.announcedBytes ?? null,
        resumable?.metadata ?? null,
      ],
    );
    if (!row) throw new Error('openUpload: the insert returned no row');
    return row.id;
  });
}

/**
 * Takes an upload in whose bytes are all there: gives it its place in the plant's order of uploads (a later one wins where both
 * hold a value) and has it read. Two that end at once get two places. Null when it was given up in the meantime.
 */
export async function closeUpload(
  em: EntityManager,
  owner: UploadOwner,
  uploadId: string,
  received: { filename: string; sizeBytes: number; sha256: string; files: readonly ReceivedFile[] },
): Promise<number | null> {
  const plant = await queryOne<{ upload_seq: number }>(
    em,
    `update plant set next_upload_seq = next_upload_seq + 1 where id = $1 and organization_id = $2
     returning next_upload_seq - 1 as upload_seq`,
    [owner.plantId, owner.organizationId],
  );
  const upload = await queryOne(
    em,
    `update upload set status = 'received', progress = 0, upload_seq = $3, filename = $4, size_bytes = $5, sha256 = $6, files = $7,
       last_chunk_at = now()
     where id = $1 and organization_id = $2 and status = 'receiving' returning 1`,
    [
      uploadId,
      owner.organizationId,
      plant?.upload_seq ?? null,
      received.filename,
      received.sizeBytes,
      received.sha256,
      JSON.stringify(received.files),
    ],
  );
  if (!plant || !upload) return null;
  await enqueue(em, 'import-upload', { organizationId: owner.organizationId, uploadId });
  return plant.upload_seq;
}

/** Ends an upload that did not arrive: nothing received is kept, and `message` says why. */
export async function failUpload(owner: UploadOwner, uploadId: string, code: string, message: string): Promise<void> {
  await withTenant(tenancy(owner), async (em) => {
    await deleteChunks(em, owner.organizationId, uploadId);
    await query(
      em,
      `update upload set status = 'failed', finished_at = now(), progress = 0, problems = $3
       where id = $1 and organization_id = $2 and status = 'receiving'`,
      [uploadId, owner.organizationId, JSON.stringify([{ code, severity: 'error', message, count: 1 }])],
    );
  });
}
