import { requirePlant, route } from '@/lib/http/route';
import { inUnits } from '@/lib/http/si-units';
import { listEpisodes } from '@/lib/queries/list-episodes';
import { resolvePeriod } from '@/lib/queries/period';
import { PlantParams } from '@/lib/schemas/common';
import { EpisodesQuery } from '@/lib/schemas/data-requests';

/** GET: runs of hours with one cause, the newest first. Acknowledgements change without the results, so it carries no tag. */
export const GET = route({ params: PlantParams, query: EpisodesQuery }, async ({ em, access, params, query }) => {
  const plant = await requirePlant(em, access, params.plantId, 'plant.read');
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  return inUnits(await listEpisodes(em, owner, resolvePeriod(query, plant), query), query.units);
});
