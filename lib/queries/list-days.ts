import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import { query } from '../db/sql';
import { decodeCursor, pageOf } from '../http/cursor';
import { LocalDay } from '../schemas/common';
import type { PlantDay } from '../schemas/results';
import { figure } from './figures';

type DayRecord = z.infer<typeof PlantDay>;
interface DayRow {
  day: string;
  reverse_minutes: number;
  unknown_minutes: number;
  running_minutes: number;
  largest_reverse_flow_gpm: number | null;
  warmest_supply_f: number | null;
  low_hours: number;
  excess_cost: number | null;
  excess_energy_kwh: number | null;
  load_ton_hours: number | null;
  coverage: number | null;
}
const Key = z.tuple([LocalDay]);

/** A plant's local days, both bounds included, in order; a day without results has no row. */
export async function listDays(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  span: { firstDay: string; lastDay: string },
  page: { limit: number; cursor?: string | undefined },
): Promise<{ items: DayRecord[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, page.cursor);
  const rows = await query<DayRow & Record<string, unknown>>(
    em,
    `select day, reverse_minutes, unknown_minutes, running_minutes, largest_reverse_flow_gpm, warmest_supply_f, low_hours,
       excess_cost, excess_energy_kwh, load_ton_hours, coverage
     from plant_day where organization_id = $1 and plant_id = $2 and day between $3 and $4 and ($5::date is null or day > $5)
     order by day limit $6`,
    [owner.organizationId, owner.plantId, span.firstDay, span.lastDay, after?.[0] ?? null, page.limit + 1],
  );
  return pageOf(rows, page.limit, (row) => [row.day], dayRecord);
}

const dayRecord = (row: DayRow): DayRecord => ({
  day: row.day,
  reverseMinutes: row.reverse_minutes,
  unknownMinutes: row.unknown_minutes,
  runningMinutes: row.running_minutes,
  largestReverseFlowGpm: figure(row.largest_reverse_flow_gpm),
  warmestSupplyF: figure(row.warmest_supply_f),
  lowHours: row.low_hours,
  excessCost: figure(row.excess_cost),
  excessEnergyKwh: figure(row.excess_energy_kwh),
  loadTonHours: figure(row.load_ton_hours),
  coverage: figure(row.coverage),
});
