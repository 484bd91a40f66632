import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { resolvePeriod } from '@/lib/queries/period';
import { readTide } from '@/lib/queries/read-tide';
import { PlantParams } from '@/lib/schemas/common';
import { TideQuery } from '@/lib/schemas/data-requests';

/** GET: the tide strip of a period, thinned on the server. */
export const GET = route({ params: PlantParams, query: TideQuery }, async ({ em, access, params, query, request }) => {
  const plant = await requirePlant(em, access, params.plantId, 'plant.read');
  return cached(request, plant, async () =>
    inUnits(await readTide(em, plant, resolvePeriod(query, plant), query.barMinutes), query.units),
  );
});
