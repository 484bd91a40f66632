import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { query } from '../db/sql';

/** The plants a person may switch between, by owner and name. */
export async function shellPlants(
  em: EntityManager,
  access: Access,
): Promise<{ id: string; name: string; organizationName: string }[]> {
  return query(
    em,
    `select p.id, p.name, o.name as "organizationName" from plant p join organization o on o.id = p.organization_id
     where p.organization_id = any ($1::uuid[]) and p.deleted_at is null order by o.name, p.name, p.id`,
    [access.organizationIds],
  );
}
