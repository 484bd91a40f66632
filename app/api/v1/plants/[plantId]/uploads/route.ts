import { takeUpload } from '@/lib/commands/take-upload';
import { requirePlant, route } from '@/lib/http/route';
import { listUploads } from '@/lib/queries/list-uploads';
import { Paging, PlantParams } from '@/lib/schemas/common';
import { UploadQuery } from '@/lib/schemas/data-requests';
import { withTenant } from '@/lib/db/tenant';

/** GET: the plant's uploads, newest first. */
export const GET = route({ params: PlantParams, query: Paging }, async ({ em, access, params, query }) => {
  const { organizationId, id } = await requirePlant(em, access, params.plantId, 'upload.read');
  return listUploads(em, {
    organizationId,
    plantId: id,
    ...query,
    madeByToken: access.scope === 'ingest' ? access.tokenId : null,
  });
});

/** POST: a file, or several of one drop. The body streams, so the handler holds no transaction across it. */
export const POST = route(
  { params: PlantParams, query: UploadQuery, transaction: false },
  async ({ access, params, query, request }) => {
    const plant = await withTenant(access, (em) => requirePlant(em, access, params.plantId, 'upload.create'));
    return takeUpload(access, plant, request, query.filename);
  },
);
