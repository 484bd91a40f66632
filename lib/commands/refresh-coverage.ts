import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';

/** Sets a plant's data_from and data_through from the uploads that count. */
export async function refreshCoverage(em: EntityManager, plant: { id: string; organizationId: string }): Promise<void> {
  await query(
    em,
    `update plant p set (data_from, data_through) =
       (select min(u.data_from), max(u.data_to) from upload u where u.plant_id = p.id and u.organization_id = p.organization_id and u.applied)
     where p.id = $1 and p.organization_id = $2`,
    [plant.id, plant.organizationId],
  );
}
