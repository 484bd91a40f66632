import type { PlantDay, TideBar } from '@/lib/schemas/results';
import { localDay } from '@/lib/client/format-time';
import type { TimeColumn } from './time-columns';

/** What stands under one column of the strip. */
export interface TideCell {
  /** Minutes of reverse flow; null when nothing was read in this column. */
  reverseMinutes: number | null;
  /** Largest flow backward, 0 or less; null when there was none. */
  largestGpm: number | null;
  warmestSupplyF: number | null;
  /** A quarter of the column or more ran backward (6 hours of a day): bold. */
  heavy: boolean;
}

const MINUTE_MS = 60_000;
const HEAVY_SHARE = 0.25;

/**
 * The tide table: one cell a column, from the bars that begin in it. Where a column is one local day and the day's own
 * record is given, that is used: it holds the interval's extremes, not those of thinned bars.
 *
 * Shapes  one cell a column, in order. Bars are in order of time.
 */
export function tideTable(
  bars: readonly TideBar[],
  columns: readonly TimeColumn[],
  timeZone: string,
  days: readonly PlantDay[] = [],
): TideCell[] {
  const byDay = new Map(days.map((day) => [day.day, day]));
  let next = 0;
  return columns.map((column) => {
    const inside: TideBar[] = [];
    while (next < bars.length) {
      const bar = bars[next];
      if (bar === undefined || bar.t >= column.endMs) break;
      if (bar.t >= column.startMs) inside.push(bar);
      next += 1;
    }
    const hours = (column.endMs - column.startMs) / (60 * MINUTE_MS);
    const whole = hours >= 23 && hours <= 25 ? byDay.get(localDay(column.startMs, timeZone)) : undefined;
    return whole === undefined ? fromBars(inside, column) : fromDay(whole);
  });
}

function fromDay(day: PlantDay): TideCell {
  const largest = day.largestReverseFlowGpm;
  return {
    reverseMinutes: day.coverage === 0 ? null : day.reverseMinutes,
    largestGpm: largest === null || day.reverseMinutes === 0 ? null : -Math.abs(largest),
    warmestSupplyF: day.warmestSupplyF,
    heavy: day.reverseMinutes >= 1440 * HEAVY_SHARE,
  };
}

function fromBars(bars: readonly TideBar[], column: TimeColumn): TideCell {
  const read = bars.filter(
    (bar) => bar.forwardMinutes + bar.reverseMinutes + bar.stillMinutes + bar.unknownMinutes > 0,
  );
  if (read.length === 0) return { reverseMinutes: null, largestGpm: null, warmestSupplyF: null, heavy: false };
  let reverseMinutes = 0;
  let largestGpm: number | null = null;
  let warmestSupplyF: number | null = null;
  for (const bar of read) {
    reverseMinutes += bar.reverseMinutes;
    const flow = bar.reverseFlowGpm ?? bar.bypassFlowGpm;
    if (bar.reverseMinutes > 0 && flow !== null) largestGpm = Math.min(largestGpm ?? 0, -Math.abs(flow));
    const supplyF = bar.blendedSupplyMaxF ?? bar.blendedSupplyF;
    if (supplyF !== null) warmestSupplyF = Math.max(warmestSupplyF ?? -Infinity, supplyF);
  }
  const minutes = (column.endMs - column.startMs) / MINUTE_MS;
  return { reverseMinutes, largestGpm, warmestSupplyF, heavy: reverseMinutes >= minutes * HEAVY_SHARE };
}
