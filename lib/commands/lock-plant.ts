import type { EntityManager } from '@mikro-orm/postgresql';
import { queryOne } from '../db/sql';

/**
 * Holds a plant's row until the transaction ends; false when the plant is gone. Whoever writes a plant's samples, marks, results
 * or episodes takes this lock first, so that two of them wait for each other instead of deadlocking on what they hold already.
 */
export async function lockPlant(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
): Promise<boolean> {
  const row = await queryOne<{ gone: boolean }>(
    em,
    `select deleted_at is not null as gone from plant where id = $1 and organization_id = $2 for update`,
    [owner.plantId, owner.organizationId],
  );
  return row !== null && !row.gone;
}
