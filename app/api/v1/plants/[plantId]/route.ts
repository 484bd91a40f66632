import { removePlant } from '@/lib/commands/remove-plant';
import { updatePlant } from '@/lib/commands/update-plant';
import { inUnits } from '@/lib/http/si-units';
import { notFound, requirePlant, route } from '@/lib/http/route';
import { readPlant } from '@/lib/queries/plant-record';
import { PlantParams } from '@/lib/schemas/common';
import { PatchPlant, UnitsQuery } from '@/lib/schemas/plant-requests';

/** GET: the plant's record; design numbers nobody has given are filled in and listed in `assumed`. */
export const GET = route({ params: PlantParams, query: UnitsQuery }, async ({ em, access, params, query }) => {
  const { organizationId } = await requirePlant(em, access, params.plantId, 'plant.read');
  const plant = await readPlant(em, { organizationId, plantId: params.plantId });
  if (!plant) throw notFound('plant');
  return inUnits(plant, query.units);
});

/** PATCH: merges into the plant; a change that results depend on has its stored days analysed again. */
export const PATCH = route({ params: PlantParams, body: PatchPlant }, async ({ em, access, params, body }) => {
  const { organizationId } = await requirePlant(em, access, params.plantId, 'plant.manage');
  const { analysisId } = await updatePlant(em, access, { id: params.plantId, organizationId }, body);
  return { ...(await readPlant(em, { organizationId, plantId: params.plantId })), analysisId };
});

/** DELETE: takes the plant out of sight. */
export const DELETE = route({ params: PlantParams }, async ({ em, access, params }) => {
  await removePlant(em, access, await requirePlant(em, access, params.plantId, 'plant.remove'));
});
