import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { query } from '../db/sql';
import { recordAudit } from './record-audit';

/** Takes a plant out of sight: its rows stay until retention ends, its tokens stop working. */
export async function removePlant(
  em: EntityManager,
  access: Access,
  plant: { id: string; organizationId: string; name: string },
): Promise<void> {
  const owner = [plant.id, plant.organizationId];
  await query(em, `update plant set deleted_at = now() where id = $1 and organization_id = $2`, owner);
  await query(
    em,
    `update api_token set revoked_at = now() where plant_id = $1 and organization_id = $2 and revoked_at is null`,
    owner,
  );
  await recordAudit(em, access, {
    organizationId: plant.organizationId,
    action: 'plant.removed',
    subjectKind: 'plant',
    subjectId: plant.id,
    detail: { name: plant.name },
  });
}
