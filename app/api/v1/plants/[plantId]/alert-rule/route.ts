import { putAlertRule } from '@/lib/commands/put-alert-rule';
import { requirePlant, route } from '@/lib/http/route';
import { readAlertRule } from '@/lib/queries/read-alerts';
import { AlertRule } from '@/lib/schemas/alert';
import { PlantParams } from '@/lib/schemas/common';

/** PUT: sets the daily alert's rule. */
export const PUT = route({ params: PlantParams, body: AlertRule }, async ({ em, access, params, body }) => {
  const plant = await requirePlant(em, access, params.plantId, 'alert.manage');
  await putAlertRule(em, access, plant, body);
  return readAlertRule(em, { organizationId: plant.organizationId, plantId: plant.id });
});
