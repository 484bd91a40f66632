import type { EntityManager } from '@mikro-orm/postgresql';
import { isoInstant, queryOne } from '../db/sql';
import type { Episode } from '../schemas/results';

/** An episode with the name of who acknowledged it, as SQL gives it. */
export interface EpisodeRow {
  id: string;
  plant_id: string;
  cause: Episode['cause'];
  started_at: string;
  ended_at: string;
  hours: number;
  worst_hour: string;
  largest_reverse_flow_gpm: number | null;
  warmest_supply_f: number | null;
  excess_energy_kwh: number | null;
  excess_cost: number | null;
  acknowledged_at: string | null;
  acknowledged_by: string | null;
  note: string | null;
}

/** Reads episodes as EpisodeRow; a where clause follows. */
export const SELECT_EPISODE = `
  select e.id, e.plant_id, e.cause, e.started_at, e.ended_at, e.hours, e.worst_hour, e.largest_reverse_flow_gpm,
         e.warmest_supply_f, e.excess_energy_kwh, e.excess_cost, e.acknowledged_at, u.name as acknowledged_by, e.note
  from episode e left join app_user u on u.id = e.acknowledged_by`;

export const episodeRecord = (row: EpisodeRow): Episode => ({
  id: row.id,
  plantId: row.plant_id,
  cause: row.cause,
  startedAt: isoInstant(row.started_at),
  endedAt: isoInstant(row.ended_at),
  hours: row.hours,
  worstHour: isoInstant(row.worst_hour),
  largestReverseFlowGpm: row.largest_reverse_flow_gpm,
  warmestSupplyF: row.warmest_supply_f,
  excessEnergyKwh: row.excess_energy_kwh,
  excessCost: row.excess_cost,
  acknowledgedAt: isoInstant(row.acknowledged_at),
  acknowledgedBy: row.acknowledged_by,
  note: row.note,
});

export async function readEpisode(
  em: EntityManager,
  { organizationId, episodeId }: { organizationId: string; episodeId: string },
): Promise<Episode | null> {
  const row = await queryOne<EpisodeRow & Record<string, unknown>>(
    em,
    `${SELECT_EPISODE} where e.id = $1 and e.organization_id = $2`,
    [episodeId, organizationId],
  );
  return row && episodeRecord(row);
}
