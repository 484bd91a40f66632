import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { queryOne } from '../db/sql';
import { notFound } from '../http/problem';
import { lockPlant } from './lock-plant';
import { recordAudit } from './record-audit';
import { startAnalysis } from './start-analysis';

/**
 * Takes a spot check out again and has the record analysed without it. Returns the id of the analysis that began, if one did.
 *
 * Throws  a 404 problem when the plant has no such check.
 */
export async function removeSpotCheck(
  em: EntityManager,
  access: Access,
  plant: { id: string; organizationId: string; hasData: boolean },
  spotCheckId: string,
): Promise<{ analysisId: string | null }> {
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  if (!(await lockPlant(em, owner))) throw notFound('plant');
  const gone = await queryOne<{ role: string }>(
    em,
    `delete from spot_check where id = $1 and plant_id = $2 and organization_id = $3 returning role`,
    [spotCheckId, plant.id, plant.organizationId],
  );
  if (!gone) throw notFound('spot check');
  await recordAudit(em, access, {
    organizationId: plant.organizationId,
    action: 'spot-check.removed',
    subjectKind: 'spot-check',
    subjectId: spotCheckId,
    detail: { role: gone.role },
  });
  return { analysisId: plant.hasData ? await startAnalysis(em, { ...owner, userId: access.userId }) : null };
}
