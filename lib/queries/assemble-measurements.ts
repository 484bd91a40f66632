import type { PointDay } from '../db/blocks';
import { daysBetween } from '../db/days';
import type { Measurements } from '../hydronics/types';
import type { PointRoleName } from '../point-roles';

/** What assembling needs to know of a point. */
export interface PointPlace {
  id: string;
  role: string;
  unitIndex: number;
}

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

  const feeders = (role: PointRoleName, unitIndex = 0): Float64Array[] =>
    points
      .filter((point) => point.role === role && point.unitIndex === unitIndex)
      .flatMap((point) => columns.get(point.id) ?? []);
  const mean = (role: PointRoleName, unitIndex = 0) => combine(feeders(role, unitIndex), 'mean');
  const sum = (role: PointRoleName, unitIndex = 0) => combine(feeders(role, unitIndex), 'sum');
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
    primaryFlowGpm: sum('primaryFlow'),
    secondaryFlowGpm: sum('secondaryFlow'),
    bypassFlowGpm: sum('bypassFlow'),
    bypassFlowUnsignedGpm: sum('bypassFlowUnsigned'),
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

function combine(columns: readonly Float64Array[], how: 'mean' | 'sum'): Float64Array | undefined {
  const [first] = columns;
  if (!first || columns.length === 1) return first;
  return first.map((_, slot) => {
    let total = 0;
    let count = 0;
    for (const column of columns) {
      const value = column[slot] ?? NaN;
      if (Number.isNaN(value)) {
        if (how === 'sum') return NaN;
        continue;
      }
      total += value;
      count++;
    }
    return how === 'sum' ? total : count === 0 ? NaN : total / count;
  });
}
