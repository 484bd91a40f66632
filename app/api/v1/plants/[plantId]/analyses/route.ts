import { recordAudit } from '@/lib/commands/record-audit';
import { startAnalysis } from '@/lib/commands/start-analysis';
import { idempotent } from '@/lib/http/idempotency';
import { requirePlant, route } from '@/lib/http/route';
import { utcDaysAsked } from '@/lib/queries/period';
import { PlantParams } from '@/lib/schemas/common';
import { StartAnalysis } from '@/lib/schemas/data-requests';

/** POST: stored samples are analysed again with today's settings. */
export const POST = route(
  { params: PlantParams, body: StartAnalysis },
  async ({ em, access, params, body, request }) => {
    const plant = await requirePlant(em, access, params.plantId, 'analysis.start');
    const { id: plantId, organizationId } = plant;
    return idempotent(em, { request, organizationId, body }, async () => {
      const id = await startAnalysis(em, {
        organizationId,
        plantId,
        ...utcDaysAsked(body, plant.timeZone),
        userId: access.userId,
      });
      const audit = { organizationId, action: 'analysis.started', subjectKind: 'plant', subjectId: plantId };
      await recordAudit(em, access, { ...audit, detail: { analysisId: id } });
      return { status: 202, body: { id } };
    });
  },
);
