import type { EntityManager } from '@mikro-orm/postgresql';
import { readBlocksOfDays } from '../db/blocks';
import { dayOf, dayStartMs } from '../db/days';
import { isoInstant, query } from '../db/sql';
import type { SensorRole, SpotCheck } from '../hydronics/calibration-types';
import type { Measurements, PlantModel } from '../hydronics/types';
import { pumpOn } from '../hydronics/units-on';
import { assembleMeasurements, type PointPlace } from './assemble-measurements';

/** Where a trend may be read for a check at another minute: the nearest value at most this far away. */
const NEAR_MINUTES = 15;
const MINUTE_MS = 60_000;

/** A spot check as the calibration takes it, and what became of its stored `recorded`. */
export interface CheckInForce {
  id: string;
  atMs: number;
  role: SensorRole;
  unitIndex: number;
  reading: number;
  sigma: number;
  /** What the plant's sensor showed: as entered, else from the record; NaN where neither says anything. */
  shown: number;
  /** What the record holds there now; null where `shown` was entered or the record has nothing. */
  recorded: number | null;
  /** What it held when the check was last used. */
  recordedBefore: number | null;
}

/** All spot checks of a plant in a fixed order, each with what the plant's own sensor showed then. */
export async function readChecks(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  plant: { points: readonly PointPlace[]; stepMinutes: number; model: PlantModel },
): Promise<CheckInForce[]> {
  const rows = await query<{
    id: string;
    at: string;
    role: SensorRole;
    unit_index: number;
    reading: number;
    shown: number | null;
    recorded: number | null;
    sigma: number;
  }>(
    em,
    `select id, at, role, unit_index, reading, shown, recorded, sigma from spot_check
     where organization_id = $1 and plant_id = $2 order by at, role, unit_index, reading, sigma, id`,
    [owner.organizationId, owner.plantId],
  );
  const checks = rows.map((row) => ({ ...row, atMs: Date.parse(isoInstant(row.at)) }));
  const open = checks.filter((check) => check.shown === null);
  const days = [...new Set(open.map((check) => dayOf(check.atMs)))];
  const blocks = days.length === 0 ? [] : await readBlocksOfDays(em, owner, days);
  const records = new Map(
    days.map((day) => [
      day,
      assembleMeasurements(
        plant.points,
        blocks.filter((block) => block.day === day),
        { fromDay: day, toDay: day, stepMinutes: plant.stepMinutes, unitCount: plant.model.units.length },
      ),
    ]),
  );
  return checks.map(({ id, atMs, role, unit_index, reading, sigma, shown, recorded }) => {
    const day = dayOf(atMs);
    const record = shown === null ? records.get(day) : undefined;
    const found = record ? shownAt(record, plant.model, role, (atMs - dayStartMs(day)) / MINUTE_MS) : Number.NaN;
    return {
      id,
      atMs,
      role,
      unitIndex: unit_index,
      reading,
      sigma,
      shown: shown ?? found,
      recorded: Number.isNaN(found) ? null : found,
      recordedBefore: recorded,
    };
  });
}

/** The checks as the kernel takes them, their slots counted from `fromDay`. */
export const checksFrom = (checks: readonly CheckInForce[], fromDay: string, stepMinutes: number): SpotCheck[] =>
  checks.map(({ atMs, role, reading, sigma, shown }) => ({
    slot: Math.floor((atMs - dayStartMs(fromDay)) / (stepMinutes * MINUTE_MS)),
    role,
    reading,
    sigma,
    shown,
  }));

/**
 * What a plant's sensor showed at a minute of a day's record: the interval that holds it, else the nearest that holds a value.
 * For the rated flow that stands in for a meter: the rated flows of the pumps that ran.
 */
function shownAt(record: Measurements, model: PlantModel, role: SensorRole, minute: number): number {
  const slot = Math.floor(minute / record.stepMinutes);
  const reach = Math.ceil(NEAR_MINUTES / record.stepMinutes);
  const value = (at: number) => (at < 0 || at >= record.n ? Number.NaN : valueAt(record, model, role, at));
  for (let step = 0; step <= reach; step += 1) {
    for (const near of step === 0 ? [slot] : [slot - step, slot + step]) {
      if (!Number.isNaN(value(near))) return value(near);
    }
  }
  return Number.NaN;
}

function valueAt(record: Measurements, model: PlantModel, role: SensorRole, slot: number): number {
  const at = (channel: Float64Array | undefined) => channel?.[slot] ?? Number.NaN;
  switch (role) {
    case 'primarySupplyTemp':
      return at(record.primarySupplyF);
    case 'primaryReturnTemp':
      return at(record.primaryReturnF);
    case 'secondarySupplyTemp':
      return at(record.secondarySupplyF);
    case 'secondaryReturnTemp':
      return at(record.secondaryReturnF);
    case 'bypassTemp':
      return at(record.bypassF);
    case 'primaryFlow':
      // Without a meter in the main, the units' own add up to it; one missing makes the sum missing.
      return record.primaryFlowGpm
        ? at(record.primaryFlowGpm)
        : record.unitFlowGpm.reduce((sum, channel) => sum + at(channel), 0);
    case 'secondaryFlow':
      return at(record.secondaryFlowGpm);
    case 'bypassFlow':
      return Number.isNaN(at(record.bypassFlowGpm)) ? at(record.bypassFlowUnsignedGpm) : at(record.bypassFlowGpm);
    case 'ratedFlow':
      return model.units.reduce((sum, unit, index) => sum + unit.flowGpm * pumpOn(record, unit, index, slot), 0);
  }
}
