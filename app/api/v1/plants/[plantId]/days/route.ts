import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { listDays } from '@/lib/queries/list-days';
import { localDaySpan, resolvePeriod } from '@/lib/queries/period';
import { PlantParams } from '@/lib/schemas/common';
import { DaysQuery } from '@/lib/schemas/data-requests';

/** GET: sums of the local days that a period touches. */
export const GET = route({ params: PlantParams, query: DaysQuery }, async ({ em, access, params, query, request }) => {
  const plant = await requirePlant(em, access, params.plantId, 'plant.read');
  return cached(request, plant, async () => {
    const owner = { organizationId: plant.organizationId, plantId: plant.id };
    const span = localDaySpan(resolvePeriod(query, plant), plant.timeZone);
    return inUnits(await listDays(em, owner, span, query), query.units);
  });
});
