import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import type { Access } from '../auth/access';
import { query } from '../db/sql';
import { decodeCursor, pageOf } from '../http/cursor';
import { plantRecord, SELECT_PLANT, type PlantRecord, type PlantRow } from './plant-record';

const Key = z.tuple([z.string(), z.uuid()]);

/** The plants someone may see, by name. */
export async function listPlants(
  em: EntityManager,
  access: Access,
  page: { limit: number; cursor?: string | undefined },
): Promise<{ items: PlantRecord[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, page.cursor);
  const rows = await query<PlantRow & Record<string, unknown>>(
    em,
    `${SELECT_PLANT}
     where p.organization_id = any ($1::uuid[]) and p.deleted_at is null and ($2::uuid is null or p.id = $2)
       and ($3::text is null or (p.name, p.id) > ($3, $4::uuid))
     order by p.name, p.id limit $5`,
    [access.organizationIds, access.onlyPlantId, after?.[0] ?? null, after?.[1] ?? null, page.limit + 1],
  );
  return pageOf(rows, page.limit, (row) => [row.name, row.id], plantRecord);
}
