import type { EntityManager } from '@mikro-orm/postgresql';
import { isoInstant, query } from '../db/sql';
import { findEpisodes } from '../hydronics/episodes';
import { HOUR_COLUMN_NAMES, hourResultOf, type HourRecord } from '../queries/stored-hours';

interface StoredEpisode {
  id: string;
  cause: string;
  started_at: string;
  ended_at: string;
}

/**
 * Finds a plant's episodes again from its hours. What people said of one (acknowledged, note) goes to the episode of the same
 * cause that overlaps it: an episode that has grown by a late file is the same episode.
 */
export async function writeEpisodes(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
): Promise<void> {
  const rows = await query<HourRecord>(
    em,
    `select hour_start, local_day, low, cause, ${HOUR_COLUMN_NAMES.join(', ')} from hour
     where organization_id = $1 and plant_id = $2 order by hour_start`,
    [owner.organizationId, owner.plantId],
  );
  const found = findEpisodes(rows.map((row) => hourResultOf(row, Date.parse(isoInstant(row.hour_start)))));
  const stored = await query<StoredEpisode>(
    em,
    `select id, cause, started_at, ended_at from episode
     where organization_id = $1 and plant_id = $2 order by started_at for update`,
    [owner.organizationId, owner.plantId],
  );
  const before = stored.map((each) => ({
    ...each,
    startMs: Date.parse(isoInstant(each.started_at)),
    endMs: Date.parse(isoInstant(each.ended_at)),
  }));
  const claimed = new Set<string>();
  const next = found.map((episode) => {
    const same = before.find(
      (old) =>
        !claimed.has(old.id) &&
        old.cause === episode.cause &&
        old.startMs < episode.endMs &&
        old.endMs > episode.startMs,
    );
    if (same) claimed.add(same.id);
    return { episode, same };
  });
  // Kept in place, never deleted and made again: an acknowledgement that waits for the row still finds it.
  await query(em, `delete from episode where organization_id = $1 and plant_id = $2 and not (id = any ($3::uuid[]))`, [
    owner.organizationId,
    owner.plantId,
    [...claimed],
  ]);
  const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
  const instant = (ms: number): string => new Date(ms).toISOString();
  await query(
    em,
    `insert into episode (id, organization_id, plant_id, cause, started_at, ended_at, hours, worst_hour, largest_reverse_flow_gpm, warmest_supply_f,
       excess_energy_kwh, excess_cost)
     select coalesce(id, gen_random_uuid()), $1, $2, cause, started_at, ended_at, hours, worst_hour, flow, supply, energy, cost
     from unnest($3::uuid[], $4::text[], $5::timestamptz[], $6::timestamptz[], $7::integer[], $8::timestamptz[], $9::float8[], $10::float8[],
       $11::float8[], $12::float8[]) as e(id, cause, started_at, ended_at, hours, worst_hour, flow, supply, energy, cost)
     on conflict (id) do update set started_at = excluded.started_at, ended_at = excluded.ended_at, hours = excluded.hours,
       worst_hour = excluded.worst_hour, largest_reverse_flow_gpm = excluded.largest_reverse_flow_gpm,
       warmest_supply_f = excluded.warmest_supply_f, excess_energy_kwh = excluded.excess_energy_kwh, excess_cost = excluded.excess_cost`,
    [
      owner.organizationId,
      owner.plantId,
      next.map(({ same }) => same?.id ?? null),
      next.map(({ episode }) => episode.cause),
      next.map(({ episode }) => instant(episode.startMs)),
      next.map(({ episode }) => instant(episode.endMs)),
      next.map(({ episode }) => episode.hours),
      next.map(({ episode }) => instant(episode.worstHourMs)),
      next.map(({ episode }) => finite(episode.largestReverseFlowGpm)),
      next.map(({ episode }) => finite(episode.warmestSupplyF)),
      next.map(({ episode }) => finite(episode.excessEnergyKwh)),
      next.map(({ episode }) => finite(episode.excessCost)),
    ],
  );
}
