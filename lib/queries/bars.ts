import { addDays, dayStartMs } from '../db/days';
import { problem } from '../http/problem';
import { DAY_MS, HOUR_MS, localDaysOf, localDayStart, localInstant, MINUTE_MS, zoneOffsetMs } from './local-time';
import type { PeriodMs } from './period';

/** Lengths a bar may have, minutes: below an hour they divide it, below a day they divide the day, then whole days. */
const LADDER = [1, 2, 3, 4, 5, 6, 10, 12, 15, 20, 30, 60, 120, 180, 240, 360, 480, 720, 1440, 2880, 10_080] as const;
/** A chart has fewer pixels than this. */
export const MOST_BARS = 20_000;

/** The shortest bar that is at least `wanted` minutes long and holds whole intervals of the plant. */
export const barAtLeast = (wanted: number, stepMinutes: number): number =>
  LADDER.find((each) => each >= wanted && each % stepMinutes === 0) ?? 10_080;

/** What a bar of the tide strip is when nobody says: at least 3 px wide on a strip of about 1,150 px. */
export function defaultBarMinutes({ fromMs, toMs }: PeriodMs, stepMinutes: number): number {
  const days = (toMs - fromMs) / DAY_MS;
  const wanted = days <= 1.5 ? 5 : days <= 4 ? 15 : days <= 15 ? 60 : days <= 70 ? 180 : days <= 1100 ? 1440 : 10_080;
  return barAtLeast(wanted, stepMinutes);
}

/**
 * The starts of the bars that touch a period and, last, the end of the last bar. Bars follow the plant's clock: those of some
 * hours begin at local clock hours (so one of them is an hour longer or shorter where clocks change), those of days at local
 * midnight, weeks on Monday. The first bar may begin before the period.
 *
 * Shapes  one entry more than there are bars, ascending, epoch ms.
 * Throws  a 400 problem when there would be more than MOST_BARS bars.
 */
export function barEdges(period: PeriodMs, barMinutes: number, timeZone: string): number[] {
  if ((period.toMs - period.fromMs) / (barMinutes * MINUTE_MS) > MOST_BARS) {
    const message = `Bars of ${barMinutes} min make too many for this period: ask for longer ones.`;
    throw problem(400, 'Invalid input', message, [{ path: 'barMinutes', message }]);
  }
  if (barMinutes < 60) return evenEdges(period, barMinutes, timeZone);
  if (barMinutes < 1440) return withinDays(period, barMinutes, timeZone);
  return wholeDays(period, barMinutes / 1440, timeZone);
}

/** Parts of an hour: clock changes are whole multiples of them, so that even steps from one local hour stay on the clock. */
function evenEdges({ fromMs, toMs }: PeriodMs, barMinutes: number, timeZone: string): number[] {
  const bar = barMinutes * MINUTE_MS;
  const phase = zoneOffsetMs(fromMs, timeZone) % HOUR_MS;
  const first = Math.floor((fromMs + phase) / bar) * bar - phase;
  const edges = [first];
  for (let edge = first + bar; (edges.at(-1) ?? 0) < toMs; edge += bar) edges.push(edge);
  return edges;
}

function withinDays({ fromMs, toMs }: PeriodMs, barMinutes: number, timeZone: string): number[] {
  const starts: number[] = [];
  for (const day of localDaysOf(fromMs, toMs, timeZone)) {
    const dayStart = localDayStart(day, timeZone);
    const dayEnd = localDayStart(addDays(day, 1), timeZone);
    if (barMinutes === 60) {
      // Hours are counted, not read off the clock: the repeated hour is two bars.
      for (let at = dayStart; at < dayEnd; at += HOUR_MS) starts.push(at);
      continue;
    }
    for (let minutes = 0; minutes < 1440; minutes += barMinutes) {
      const at = localInstant(day, minutes, timeZone);
      if (at < dayEnd && at > (starts.at(-1) ?? -Infinity)) starts.push(at);
    }
  }
  const lastDay = localDaysOf(fromMs, toMs, timeZone).at(-1) ?? '';
  starts.push(localDayStart(addDays(lastDay, 1), timeZone));
  return touching(starts, fromMs, toMs);
}

function wholeDays({ fromMs, toMs }: PeriodMs, barDays: number, timeZone: string): number[] {
  const days = localDaysOf(fromMs, toMs, timeZone);
  const number = Math.round(dayStartMs(days[0] ?? '') / DAY_MS);
  // Day 0 was a Thursday: three days on, the count of sevens turns over on Mondays.
  const intoBar = barDays === 7 ? (number + 3) % 7 : number % barDays;
  const edges: number[] = [];
  let day = addDays(days[0] ?? '', -intoBar);
  for (;;) {
    const start = localDayStart(day, timeZone);
    edges.push(start);
    if (start >= toMs) return edges;
    day = addDays(day, barDays);
  }
}

/** Drops the edges of bars that lie wholly outside. */
function touching(edges: number[], fromMs: number, toMs: number): number[] {
  let first = 0;
  while ((edges[first + 1] ?? Infinity) <= fromMs) first++;
  let last = edges.length - 1;
  while (last > first + 1 && (edges[last - 1] ?? -Infinity) >= toMs) last--;
  return edges.slice(first, last + 1);
}
