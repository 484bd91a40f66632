import { requirePlant, route } from '@/lib/http/route';
import { readAlerts } from '@/lib/queries/read-alerts';
import { PlantParams } from '@/lib/schemas/common';

/** GET: the daily alert's rule, runs, mails and their acknowledgements, and who gets the next one. */
export const GET = route({ params: PlantParams }, async ({ em, access, params }) => {
  const { organizationId } = await requirePlant(em, access, params.plantId, 'plant.read');
  return readAlerts(em, { organizationId, plantId: params.plantId });
});
