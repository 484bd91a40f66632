import type { EntityManager } from '@mikro-orm/postgresql';
import { readRealArray } from '../db/real-array';
import { isoInstant, query } from '../db/sql';
import { dayStartMs } from '../db/days';
import { DIRECTIONS } from '../hydronics/types';
import type { TideBar } from '../schemas/results';

/** The local days of each plant, in step. */
export interface PlantWindow {
  plantId: string;
  firstDay: string;
  lastDay: string;
}

const HOUR_MS = 3_600_000;
const windowArrays = (windows: readonly PlantWindow[]) => [
  windows.map((each) => each.plantId),
  windows.map((each) => each.firstDay),
  windows.map((each) => each.lastDay),
];

interface HourRow {
  plant_id: string;
  hour_start: string;
  forward_minutes: number;
  reverse_minutes: number;
  still_minutes: number;
  unknown_minutes: number;
  bypass_flow_gpm: number | null;
  reverse_flow_gpm: number | null;
  blended_supply_f: number | null;
  blended_supply_max_f: number | null;
  primary_supply_f: number | null;
  primary_flow_gpm: number | null;
  secondary_flow_gpm: number | null;
  load_tons: number | null;
}

/** The hours of several plants as bars of their strips, by plant. */
export async function readOverviewBars(
  em: EntityManager,
  organizationIds: readonly string[],
  windows: readonly PlantWindow[],
): Promise<Map<string, TideBar[]>> {
  const sureness = await readSureness(em, organizationIds, windows);
  const rows = await query<HourRow & Record<string, unknown>>(
    em,
    `select h.plant_id, h.hour_start, h.forward_minutes, h.reverse_minutes, h.still_minutes, h.unknown_minutes, h.bypass_flow_gpm,
            h.reverse_flow_gpm, h.blended_supply_f, h.blended_supply_max_f, h.primary_supply_f, h.primary_flow_gpm,
            h.secondary_flow_gpm, h.load_tons
     from unnest($2::uuid[], $3::date[], $4::date[]) as w(plant_id, first_day, last_day)
     join hour h on h.plant_id = w.plant_id and h.local_day between w.first_day and w.last_day
     where h.organization_id = any ($1::uuid[]) order by h.plant_id, h.hour_start`,
    [organizationIds, ...windowArrays(windows)],
  );
  const bars = new Map<string, TideBar[]>(windows.map((each) => [each.plantId, []]));
  for (const row of rows) bars.get(row.plant_id)?.push(barOf(row, sureness));
  return bars;
}

function barOf(row: HourRow, sureness: ReadonlyMap<string, number>): TideBar {
  const t = Date.parse(isoInstant(row.hour_start));
  const { forward_minutes: forward, reverse_minutes: reverse, still_minutes: still } = row;
  return {
    t,
    forwardMinutes: forward,
    reverseMinutes: reverse,
    stillMinutes: still,
    unknownMinutes: row.unknown_minutes,
    probability: sureness.get(`${row.plant_id}/${Math.floor(t / HOUR_MS)}`) ?? null,
    bypassFlowGpm: row.bypass_flow_gpm,
    bypassFlowLoGpm: null,
    bypassFlowHiGpm: null,
    forwardFlowGpm: forwardFlow(row.bypass_flow_gpm, row.reverse_flow_gpm, forward, reverse, still),
    reverseFlowGpm: row.reverse_flow_gpm === null ? null : -row.reverse_flow_gpm,
    blendedSupplyF: row.blended_supply_f,
    blendedSupplyMaxF: row.blended_supply_max_f,
    primarySupplyF: row.primary_supply_f,
    primaryReturnF: null,
    secondaryReturnF: null,
    primaryFlowGpm: row.primary_flow_gpm,
    secondaryFlowGpm: row.secondary_flow_gpm,
    loadTons: row.load_tons,
  };
}

/** Mean over the forward minutes, from the mean of the hour and that of its reverse minutes; nothing flows in the still ones. */
function forwardFlow(
  bypassGpm: number | null,
  reverseGpm: number | null,
  forward: number,
  reverse: number,
  still: number,
): number | null {
  if (forward === 0 || bypassGpm === null) return null;
  const backward = reverse === 0 ? 0 : (reverseGpm ?? 0) * reverse;
  return (bypassGpm * (forward + reverse + still) + backward) / forward;
}

/** Mean probability of the direction each clock hour of UTC held most, by `plant/hours since 1970`. */
async function readSureness(
  em: EntityManager,
  organizationIds: readonly string[],
  windows: readonly PlantWindow[],
): Promise<Map<string, number>> {
  const rows = await query<{ plant_id: string; day: string; step: number; direction: Buffer; reverse: Buffer }>(
    em,
    `select r.plant_id, r.day, r.step, array_send(r.direction) as direction, array_send(r.reverse_probability) as reverse
     from unnest($2::uuid[], $3::date[], $4::date[]) as w(plant_id, first_day, last_day)
     -- a local day reaches into the UTC days on both sides of it
     join result_block r on r.plant_id = w.plant_id and r.day between w.first_day - 1 and w.last_day + 1
     where r.organization_id = any ($1::uuid[])`,
    [organizationIds, ...windowArrays(windows)],
  );
  const sureness = new Map<string, number>();
  for (const row of rows) {
    const direction = readRealArray(row.direction);
    const reverse = readRealArray(row.reverse);
    const slotsAnHour = Math.max(1, Math.round(60 / row.step));
    const firstHour = dayStartMs(row.day) / HOUR_MS;
    for (let hour = 0; hour < 24; hour++) {
      const start = hour * slotsAnHour;
      const mean = meanSureness(direction, reverse, start, start + slotsAnHour);
      if (mean !== null) sureness.set(`${row.plant_id}/${firstHour + hour}`, mean);
    }
  }
  return sureness;
}

function meanSureness(direction: Float32Array, reverse: Float32Array, from: number, to: number): number | null {
  const sums = new Map<string, { count: number; sum: number }>();
  for (let slot = from; slot < to; slot++) {
    const name = DIRECTIONS[direction[slot] ?? 0] ?? 'unknown';
    const backward = reverse[slot] ?? NaN;
    if ((name !== 'forward' && name !== 'reverse') || Number.isNaN(backward)) continue;
    const entry = sums.get(name) ?? { count: 0, sum: 0 };
    sums.set(name, { count: entry.count + 1, sum: entry.sum + (name === 'reverse' ? backward : 1 - backward) });
  }
  const [most] = [...sums.values()].sort((a, b) => b.count - a.count);
  return most ? most.sum / most.count : null;
}
