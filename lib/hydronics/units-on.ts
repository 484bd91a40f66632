import type { Measurements, PlantModel, UnitModel } from './types';

/** Power above this share of rated compressor power counts as running (common practice, no source). */
const RUNNING_POWER_SHARE = 0.05;
/** Flow above this share of rated flow counts as flow (common practice, no source). */
export const FLOWING_SHARE = 0.1;

/** Value of a channel at a slot; NaN when the point does not exist. */
export const at = (channel: Float64Array | undefined, slot: number): number => channel?.[slot] ?? Number.NaN;

/**
 * Whether a production unit runs, from its status, else its power, else water through it: 1, 0, or NaN when nothing says.
 *
 * Gaps    a missing status falls back to power, a missing power to the unit's flow.
 */
export function unitOn(measurements: Measurements, unit: UnitModel, index: number, slot: number): number {
  const status = at(measurements.unitStatus[index], slot);
  if (status === status) return status > 0.5 ? 1 : 0;
  const powerKw = at(measurements.unitPowerKw[index], slot);
  if (powerKw === powerKw) return powerKw > RUNNING_POWER_SHARE * unit.tons * unit.kwPerTon ? 1 : 0;
  const flowGpm = at(measurements.unitFlowGpm[index], slot);
  if (flowGpm === flowGpm) return flowGpm > FLOWING_SHARE * unit.flowGpm ? 1 : 0;
  return Number.NaN;
}

/** Whether water is pumped through a unit: its pump's status, else the unit's own; 1, 0 or NaN. */
export function pumpOn(measurements: Measurements, unit: UnitModel, index: number, slot: number): number {
  const status = at(measurements.primaryPumpStatus[index], slot);
  if (status === status) return status > 0.5 ? 1 : 0;
  return unitOn(measurements, unit, index, slot);
}

/**
 * Number of production units that run at a slot.
 *
 * Gaps    NaN when no unit says anything; a unit that says nothing beside others that do makes the count NaN only when
 *         none of the others runs (one unit on is enough to know that the plant runs).
 */
export function unitsOnCount(measurements: Measurements, plant: PlantModel, slot: number): number {
  let count = 0;
  let silent = 0;
  for (let index = 0; index < plant.units.length; index += 1) {
    const on = unitOn(measurements, plant.units[index] as UnitModel, index, slot);
    if (on === on) count += on;
    else silent += 1;
  }
  return silent > 0 && count === 0 ? Number.NaN : count;
}
