import { HOUR_MS, localDayOf, MINUTE_MS, zoneOffsetMs } from './local-time';

const QUARTER_MS = 15 * MINUTE_MS;

export interface LocalHour {
  startMs: number;
  /** Local calendar day the hour belongs to. */
  day: string;
}

/**
 * The local clock hours that overlap [fromMs, toMs), in order, as UTC instants. Zones whose offset is not a whole hour start
 * theirs at :15, :30 or :45; a repeated hour comes twice, a skipped one not at all. A clock change of half an hour (Lord Howe)
 * makes one hour of 30 or 90 minutes, since an hour starts where the local minute is 0.
 */
export function localHours(timeZone: string, fromMs: number, toMs: number): LocalHour[] {
  const hours: LocalHour[] = [];
  // No hour is longer than 90 minutes, so the one that holds fromMs starts at most that much earlier.
  for (let at = Math.floor(fromMs / QUARTER_MS) * QUARTER_MS - 2 * HOUR_MS; at < toMs;) {
    if ((at + zoneOffsetMs(at, timeZone)) % HOUR_MS !== 0) {
      at += QUARTER_MS;
      continue;
    }
    hours.push({ startMs: at, day: localDayOf(at, timeZone) });
    // Within the next hour the local minute comes to 0 again at the earliest half an hour on.
    at += 2 * QUARTER_MS;
  }
  const firstInside = hours.findLastIndex((hour) => hour.startMs <= fromMs);
  return hours.slice(Math.max(0, firstInside));
}
