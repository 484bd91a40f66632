import { removeSpotCheck } from '@/lib/commands/remove-spot-check';
import { requirePlant, route } from '@/lib/http/route';
import { SpotCheckParams } from '@/lib/schemas/sensors';

/** DELETE: takes a spot check out again; the record is analysed without it. */
export const DELETE = route({ params: SpotCheckParams }, async ({ em, access, params }) => {
  const plant = await requirePlant(em, access, params.plantId, 'spot-check.manage');
  const { organizationId, id } = plant;
  return removeSpotCheck(em, access, { id, organizationId, hasData: plant.dataThrough != null }, params.spotCheckId);
});
