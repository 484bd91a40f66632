import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { deleteChunks } from '../db/chunks';
import { enqueue } from '../db/enqueue';
import { query } from '../db/sql';
import { recordAudit } from './record-audit';

/**
 * Takes an upload out of sight at once and its values out of the record: it no longer counts from this moment, and the worker
 * derives the days it touched again without it and has them analysed. Removing twice does nothing the second time.
 */
export async function removeUpload(
  em: EntityManager,
  access: Access,
  upload: { id: string; organizationId: string },
): Promise<void> {
  const { organizationId } = upload;
  const [removed] = await query<{ upload_seq: number | null; filename: string }>(
    em,
    `update upload set removed_at = now(), applied = false,
       -- one that is still being sent ends here: its sender is told at the next piece
       status = case when status = 'receiving' then 'failed' else status end,
       finished_at = coalesce(finished_at, now())
     where id = $1 and organization_id = $2 and removed_at is null returning upload_seq, filename`,
    [upload.id, organizationId],
  );
  if (!removed) return;
  if (removed.upload_seq === null) await deleteChunks(em, organizationId, upload.id);
  // Only what was taken in can have left values behind.
  else await enqueue(em, 'import-upload', { organizationId, uploadId: upload.id });
  await recordAudit(em, access, {
    organizationId,
    action: 'upload.removed',
    subjectKind: 'upload',
    subjectId: upload.id,
    detail: { filename: removed.filename },
  });
}
