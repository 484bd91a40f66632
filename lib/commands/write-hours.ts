import type { EntityManager } from '@mikro-orm/postgresql';
import { isoInstant, query } from '../db/sql';
import { summariseDay } from '../hydronics/days';
import type { HourResult } from '../hydronics/types';
import { HOUR_COLUMNS, HOUR_COLUMN_NAMES, hourResultOf, type HourRecord } from '../queries/stored-hours';

interface Owner {
  organizationId: string;
  plantId: string;
}
export interface LocalHourResult {
  hour: HourResult;
  localDay: string;
}

/** Replaces the hours that start in [fromMs, toMs), then the sums of every local day they belong to. */
export async function writeHours(
  em: EntityManager,
  owner: Owner,
  result: { hours: readonly LocalHourResult[]; fromMs: number; toMs: number },
): Promise<void> {
  const gone = await query<{ local_day: string }>(
    em,
    `with old as (delete from hour where organization_id = $1 and plant_id = $2 and hour_start >= $3 and hour_start < $4 returning local_day)
     select distinct local_day from old`,
    [owner.organizationId, owner.plantId, new Date(result.fromMs).toISOString(), new Date(result.toMs).toISOString()],
  );
  await insertHours(em, owner, result.hours);
  await writeDays(em, owner, [
    ...new Set([...gone.map((each) => each.local_day), ...result.hours.map((each) => each.localDay)]),
  ]);
}

async function insertHours(em: EntityManager, owner: Owner, hours: readonly LocalHourResult[]): Promise<void> {
  if (hours.length === 0) return;
  const columns = HOUR_COLUMN_NAMES;
  // One array a column: 744 hours are one statement whatever the number of columns.
  const arrays: unknown[] = columns.map((column) => hours.map(({ hour }) => finite(hour[HOUR_COLUMNS[column]])));
  await query(
    em,
    `insert into hour (organization_id, plant_id, hour_start, local_day, low, cause, ${columns.join(', ')})
     select $1, $2, * from unnest($3::timestamptz[], $4::date[], $5::boolean[], $6::text[], ${columns.map((_, i) => `$${i + 7}::float8[]`).join(', ')})
     on conflict (plant_id, hour_start) do update set local_day = excluded.local_day, low = excluded.low, cause = excluded.cause,
       ${columns.map((column) => `${column} = excluded.${column}`).join(', ')}`,
    [
      owner.organizationId,
      owner.plantId,
      hours.map(({ hour }) => new Date(hour.hourStartMs).toISOString()),
      hours.map(({ localDay }) => localDay),
      hours.map(({ hour }) => hour.low),
      hours.map(({ hour }) => hour.cause),
      ...arrays,
    ],
  );
}

/** Sums the stored hours of local days; a day without hours loses its row. */
async function writeDays(em: EntityManager, owner: Owner, days: readonly string[]): Promise<void> {
  if (days.length === 0) return;
  const rows = await query<HourRecord>(
    em,
    `select hour_start, local_day, low, cause, ${HOUR_COLUMN_NAMES.join(', ')} from hour
     where organization_id = $1 and plant_id = $2 and local_day = any ($3::date[]) order by hour_start`,
    [owner.organizationId, owner.plantId, days],
  );
  const byDay = new Map<string, HourResult[]>();
  for (const row of rows) {
    const hour = hourResultOf(row, Date.parse(isoInstant(row.hour_start)));
    const list = byDay.get(row.local_day);
    if (list) list.push(hour);
    else byDay.set(row.local_day, [hour]);
  }
  await query(em, `delete from plant_day where organization_id = $1 and plant_id = $2 and day = any ($3::date[])`, [
    owner.organizationId,
    owner.plantId,
    days,
  ]);
  for (const [day, hours] of byDay) {
    const sums = summariseDay(hours);
    await query(
      em,
      `insert into plant_day (organization_id, plant_id, day, reverse_minutes, unknown_minutes, running_minutes, largest_reverse_flow_gpm,
         warmest_supply_f, low_hours, excess_cost, excess_energy_kwh, load_ton_hours, coverage, worst_hour)
       values ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11, $12, $13, $14)`,
      [
        owner.organizationId,
        owner.plantId,
        day,
        sums.reverseMinutes,
        sums.unknownMinutes,
        sums.runningMinutes,
        finite(sums.largestReverseFlowGpm),
        finite(sums.warmestSupplyF),
        sums.lowHours,
        finite(sums.excessCost),
        finite(sums.excessEnergyKwh),
        finite(sums.loadTonHours),
        finite(sums.coverage),
        worstHour(hours),
      ],
    );
  }
}

/** The hour that weighed most: by avoidable, then by excess flow. */
function worstHour(hours: readonly HourResult[]): string | null {
  const low = hours.filter((hour) => hour.low);
  const weight = (hour: HourResult) => (Number.isNaN(hour.excessFlowGpm) ? 0 : hour.excessFlowGpm);
  const worst = low.reduce<HourResult | null>(
    (best, hour) => (best === null || weight(hour) > weight(best) ? hour : best),
    null,
  );
  return worst ? new Date(worst.hourStartMs).toISOString() : null;
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);
