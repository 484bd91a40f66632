import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';
import type { PointPlace } from './assemble-measurements';

/** A plant's points that hold any value, each with the first and last UTC day of its record, by role, unit and feeder. */
export async function pointsInService(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
): Promise<PointPlace[]> {
  return query(
    em,
    `select p.id, p.role, p.unit_index as "unitIndex", b.first_day as "firstDay", b.last_day as "lastDay"
     from point p join (select point_id, min(day) as first_day, max(day) as last_day from sample_block
                        where organization_id = $1 and plant_id = $2 group by point_id) b on b.point_id = p.id
     where p.organization_id = $1 and p.plant_id = $2 order by p.role, p.unit_index, p.ordinal`,
    [owner.organizationId, owner.plantId],
  );
}
