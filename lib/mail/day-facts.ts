import { CAUSES, type Cause, type HourResult } from '../hydronics/types';
import type { DayFacts, HourBar } from './daily-mail-model';
import type { DaySlot } from './reverse-stretches';

/** What the mail reads of an hour. NaN where unknown. */
export type DayHour = Pick<
  HourResult,
  | 'hourStartMs'
  | 'low'
  | 'cause'
  | 'runningMinutes'
  | 'forwardMinutes'
  | 'reverseMinutes'
  | 'stillMinutes'
  | 'unknownMinutes'
  | 'bypassFlowGpm'
  | 'reverseFlowGpm'
  | 'excessFlowGpm'
  | 'excessCost'
  | 'unitsRunning'
  | 'quality'
>;

/** A mean of units running that is this near a whole number is that number all hour long. */
const WHOLE_UNITS_TOLERANCE = 0.05;

/**
 * The strip's bars, one a local clock hour, split into the forward and the backward part of the hour's net bypass flow:
 * the backward part is its mean over the reverse minutes, spread over the hour.
 *
 * Units   gpm.
 * Gaps    an hour without a row, or with no minute judged while running, has no bar.
 */
export function hourBars(hours: readonly DayHour[], clockHours: readonly number[]): HourBar[] {
  const byStart = new Map(hours.map((hour) => [hour.hourStartMs, hour]));
  return clockHours.map((startMs) => {
    const hour = byStart.get(startMs);
    const kind = hour ? kindOf(hour) : 'no-data';
    if (!hour || (kind !== 'forward' && kind !== 'reverse')) return { startMs, forwardGpm: 0, reverseGpm: 0, kind };
    const reverseGpm = hour.reverseMinutes > 0 ? known(hour.reverseFlowGpm) * (hour.reverseMinutes / 60) : 0;
    return { startMs, forwardGpm: Math.max(0, known(hour.bypassFlowGpm) + reverseGpm), reverseGpm, kind };
  });
}

function kindOf(hour: DayHour): HourBar['kind'] {
  const minutes = {
    forward: hour.forwardMinutes,
    reverse: hour.reverseMinutes,
    still: hour.stillMinutes,
    unknown: hour.unknownMinutes,
  } as const;
  const [most, held] = (Object.entries(minutes) as [keyof typeof minutes, number][]).reduce((best, each) =>
    each[1] > best[1] ? each : best,
  );
  if (held > 0) return most;
  return hour.quality > 0 ? 'off' : 'no-data';
}

/** The cause behind most of the excess of the low hours: by cost where every low hour has one, else by flow. */
export function dominantCause(hours: readonly DayHour[]): Cause | null {
  const low = hours.filter((hour) => hour.low);
  const byCost = low.every((hour) => !Number.isNaN(hour.excessCost));
  const weights = new Map<Cause, number>();
  for (const hour of low) {
    const weight = known(byCost ? hour.excessCost : hour.excessFlowGpm);
    weights.set(hour.cause, (weights.get(hour.cause) ?? 0) + weight);
  }
  const named = CAUSES.filter((cause) => cause !== 'none' && weights.has(cause));
  return named.reduce<Cause | null>(
    (best, cause) => (best === null || (weights.get(cause) ?? 0) > (weights.get(best) ?? 0) ? cause : best),
    null,
  );
}

/** What was going on at the largest backward flow; null when its flows are not known. */
export function situationOf(largest: DaySlot, hours: readonly DayHour[], units: number): DayFacts['situation'] {
  if (!Number.isFinite(largest.primaryFlowGpm) || !Number.isFinite(largest.secondaryFlowGpm)) return null;
  const hour = hours.findLast((each) => each.hourStartMs <= largest.startMs);
  const running = hours.filter((each) => each.runningMinutes > 0).map((each) => each.unitsRunning);
  const most = running.some((count) => Number.isNaN(count)) ? NaN : Math.max(...running);
  return {
    atMs: largest.startMs,
    productionFlowGpm: largest.primaryFlowGpm,
    buildingsFlowGpm: largest.secondaryFlowGpm,
    bypassFlowGpm: largest.bypassFlowGpm,
    unitsRunning: wholeUnits(hour?.unitsRunning ?? NaN, units),
    // A mean just over 2 says that a third unit ran for a while: rounded up.
    mostUnitsRunning: Number.isFinite(most) && units > 0 ? Math.ceil(most - WHOLE_UNITS_TOLERANCE) : null,
    units,
  };
}

function wholeUnits(mean: number, units: number): number | null {
  const whole = Math.round(mean);
  return units > 0 && whole >= 1 && whole <= units && Math.abs(mean - whole) < WHOLE_UNITS_TOLERANCE ? whole : null;
}

const known = (value: number): number => (Number.isFinite(value) ? value : 0);
