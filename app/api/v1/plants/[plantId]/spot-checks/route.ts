import { createSpotCheck } from '@/lib/commands/create-spot-check';
import { idempotent } from '@/lib/http/idempotency';
import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { listSpotChecks } from '@/lib/queries/list-spot-checks';
import { PlantParams } from '@/lib/schemas/common';
import { CreateSpotCheck, SpotChecksQuery } from '@/lib/schemas/sensors';

/** GET: the plant's spot checks, the latest reading first. */
export const GET = route({ params: PlantParams, query: SpotChecksQuery }, async ({ em, access, params, query }) => {
  const { organizationId, id } = await requirePlant(em, access, params.plantId, 'plant.read');
  return inUnits(await listSpotChecks(em, { organizationId, plantId: id }, query), query.units);
});

/** POST: a reading of a reference instrument; the record is analysed again with it. */
export const POST = route(
  { params: PlantParams, body: CreateSpotCheck },
  async ({ em, access, params, body, request }) => {
    const plant = await requirePlant(em, access, params.plantId, 'spot-check.manage');
    const { organizationId, id } = plant;
    const hasData = plant.dataThrough != null;
    return idempotent(em, { request, organizationId, body }, async () => ({
      status: 201,
      body: await createSpotCheck(em, access, { id, organizationId, hasData }, body),
    }));
  },
);
