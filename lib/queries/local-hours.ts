const HOUR_MS = 3_600_000;
const QUARTER_MS = 900_000;

const formatters = new Map<string, Intl.DateTimeFormat>();
function localParts(timeZone: string, epochMs: number): { day: string; hour: number; minute: number } {
  let formatter = formatters.get(timeZone);
  if (!formatter) {
    formatter = new Intl.DateTimeFormat('en-CA', {
      timeZone,
      hourCycle: 'h23',
      year: 'numeric',
      month: '2-digit',
      day: '2-digit',
      hour: '2-digit',
      minute: '2-digit',
    });
    formatters.set(timeZone, formatter);
  }
  const parts = Object.fromEntries(formatter.formatToParts(epochMs).map((part) => [part.type, part.value]));
  return {
    day: `${parts.year ?? ''}-${parts.month ?? ''}-${parts.day ?? ''}`,
    hour: Number(parts.hour),
    minute: Number(parts.minute),
  };
}

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
    const { day, minute } = localParts(timeZone, at);
    if (minute !== 0) {
      at += QUARTER_MS;
      continue;
    }
    hours.push({ startMs: at, day });
    // Within the next hour the local minute comes to 0 again at the earliest half an hour on.
    at += 2 * QUARTER_MS;
  }
  const firstInside = hours.findLastIndex((hour) => hour.startMs <= fromMs);
  return hours.slice(Math.max(0, firstInside));
}

/** The local calendar day of an instant. */
export const localDayOf = (timeZone: string, epochMs: number): string => localParts(timeZone, epochMs).day;
