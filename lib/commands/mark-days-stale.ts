import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';

/**
 * Marks the UTC days of a plant that hold samples between `from` and `to` (both included; all by default) as to be analysed again,
 * except those in `except`.
 */
export async function markDaysStale(
  em: EntityManager,
  input: { organizationId: string; plantId: string; from?: string; to?: string; except?: readonly string[] },
): Promise<void> {
  await query(
    em,
    `insert into stale_day (organization_id, plant_id, day)
     select distinct $1::uuid, $2::uuid, day from sample_block
     where organization_id = $1 and plant_id = $2 and day between coalesce($3::date, '-infinity') and coalesce($4::date, 'infinity')
       and not day = any ($5::date[])
     order by day
     on conflict (plant_id, day) do update set mark = excluded.mark`,
    [input.organizationId, input.plantId, input.from ?? null, input.to ?? null, input.except ?? []],
  );
}

/**
 * Marks days whose samples have changed, and those beside them that hold samples: the first minutes of a day are judged with
 * the last of the day before, and the other way round.
 */
export async function markChangedDays(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  days: readonly string[],
): Promise<void> {
  if (days.length === 0) return;
  await query(
    em,
    `insert into stale_day (organization_id, plant_id, day)
     select $1::uuid, $2::uuid, day from (
       select unnest($3::date[]) as day
       union
       select b.day from sample_block b where b.organization_id = $1 and b.plant_id = $2
         and b.day in (select d + step from unnest($3::date[]) d, (values (-1), (1)) v(step))) near
     order by day
     on conflict (plant_id, day) do update set mark = excluded.mark`,
    [owner.organizationId, owner.plantId, days],
  );
}

/** Marks single days as to be analysed again. */
export async function markStoredDays(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  days: readonly string[],
): Promise<void> {
  await query(
    em,
    `insert into stale_day (organization_id, plant_id, day) select $1::uuid, $2::uuid, d from unnest($3::date[]) d order by d
     on conflict (plant_id, day) do update set mark = excluded.mark`,
    [owner.organizationId, owner.plantId, days],
  );
}
