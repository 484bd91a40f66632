import { addDays, dayStartMs } from '../db/days';

/** Numbers of days a month's calibration is fitted on: it is fitted again when the next of them is reached, and not every night. */
const STEPS = [1, 2, 3, 5, 7, 10, 14, 21, 28, 31] as const;
/** Fewer days than these are filled up from the months beside: a day or two rarely shows both directions. */
export const LEAST_DAYS = 7;
/** A neighbouring day is asked at most this far from the month's own. */
const FARTHEST_DAYS = 31;
const DAY_MS = 86_400_000;

/** A calendar month of UTC days; both ends included. */
export interface Month {
  firstDay: string;
  lastDay: string;
}

/** The month that holds a UTC day, or the one `months` after it. */
export function monthOf(day: string, months = 0): Month {
  const year = Number(day.slice(0, 4));
  const month = Number(day.slice(5, 7)) - 1 + months;
  const dayOf = (epochMs: number) => new Date(epochMs).toISOString().slice(0, 10);
  return { firstDay: dayOf(Date.UTC(year, month, 1)), lastDay: dayOf(Date.UTC(year, month + 1, 0)) };
}

export const inMonth = (day: string, month: Month): boolean => day >= month.firstDay && day <= month.lastDay;

/** Every stored day that may decide on which days a month is fitted: its own and those of the two months beside it. */
export const monthsAround = (month: Month): Month => ({
  firstDay: monthOf(month.firstDay, -1).firstDay,
  lastDay: monthOf(month.firstDay, 1).lastDay,
});

/**
 * The days on which a month's calibration is fitted: the first k stored days of the month, k the largest of STEPS not above
 * their number; with fewer than seven of its own, the nearest stored days of the adjoining months fill up, the earlier on a tie.
 * A function of what is stored alone, whatever the order in which it came.
 *
 * Shapes  `stored`: days that hold samples, ascending; days beyond the adjoining months do not count. Result ascending.
 * Gaps    a month without stored days has none to be fitted on.
 */
export function fitDays(month: Month, stored: readonly string[]): string[] {
  const own = stored.filter((day) => inMonth(day, month));
  const step = STEPS.findLast((each) => each <= own.length);
  if (step === undefined) return [];
  const first = own.slice(0, step);
  if (own.length >= LEAST_DAYS) return first;
  const around = monthsAround(month);
  // From the fitted days, not from all stored ones: a day that leaves k alone leaves the others alone.
  const away = (day: string) => Math.min(...first.map((each) => Math.abs(dayStartMs(each) - dayStartMs(day)) / DAY_MS));
  const beside = stored
    .filter((day) => inMonth(day, around) && !inMonth(day, month))
    .map((day) => ({ day, away: away(day) }))
    .filter((each) => each.away <= FARTHEST_DAYS)
    .sort((left, right) => left.away - right.away || (left.day < right.day ? -1 : 1));
  return [...first, ...beside.slice(0, LEAST_DAYS - first.length).map((each) => each.day)].sort();
}

/** The days of a month, in order. */
export function daysOfMonth(month: Month): string[] {
  const days: string[] = [];
  for (let day = month.firstDay; day <= month.lastDay; day = addDays(day, 1)) days.push(day);
  return days;
}
