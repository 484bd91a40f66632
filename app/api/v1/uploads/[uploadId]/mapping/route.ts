import { confirmMapping } from '@/lib/commands/confirm-mapping';
import { json } from '@/lib/http/json';
import { requireUpload, route } from '@/lib/http/route';
import { UploadParams } from '@/lib/schemas/common';
import { ConfirmMapping } from '@/lib/schemas/upload';

/** PUT: confirms how the columns are read; the import goes on. */
export const PUT = route({ params: UploadParams, body: ConfirmMapping }, async ({ em, access, params, body }) => {
  const upload = await requireUpload(em, access, params.uploadId, 'mapping.confirm');
  await confirmMapping(em, access, upload, body);
  return json({ id: upload.id, status: 'received' }, 202);
});
