import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { enqueue } from '../db/enqueue';
import { queryOne } from '../db/sql';
import { problem } from '../http/problem';
import { localDayOf } from '../queries/local-time';
import { recordAudit } from './record-audit';

/**
 * Has a local day evaluated now. The day keeps its one run, so that a mail that went out does not go out again. Throws 400 for a
 * day that is not over at the plant: its run would stand in for the schedule's, which sees the whole day.
 */
export async function requestAlertRun(
  em: EntityManager,
  access: Access,
  plant: { id: string; organizationId: string; timeZone: string },
  day: string,
  nowMs: number,
): Promise<string> {
  if (day >= localDayOf(nowMs, plant.timeZone)) {
    const message = 'Give a day that is over at the plant.';
    throw problem(400, 'Invalid input', message, [{ path: 'day', message }]);
  }
  const run = await queryOne<{ id: string }>(
    em,
    `insert into alert_run (organization_id, plant_id, day) values ($1, $2, $3)
     on conflict (plant_id, day) do update set outcome = 'pending', finished_at = null returning id`,
    [plant.organizationId, plant.id, day],
  );
  if (!run) throw new Error('requestAlertRun: the upsert returned no row');
  await enqueue(em, 'daily-alert', { organizationId: plant.organizationId, runId: run.id });
  await recordAudit(em, access, {
    organizationId: plant.organizationId,
    action: 'alert.requested',
    subjectKind: 'plant',
    subjectId: plant.id,
    detail: { day },
  });
  return run.id;
}
