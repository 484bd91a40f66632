import { requestAlertRun } from '@/lib/commands/request-alert-run';
import { idempotent } from '@/lib/http/idempotency';
import { requirePlant, route } from '@/lib/http/route';
import { RunAlert } from '@/lib/schemas/alert';
import { PlantParams } from '@/lib/schemas/common';

/** POST: evaluates a local day now, as the schedule would. */
export const POST = route({ params: PlantParams, body: RunAlert }, async ({ em, access, params, body, request }) => {
  const plant = await requirePlant(em, access, params.plantId, 'alert.run');
  return idempotent(em, { request, organizationId: plant.organizationId, body }, async () => ({
    status: 202,
    body: { id: await requestAlertRun(em, access, plant, body.day, Date.now()) },
  }));
});
