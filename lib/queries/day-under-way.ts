import type { EntityManager } from '@mikro-orm/postgresql';
import { queryOne } from '../db/sql';

/** A run is not kept waiting longer than this: a file that is stuck must not keep the operator's mail. */
const LONGEST_WAIT = '6 hours';

/** Whether the record behind an alert's run is still on its way: a file of the plant being read, or its local day being worked out. */
export async function isDayUnderWay(
  em: EntityManager,
  run: { organizationId: string; runId: string },
): Promise<boolean> {
  const row = await queryOne<{ under_way: boolean }>(
    em,
    `select (exists (select from upload u where u.plant_id = r.plant_id and u.organization_id = r.organization_id
                       and u.removed_at is null and u.status in ('received', 'importing', 'analysing'))
             or exists (select from stale_day s where s.plant_id = r.plant_id and s.organization_id = r.organization_id
                          and s.day between r.day - 1 and r.day + 1)) as under_way
     from alert_run r where r.id = $1 and r.organization_id = $2 and r.outcome = 'pending' and r.created_at > now() - $3::interval`,
    [run.runId, run.organizationId, LONGEST_WAIT],
  );
  return row?.under_way ?? false;
}
