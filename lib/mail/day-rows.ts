import type { EntityManager } from '@mikro-orm/postgresql';
import type { Plant } from '@/entities';
import { isoInstant, query, queryOne } from '../db/sql';
import type { Cause } from '../hydronics/types';
import type { DayHour } from './day-facts';

/** The sums of a local day that the rule and the mail look at. */
export interface DaySums {
  day: string;
  reverseMinutes: number;
  /** Of the day's largest backward flow, a positive amount; null when none is known. */
  largestReverseFlowGpm: number | null;
  lowHours: number;
  excessCost: number | null;
  excessEnergyKwh: number | null;
  coverage: number | null;
  worstHourMs: number | null;
}

/** The sums of a local day; null when nothing is stored of it. */
export async function readDaySums(em: EntityManager, plant: Plant, day: string): Promise<DaySums | null> {
  const row = await queryOne<{
    reverse_minutes: number;
    largest_reverse_flow_gpm: number | null;
    low_hours: number;
    excess_cost: number | null;
    excess_energy_kwh: number | null;
    coverage: number | null;
    worst_hour: string | null;
  }>(
    em,
    `select reverse_minutes, largest_reverse_flow_gpm, low_hours, excess_cost, excess_energy_kwh, coverage, worst_hour
     from plant_day where plant_id = $1 and organization_id = $2 and day = $3`,
    [plant.id, plant.organizationId, day],
  );
  if (!row) return null;
  return {
    day,
    reverseMinutes: row.reverse_minutes,
    largestReverseFlowGpm: row.largest_reverse_flow_gpm,
    lowHours: row.low_hours,
    excessCost: row.excess_cost,
    excessEnergyKwh: row.excess_energy_kwh,
    coverage: row.coverage,
    worstHourMs: row.worst_hour === null ? null : Date.parse(isoInstant(row.worst_hour)),
  };
}

type HourNumber = (typeof HOUR_NUMBERS)[number];
const HOUR_NUMBERS = [
  'running_minutes',
  'forward_minutes',
  'reverse_minutes',
  'still_minutes',
  'unknown_minutes',
  'bypass_flow_gpm',
  'reverse_flow_gpm',
  'excess_flow_gpm',
  'excess_cost',
  'units_running',
  'quality',
] as const;

/** The hours of a local day, in order. */
export async function readHours(em: EntityManager, plant: Plant, day: string): Promise<DayHour[]> {
  const rows = await query<Record<HourNumber, number | null> & { hour_start: string; low: boolean; cause: Cause }>(
    em,
    `select hour_start, low, cause, ${HOUR_NUMBERS.join(', ')} from hour
     where plant_id = $1 and organization_id = $2 and local_day = $3 order by hour_start`,
    [plant.id, plant.organizationId, day],
  );
  return rows.map((row) => ({
    hourStartMs: Date.parse(isoInstant(row.hour_start)),
    low: row.low,
    cause: row.cause,
    runningMinutes: row.running_minutes ?? 0,
    forwardMinutes: row.forward_minutes ?? 0,
    reverseMinutes: row.reverse_minutes ?? 0,
    stillMinutes: row.still_minutes ?? 0,
    unknownMinutes: row.unknown_minutes ?? 0,
    bypassFlowGpm: row.bypass_flow_gpm ?? NaN,
    reverseFlowGpm: row.reverse_flow_gpm ?? NaN,
    excessFlowGpm: row.excess_flow_gpm ?? NaN,
    excessCost: row.excess_cost ?? NaN,
    unitsRunning: row.units_running ?? NaN,
    quality: row.quality ?? NaN,
  }));
}
