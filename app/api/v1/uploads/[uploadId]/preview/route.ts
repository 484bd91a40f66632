import { requireUpload, route } from '@/lib/http/route';
import { readPreview } from '@/lib/queries/read-preview';
import { UploadParams } from '@/lib/schemas/common';

/** GET: what was recognised, and the suggestion for each column; 409 while there is none. */
export const GET = route({ params: UploadParams }, async ({ em, access, params }) => {
  const { organizationId } = await requireUpload(em, access, params.uploadId, 'mapping.confirm');
  return readPreview(em, { organizationId, uploadId: params.uploadId });
});
