import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { queryOne } from '../db/sql';
import { notFound, problem } from '../http/problem';
import { SELECT_SPOT_CHECK, spotCheckRecord, type SpotCheckRow } from '../queries/list-spot-checks';
import type { CreateSpotCheck, SpotCheck } from '../schemas/sensors';
import { lockPlant } from './lock-plant';
import { recordAudit } from './record-audit';
import { startAnalysis } from './start-analysis';

/** A good thermometer in a well; a clamp-on meter on a straight run (k = 1; common practice, no source). */
const USUAL_SIGMA_F = 0.1;
const USUAL_SIGMA_PERCENT = 2;
/** Clocks differ: a reading a little ahead of ours has still been taken. */
const CLOCK_ALLOWANCE_MS = 5 * 60_000;

/**
 * Keeps a reading of a reference instrument. Every calibration of the plant takes it in: a lasting error settled once holds for
 * the whole record, so all stored days are analysed again.
 */
export async function createSpotCheck(
  em: EntityManager,
  access: Access,
  plant: { id: string; organizationId: string; hasData: boolean },
  check: CreateSpotCheck,
): Promise<SpotCheck & { analysisId: string | null }> {
  if (Date.parse(check.at) > Date.now() + CLOCK_ALLOWANCE_MS) {
    const message = 'This time lies ahead. Give the time at which the reading was taken.';
    throw problem(400, 'Invalid input', message, [{ path: 'at', message }]);
  }
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  if (!(await lockPlant(em, owner))) throw notFound('plant');
  const flow = check.role.endsWith('Flow');
  const made = await queryOne<{ id: string }>(
    em,
    `insert into spot_check (organization_id, plant_id, at, role, reading, shown, sigma, instrument, note, created_by)
     values ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10) returning id`,
    [
      plant.organizationId,
      plant.id,
      check.at,
      check.role,
      flow ? check.readingGpm : check.readingF,
      (flow ? check.shownGpm : check.shownF) ?? null,
      flow ? (check.sigmaPercent ?? USUAL_SIGMA_PERCENT) : (check.sigmaF ?? USUAL_SIGMA_F),
      check.instrument,
      check.note,
      access.userId,
    ],
  );
  const row =
    made &&
    (await queryOne<SpotCheckRow & Record<string, unknown>>(
      em,
      `${SELECT_SPOT_CHECK} where s.organization_id = $1 and s.plant_id = $2 and s.id = $3`,
      [plant.organizationId, plant.id, made.id],
    ));
  if (!row) throw new Error('createSpotCheck: the insert returned no row');
  await recordAudit(em, access, {
    organizationId: plant.organizationId,
    action: 'spot-check.created',
    subjectKind: 'spot-check',
    subjectId: row.id,
    detail: { role: check.role, at: check.at },
  });
  const analysisId = plant.hasData ? await startAnalysis(em, { ...owner, userId: access.userId }) : null;
  return { ...spotCheckRecord(row), analysisId };
}
