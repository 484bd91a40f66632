import { tzOffset } from '@date-fns/tz';
import { addDays, dayOf, dayStartMs } from '../db/days';

/** Local days and clock hours of a plant's zone as instants. Days are `YYYY-MM-DD`, instants epoch ms. */

export const MINUTE_MS = 60_000;
export const HOUR_MS = 3_600_000;
export const DAY_MS = 86_400_000;

/** How far the zone's clock is ahead of UTC at an instant, in ms. */
export const zoneOffsetMs = (epochMs: number, timeZone: string): number =>
  Math.round(tzOffset(timeZone, new Date(epochMs)) * MINUTE_MS);

/** The local calendar day an instant falls on. */
export const localDayOf = (epochMs: number, timeZone: string): string =>
  dayOf(epochMs + zoneOffsetMs(epochMs, timeZone));

/**
 * The first instant of a local day at which the zone's clock shows `minutes` after midnight or later. A clock reading that
 * occurs twice means the first of the two; one that clocks skip means the instant of the change.
 */
export function localInstant(day: string, minutes: number, timeZone: string): number {
  const wall = dayStartMs(day) + minutes * MINUTE_MS;
  const clock = (at: number) => at + zoneOffsetMs(at, timeZone);
  // The zone is at one of these two offsets around the wanted reading; the larger gives the earlier instant.
  const offsets = [zoneOffsetMs(wall - DAY_MS, timeZone), zoneOffsetMs(wall + DAY_MS, timeZone)];
  const found = offsets.map((offset) => wall - offset).filter((at) => clock(at) === wall);
  if (found.length > 0) return Math.min(...found);
  // Skipped by a change of clocks: close in on the first minute that shows the reading or a later one.
  let before = wall - 16 * HOUR_MS;
  let after = wall + 16 * HOUR_MS;
  while (after - before > MINUTE_MS) {
    const middle = before + Math.floor((after - before) / 2 / MINUTE_MS) * MINUTE_MS;
    if (clock(middle) >= wall) after = middle;
    else before = middle;
  }
  return after;
}

/** The instant a local day begins; where clocks skip midnight, the first instant of that day. */
export const localDayStart = (day: string, timeZone: string): number => localInstant(day, 0, timeZone);

/** The local days that touch [fromMs, toMs), in order. */
export function localDaysOf(fromMs: number, toMs: number, timeZone: string): string[] {
  const days: string[] = [];
  if (toMs <= fromMs) return days;
  const last = localDayOf(toMs - 1, timeZone);
  for (let day = localDayOf(fromMs, timeZone); day <= last; day = addDays(day, 1)) days.push(day);
  return days;
}
