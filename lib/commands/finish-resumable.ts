import { createHash } from 'node:crypto';
import type { Access } from '../auth/access';
import { queryOne } from '../db/sql';
import { withTenant } from '../db/tenant';
import { readChunk } from './import-source';
import { closeUpload, type UploadOwner } from './open-upload';
import { recordAudit } from './record-audit';

const GZIP = [0x1f, 0x8b];

/**
 * Takes in a resumable upload of which every byte is there: hashes what is stored and has it read, as any upload. Does nothing
 * to one that is not complete, or was taken in before; two that finish the same one at once leave it taken in once.
 */
export async function finishResumable(access: Access, owner: UploadOwner, uploadId: string): Promise<void> {
  const { organizationId } = owner;
  const tenancy = { organizationIds: [organizationId] };
  const row = await withTenant(tenancy, (em) =>
    queryOne<{ filename: string; size_bytes: string }>(
      em,
      `select filename, size_bytes from upload
       where id = $1 and organization_id = $2 and plant_id = $3 and status = 'receiving' and size_bytes = announced_bytes`,
      [uploadId, organizationId, owner.plantId],
    ),
  );
  if (!row) return;
  const sizeBytes = Number(row.size_bytes);
  const { sha256, gzip } = await hashOfStored(organizationId, uploadId, sizeBytes);
  const file = { name: row.filename, sizeBytes, receivedBytes: sizeBytes, sha256, gzip };
  try {
    await withTenant(tenancy, async (em) => {
      const received = { filename: row.filename, sizeBytes, sha256, files: [file] };
      if ((await closeUpload(em, owner, uploadId, received)) === null) throw new ClosedElsewhere();
      await recordAudit(em, access, {
        organizationId,
        action: 'upload.received',
        subjectKind: 'upload',
        subjectId: uploadId,
      });
    });
  } catch (error) {
    if (!(error instanceof ClosedElsewhere)) throw error;
  }
}

/** Rolls back the place in the plant's order that this attempt took. */
class ClosedElsewhere extends Error {}

async function hashOfStored(
  organizationId: string,
  uploadId: string,
  sizeBytes: number,
): Promise<{ sha256: string; gzip: boolean }> {
  const hash = createHash('sha256');
  let gzip = false;
  let hashed = 0;
  for (let seq = 0; hashed < sizeBytes; seq++) {
    const plain = await readChunk(organizationId, uploadId, 0, seq);
    if (plain === null) throw new Error(`finishResumable: upload ${uploadId} lacks chunk ${seq}`);
    if (seq === 0) gzip = GZIP.every((byte, index) => plain[index] === byte);
    hash.update(plain);
    hashed += plain.byteLength;
  }
  return { sha256: hash.digest('hex'), gzip };
}
