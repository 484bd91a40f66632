import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';
import { lockPlant } from './lock-plant';
import { writeEpisodes } from './write-episodes';

interface Owner {
  organizationId: string;
  plantId: string;
}

/** Moves the progress of a plant's open analyses; when no stale day is left they are done, with the uploads that waited for them. */
export async function settleAnalyses(em: EntityManager, owner: Owner): Promise<'done' | 'going-on'> {
  if (!(await lockPlant(em, owner))) return endForGood(em, owner);
  const [left] = await query<{ days: number }>(
    em,
    `select count(*)::integer as days from stale_day where organization_id = $1 and plant_id = $2`,
    [owner.organizationId, owner.plantId],
  );
  const days = left?.days ?? 0;
  if (days > 0) {
    await query(
      em,
      `with moved as (
         update analysis set status = 'running', progress = greatest(progress, 1 - $3::real / greatest(days_total, $3, 1))
         where organization_id = $1 and plant_id = $2 and status in ('queued', 'running') returning upload_id, progress)
       update upload u set progress = m.progress from moved m where u.id = m.upload_id and u.status = 'analysing'`,
      [owner.organizationId, owner.plantId, days],
    );
    return 'going-on';
  }
  await writeEpisodes(em, owner);
  await query(
    em,
    `with ended as (
       update analysis set status = 'done', progress = 1, finished_at = now()
       where organization_id = $1 and plant_id = $2 and status in ('queued', 'running') returning upload_id)
     update upload u set status = 'done', progress = 1, finished_at = now() from ended e where u.id = e.upload_id and u.status = 'analysing'`,
    [owner.organizationId, owner.plantId],
  );
  return 'done';
}

/** A plant that was removed has nothing left to work out. */
async function endForGood(em: EntityManager, owner: Owner): Promise<'done'> {
  const values = [owner.organizationId, owner.plantId];
  await query(em, `delete from stale_day where organization_id = $1 and plant_id = $2`, values);
  await query(
    em,
    `update analysis set status = 'failed', failure = 'The plant was removed.', finished_at = now()
     where organization_id = $1 and plant_id = $2 and status in ('queued', 'running')`,
    values,
  );
  return 'done';
}
