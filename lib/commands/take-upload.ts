import type { Access } from '../auth/access';
import { claimIdempotencyKey, otherBody } from '../http/idempotency';
import { json } from '../http/json';
import { log } from '../log';
import { hashOfBody, receiveUpload } from './receive-upload';
import { recordAudit } from './record-audit';
import { uploadLimitBytes } from './upload-limit';

/** Twice in the time after which a claim counts as abandoned, and to spare. */
const TOUCH_EVERY_MS = 30_000;

/**
 * Receives the body of an upload request and answers it: 202 with the upload's id. With an Idempotency-Key a second sending of
 * the same body is compared by its hash and answered alike, nothing being stored again; an upload that fails frees its key.
 */
export async function takeUpload(
  access: Access,
  plant: { id: string; organizationId: string },
  request: Request,
  filename: string | undefined,
): Promise<Response> {
  const limitBytes = uploadLimitBytes();
  const claim = await claimIdempotencyKey(access, request, plant.organizationId);
  if (claim?.kind === 'replay') {
    if ((await hashOfBody(request, filename, limitBytes)) !== claim.bodyHash) throw otherBody();
    return claim.response();
  }
  // A slow sender may be silent for longer than a claim is believed: the clock, not the data, keeps it alive.
  const timer = setInterval(() => {
    claim?.touch().catch((error: unknown) => log.warn({ err: error }, 'idempotency.untouched'));
  }, TOUCH_EVERY_MS);
  timer.unref();
  try {
    const { id, status } = await receiveUpload({
      owner: {
        organizationId: plant.organizationId,
        plantId: plant.id,
        userId: access.userId,
        tokenId: access.tokenId,
      },
      request,
      filename,
      limitBytes,
      onClose: async (em, upload) => {
        await recordAudit(em, access, {
          organizationId: plant.organizationId,
          action: 'upload.received',
          subjectKind: 'upload',
          subjectId: upload.id,
        });
        await claim?.settle(em, upload.sha256, { status: 202, body: { id: upload.id, status: upload.status } });
      },
    });
    return json({ id, status }, 202);
  } catch (error) {
    await claim?.free();
    throw error;
  } finally {
    clearInterval(timer);
  }
}
