import { requirePlant, route } from '@/lib/http/route';
import { resolvePeriod } from '@/lib/queries/period';
import { readCoverage } from '@/lib/queries/read-coverage';
import { PlantParams } from '@/lib/schemas/common';
import { CoverageQuery } from '@/lib/schemas/data-requests';

/** GET: how much of each local day arrived, point by point. */
export const GET = route({ params: PlantParams, query: CoverageQuery }, async ({ em, access, params, query }) => {
  const plant = await requirePlant(em, access, params.plantId, 'plant.read');
  return readCoverage(em, plant, resolvePeriod(query, plant));
});
