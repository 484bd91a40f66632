import { createPlant } from '@/lib/commands/create-plant';
import { idempotent } from '@/lib/http/idempotency';
import { inUnits } from '@/lib/http/si-units';
import { forbidden, requireOrganization, route } from '@/lib/http/route';
import { listPlants } from '@/lib/queries/list-plants';
import { readPlant } from '@/lib/queries/plant-record';
import { PlantsQuery } from '@/lib/schemas/plant-requests';
import { CreatePlant } from '@/lib/schemas/plant';

/** GET: the plants of the asker's organizations, by name. */
export const GET = route({ query: PlantsQuery }, async ({ em, access, query }) => {
  if (access.scope === 'ingest') throw forbidden('A token of scope "ingest" uploads and reads its uploads only.');
  return inUnits(await listPlants(em, access, query), query.units);
});

/** POST: a plant with its first settings. */
export const POST = route({ body: CreatePlant }, async ({ em, access, body, request }) => {
  const organizationId = requireOrganization(access, body.organizationId, 'plant.manage');
  if (access.onlyPlantId !== null) throw forbidden('This token is for one plant; it may not create another.');
  return idempotent(em, { request, organizationId, body }, async () => {
    const plantId = await createPlant(em, access, organizationId, body);
    return { status: 201, body: await readPlant(em, { organizationId, plantId }) };
  });
});
