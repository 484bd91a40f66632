import { cached } from '@/lib/http/etag';
import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { resolvePeriod } from '@/lib/queries/period';
import { readSensors } from '@/lib/queries/read-sensors';
import { PlantParams } from '@/lib/schemas/common';
import { SensorsQuery } from '@/lib/schemas/sensors';

/** GET: what the record says about its sensors, and which further one would help most. */
export const GET = route(
  { params: PlantParams, query: SensorsQuery },
  async ({ em, access, params, query, request }) => {
    const plant = await requirePlant(em, access, params.plantId, 'plant.read');
    return cached(request, plant, async () =>
      inUnits(await readSensors(em, plant, resolvePeriod(query, plant), query.units), query.units),
    );
  },
);
