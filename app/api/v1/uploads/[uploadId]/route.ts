import { removeUpload } from '@/lib/commands/remove-upload';
import { notFound, requireUpload, route } from '@/lib/http/route';
import { readUpload } from '@/lib/queries/list-uploads';
import { UploadParams } from '@/lib/schemas/common';

/** GET: how far an upload has come, and what was met in it. */
export const GET = route({ params: UploadParams }, async ({ em, access, params }) => {
  const { organizationId } = await requireUpload(em, access, params.uploadId, 'upload.read');
  const upload = await readUpload(em, { organizationId, uploadId: params.uploadId });
  if (!upload) throw notFound('upload');
  return upload;
});

/** DELETE: takes the file's samples out again; the days it touched are analysed again by the worker. */
export const DELETE = route({ params: UploadParams }, async ({ em, access, params }) => {
  await removeUpload(em, access, await requireUpload(em, access, params.uploadId, 'upload.remove'));
});
