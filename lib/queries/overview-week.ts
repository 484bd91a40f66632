import type { EntityManager } from '@mikro-orm/postgresql';
import { query } from '../db/sql';
import type { Cause } from '../hydronics/types';
import { DAY_PARTS, type OverviewWeek } from '../schemas/overview';
import type { PlantDay } from '../schemas/results';
import type { PlantWindow } from './overview-bars';

export interface PlantWeek {
  days: PlantDay[];
  week: OverviewWeek;
}

/** A day counts as one with reverse flow from here on, as the alert does by default. */
const REVERSE_DAY_MINUTES = 30;

interface DayRow {
  plant_id: string;
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
interface HourSums {
  plant_id: string;
  still_minutes: number;
  delta_t_f: number | null;
  production_delta_t_f: number | null;
  reverse_by_part: number[];
}
interface CauseSums {
  plant_id: string;
  cause: Cause;
  cost: number;
  energy_kwh: number;
  flow_gpm: number;
}

const WINDOWS = `unnest($2::uuid[], $3::date[], $4::date[]) as w(plant_id, first_day, last_day)`;

/** The days and their sums of several plants, each over its own local days. */
export async function readWeeks(
  em: EntityManager,
  organizationIds: readonly string[],
  windows: readonly PlantWindow[],
): Promise<Map<string, PlantWeek>> {
  const values = [
    organizationIds,
    windows.map((each) => each.plantId),
    windows.map((each) => each.firstDay),
    windows.map((each) => each.lastDay),
  ];
  const days = await query<DayRow & Record<string, unknown>>(
    em,
    `select d.plant_id, d.day, d.reverse_minutes, d.unknown_minutes, d.running_minutes, d.largest_reverse_flow_gpm,
            d.warmest_supply_f, d.low_hours, d.excess_cost, d.excess_energy_kwh, d.load_ton_hours, d.coverage
     from ${WINDOWS} join plant_day d on d.plant_id = w.plant_id and d.day between w.first_day and w.last_day
     where d.organization_id = any ($1::uuid[]) order by d.plant_id, d.day`,
    values,
  );
  // Delta-T weighted by flow and time: tons over gpm of the whole week, as the hour table has it hour by hour.
  const hours = await query<HourSums & Record<string, unknown>>(
    em,
    `select h.plant_id, sum(h.still_minutes)::float8 as still_minutes,
            sum(h.delta_t_f * h.secondary_flow_gpm * h.running_minutes)
              / nullif(sum(h.secondary_flow_gpm * h.running_minutes) filter (where h.delta_t_f is not null), 0) as delta_t_f,
            sum(h.production_delta_t_f * h.primary_flow_gpm * h.running_minutes)
              / nullif(sum(h.primary_flow_gpm * h.running_minutes) filter (where h.production_delta_t_f is not null), 0)
              as production_delta_t_f,
            array[${[0, 1, 2, 3].map((part) => `coalesce(sum(h.reverse_minutes) filter (where floor(extract(hour from h.hour_start at time zone p.time_zone) / 6) = ${part}), 0)::float8`).join(', ')}]
              as reverse_by_part
     from ${WINDOWS} join plant p on p.id = w.plant_id
     join hour h on h.plant_id = w.plant_id and h.local_day between w.first_day and w.last_day
     where h.organization_id = any ($1::uuid[]) group by h.plant_id`,
    values,
  );
  const causes = await query<CauseSums & Record<string, unknown>>(
    em,
    `select h.plant_id, h.cause, coalesce(sum(h.excess_cost), 0) as cost, coalesce(sum(h.excess_energy_kwh), 0) as energy_kwh,
            coalesce(sum(h.excess_flow_gpm), 0) as flow_gpm
     from ${WINDOWS} join hour h on h.plant_id = w.plant_id and h.local_day between w.first_day and w.last_day and h.low
     where h.organization_id = any ($1::uuid[]) group by h.plant_id, h.cause`,
    values,
  );
  return new Map(
    windows.map(({ plantId }) => {
      const own = days.filter((row) => row.plant_id === plantId);
      const sums = hours.find((row) => row.plant_id === plantId);
      const cause = leadingCause(causes.filter((row) => row.plant_id === plantId));
      return [plantId, { days: own.map(dayRecord), week: weekOf(own, sums, cause) }];
    }),
  );
}

/** By cost where there is a tariff, by energy, then by flow: the first that tells any two apart. */
function leadingCause(rows: readonly CauseSums[]): Cause | null {
  const [first] = [...rows].sort(
    (a, b) =>
      b.cost - a.cost || b.energy_kwh - a.energy_kwh || b.flow_gpm - a.flow_gpm || a.cause.localeCompare(b.cause),
  );
  return first?.cause ?? null;
}

const dayRecord = (row: DayRow): PlantDay => ({
  day: row.day,
  reverseMinutes: row.reverse_minutes,
  unknownMinutes: row.unknown_minutes,
  runningMinutes: row.running_minutes,
  largestReverseFlowGpm: row.largest_reverse_flow_gpm,
  warmestSupplyF: row.warmest_supply_f,
  lowHours: row.low_hours,
  excessCost: row.excess_cost,
  excessEnergyKwh: row.excess_energy_kwh,
  loadTonHours: row.load_ton_hours,
  coverage: row.coverage,
});

const add = (a: number, b: number): number => a + b;

function weekOf(days: readonly DayRow[], hours: HourSums | undefined, cause: Cause | null): OverviewWeek {
  const total = (of: (row: DayRow) => number) => days.reduce((sum, row) => sum + of(row), 0);
  /** null when no day knows it. */
  const known = (of: (row: DayRow) => number | null, fold: (a: number, b: number) => number): number | null =>
    days.reduce<number | null>((sofar, row) => {
      const value = of(row);
      return value === null ? sofar : sofar === null ? value : fold(sofar, value);
    }, null);
  const byPart = hours?.reverse_by_part ?? [];
  const reverseOfParts = byPart.reduce(add, 0);
  const part = byPart.findIndex((minutes) => minutes > reverseOfParts / 2);
  return {
    reverseMinutes: total((row) => row.reverse_minutes),
    unknownMinutes: total((row) => row.unknown_minutes),
    stillMinutes: hours?.still_minutes ?? 0,
    runningMinutes: total((row) => row.running_minutes),
    reverseDays: days.filter((row) => row.reverse_minutes >= REVERSE_DAY_MINUTES).length,
    reversePart: DAY_PARTS[part] ?? null,
    largestReverseFlowGpm: known((row) => row.largest_reverse_flow_gpm, Math.max),
    warmestSupplyF: known((row) => row.warmest_supply_f, Math.max),
    lowHours: total((row) => row.low_hours),
    deltaTF: hours?.delta_t_f ?? null,
    productionDeltaTF: hours?.production_delta_t_f ?? null,
    excessCost: known((row) => row.excess_cost, add),
    excessEnergyKwh: known((row) => row.excess_energy_kwh, add),
    cause,
  };
}
