import type { PointDay } from '../db/blocks';
import { addDays, daysBetween, dayStartMs } from '../db/days';
import type { Measurements } from '../hydronics/types';
import type { PointRoleName } from '../point-roles';

/** What assembling needs to know of a point. */
export interface PointPlace {
  id: string;
  role: string;
  unitIndex: number;
  /** First and last UTC day of the whole record that hold a value of it. */
  firstDay: string;
  lastDay: string;
}

/**
 * Days after its last value for which a feeder still counts as in service: a meter that has fallen silent makes its sum missing,
 * one that was taken away some day stops doing so.
 */
const SILENT_DAYS = 31;

/**
 * Lays the day blocks of a stretch of record side by side as the kernel wants them. Several feeders of one role: flows and
 * powers add up and one missing makes the sum missing; temperatures, states and percentages average over those that are there.
 *
 * Shapes  every channel has (days from..to) x 1440 / stepMinutes slots.
 * Units   as stored: deg F, gpm, kW, percent, 0 to 1 for states.
 * Gaps    NaN, also for whole days without a block.
 */
export function assembleMeasurements(
  points: readonly PointPlace[],
  blocks: readonly PointDay[],
  stretch: { fromDay: string; toDay: string; stepMinutes: number; unitCount: number },
): Measurements {
  const days = daysBetween(stretch.fromDay, stretch.toDay);
  const slotsPerDay = 1440 / stretch.stepMinutes;
  const n = days.length * slotsPerDay;
  const firstSlot = new Map(days.map((day, index) => [day, index * slotsPerDay]));

  const columns = new Map<string, Float64Array>();
  for (const block of blocks) {
    const start = firstSlot.get(block.day);
    if (start === undefined || block.values.length !== slotsPerDay) continue;
    let column = columns.get(block.pointId);
    if (!column) columns.set(block.pointId, (column = new Float64Array(n).fill(NaN)));
    column.set(block.values, start);
  }

  const missing = new Float64Array(n).fill(NaN);
  // Which feeders there are is a matter of the whole record, not of the stretch: the answer for a day must not depend on how
  // much was read around it.
  const feeders = (role: PointRoleName, unitIndex: number): Feeder[] =>
    points
      .filter((point) => point.role === role && point.unitIndex === unitIndex)
      .map((point) => ({
        values: columns.get(point.id) ?? missing,
        fromSlot: slotOf(point.firstDay, stretch.fromDay, slotsPerDay),
        toSlot: slotOf(addDays(point.lastDay, 1 + SILENT_DAYS), stretch.fromDay, slotsPerDay),
      }))
      .filter((feeder) => feeder.fromSlot < n && feeder.toSlot > 0);
  const mean = (role: PointRoleName, unitIndex = 0) => combine(feeders(role, unitIndex), n, 'mean');
  const sum = (role: PointRoleName, unitIndex = 0) => combine(feeders(role, unitIndex), n, 'sum');
  const units = <Value>(of: (unitIndex: number) => Value): Value[] =>
    Array.from({ length: stretch.unitCount }, (_, index) => of(index + 1));

  return {
    n,
    stepMinutes: stretch.stepMinutes,
    primarySupplyF: mean('primarySupplyTemp'),
    primaryReturnF: mean('primaryReturnTemp'),
    secondarySupplyF: mean('secondarySupplyTemp'),
    secondaryReturnF: mean('secondaryReturnTemp'),
    bypassF: mean('bypassTemp'),
    headerSupplyF: mean('headerSupplyTemp'),
    primaryFlowGpm: sum('primaryFlow'),
    secondaryFlowGpm: sum('secondaryFlow'),
    bypassFlowGpm: sum('bypassFlow'),
    bypassFlowUnsignedGpm: sum('bypassFlowUnsigned'),
    bypassValvePercent: mean('bypassValvePosition'),
    unitStatus: units((index) => mean('unitStatus', index)),
    unitFlowGpm: units((index) => sum('unitFlow', index)),
    unitLeavingF: units((index) => mean('unitLeavingTemp', index)),
    unitEnteringF: units((index) => mean('unitEnteringTemp', index)),
    unitPowerKw: units((index) => sum('unitPower', index)),
    primaryPumpStatus: units((index) => mean('primaryPumpStatus', index)),
    distributionPumpPowerKw: sum('distributionPumpPower'),
    plantPowerKw: sum('plantPower'),
    supplySetpointF: mean('supplySetpoint'),
    outdoorF: mean('outdoorTemp'),
  };
}

/** Where a point counts as in service within a stretch of record: all of its place that what is assembled there depends on. */
export interface ServingPoint {
  id: string;
  role: string;
  unitIndex: number;
  fromDay: string;
  toDay: string;
}

/** The points that may feed a stretch of UTC days (both included), each clipped to it: a later day of record changes nothing here. */
export function servingWithin(points: readonly PointPlace[], fromDay: string, toDay: string): ServingPoint[] {
  return points.flatMap(({ id, role, unitIndex, firstDay, lastDay }) => {
    const until = addDays(lastDay, SILENT_DAYS);
    if (firstDay > toDay || until < fromDay) return [];
    return [
      {
        id,
        role,
        unitIndex,
        fromDay: firstDay > fromDay ? firstDay : fromDay,
        toDay: until < toDay ? until : toDay,
      },
    ];
  });
}

/**
 * The slots [from, to) of a record, clipped to it: views of the same arrays, nothing is copied.
 */
export function measurementsBetween(measurements: Measurements, from: number, to: number): Measurements {
  const first = Math.max(0, from);
  const end = Math.min(measurements.n, to);
  const cut = (channel: Float64Array | undefined) => channel?.subarray(first, end);
  const entries = Object.entries(measurements).map(([name, value]: [string, unknown]) => [
    name,
    value instanceof Float64Array
      ? cut(value)
      : Array.isArray(value)
        ? (value as (Float64Array | undefined)[]).map(cut)
        : value,
  ]);
  return { ...(Object.fromEntries(entries) as Measurements), n: Math.max(0, end - first) };
}

/** One column of a role, and the slots of the stretch in which it is in service. */
interface Feeder {
  values: Float64Array;
  fromSlot: number;
  toSlot: number;
}

const slotOf = (day: string, fromDay: string, slotsPerDay: number): number =>
  ((dayStartMs(day) - dayStartMs(fromDay)) / 86_400_000) * slotsPerDay;

function combine(feeders: readonly Feeder[], n: number, how: 'mean' | 'sum'): Float64Array | undefined {
  const [first] = feeders;
  if (!first || feeders.length === 1) return first?.values;
  const combined = new Float64Array(n);
  for (let slot = 0; slot < n; slot++) {
    let total = 0;
    let count = 0;
    let gap = false;
    for (const { values, fromSlot, toSlot } of feeders) {
      if (slot < fromSlot || slot >= toSlot) continue;
      const value = values[slot] ?? NaN;
      if (Number.isNaN(value)) gap = true;
      else {
        total += value;
        count++;
      }
    }
    combined[slot] = count === 0 || (how === 'sum' && gap) ? NaN : how === 'sum' ? total : total / count;
  }
  return combined;
}
