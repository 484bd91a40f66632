import {
  formatClock,
  formatDate,
  formatDayShort,
  localDay,
  localDayStarts,
  localParts,
} from '@/lib/client/format-time';

/** A stretch of the time axis that has a head and, under the strip, a column of the tide table. */
export interface TimeColumn {
  startMs: number;
  endMs: number;
  label: string;
  /** A local day begins here: its line is drawn stronger. */
  opensDay: boolean;
}

export const COLUMN_LEVELS = ['hour', 'quarter', 'half', 'day', 'week', 'month'] as const;
export type ColumnLevel = (typeof COLUMN_LEVELS)[number];

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const HOURS: Readonly<Record<'hour' | 'quarter' | 'half', number>> = { hour: 1, quarter: 6, half: 12 };
/** Most days shown by each level: a day by hours, a week by half days, two weeks by days, a month by weeks. */
const MOST_DAYS: readonly [ColumnLevel, number][] = [
  ['hour', 1.3],
  ['quarter', 4.1],
  ['half', 9.1],
  ['day', 20.1],
  ['week', 100],
];
/** Narrowest column that holds `−1,059` in small type. */
const NARROWEST_PX = 38;

export function columnLevel(fromMs: number, toMs: number, widthPx: number): ColumnLevel {
  const days = (toMs - fromMs) / DAY_MS;
  const wanted = MOST_DAYS.find(([, most]) => days <= most)?.[0] ?? 'month';
  const daysOf = { hour: 1 / 24, quarter: 0.25, half: 0.5, day: 1, week: 7, month: 30 };
  return (
    COLUMN_LEVELS.slice(COLUMN_LEVELS.indexOf(wanted)).find(
      (level) => (widthPx * daysOf[level]) / days >= NARROWEST_PX,
    ) ?? 'month'
  );
}

/**
 * The columns of [fromMs, toMs) at a level, cut off at the range's ends, by the plant's own clock: a day of 23 hours is
 * a narrower column.
 */
export function timeColumns(fromMs: number, toMs: number, timeZone: string, level: ColumnLevel): TimeColumn[] {
  const marks = boundaries(fromMs, toMs, timeZone, level);
  return marks
    .map((mark, index) => ({
      ...mark,
      startMs: Math.max(mark.startMs, fromMs),
      endMs: Math.min(marks[index + 1]?.startMs ?? Number.POSITIVE_INFINITY, toMs),
    }))
    .filter((column) => column.endMs > column.startMs);
}

/** Vertical lines of the plot: the columns' own, and between those of weeks the days', in the fainter ink. */
export function gridLines(
  columns: readonly TimeColumn[],
  level: ColumnLevel,
  timeZone: string,
): { startMs: number; opensDay: boolean }[] {
  if (level !== 'week') return [...columns];
  const fromMs = columns[0]?.startMs ?? 0;
  const days = localDayStarts(fromMs, columns.at(-1)?.endMs ?? fromMs, timeZone);
  const strong = new Set(columns.map((column) => column.startMs));
  return days.filter((ms) => ms >= fromMs).map((startMs) => ({ startMs, opensDay: strong.has(startMs) }));
}

function boundaries(fromMs: number, toMs: number, timeZone: string, level: ColumnLevel): Omit<TimeColumn, 'endMs'>[] {
  const days = localDayStarts(fromMs, toMs, timeZone);
  if (level === 'hour' || level === 'quarter' || level === 'half') {
    return days.flatMap((dayMs, index) => {
      const endMs = days[index + 1] ?? dayMs + 25 * HOUR_MS;
      return hoursOfDay(dayMs, endMs, timeZone, HOURS[level], level);
    });
  }
  const label = (ms: number) => (level === 'day' ? formatDayShort(ms, timeZone) : formatDate(ms, timeZone));
  return days
    .filter((ms, index) => {
      if (index === 0 || level === 'day') return true;
      const { weekday, day } = localParts(ms, timeZone);
      return level === 'week' ? weekday === 'Mon' : day === 1;
    })
    .map((startMs) => ({
      startMs,
      label: level === 'month' ? localParts(startMs, timeZone).monthName : label(startMs),
      opensDay: true,
    }));
}

function hoursOfDay(
  dayMs: number,
  endMs: number,
  timeZone: string,
  every: number,
  level: ColumnLevel,
): Omit<TimeColumn, 'endMs'>[] {
  const found: Omit<TimeColumn, 'endMs'>[] = [];
  const day = localDay(dayMs, timeZone);
  for (let ms = dayMs; ms < endMs; ms += HOUR_MS) {
    const parts = localParts(ms, timeZone);
    if (localDay(ms, timeZone) !== day) break;
    if (ms !== dayMs && parts.hour % every !== 0) continue;
    // In the repeated hour the same clock comes twice; only an hour-wide column starts again.
    if (level !== 'hour' && found.some((one) => localParts(one.startMs, timeZone).hour === parts.hour)) continue;
    found.push({
      startMs: ms,
      label:
        level === 'hour'
          ? formatClock(ms, timeZone)
          : ms === dayMs
            ? formatDayShort(ms, timeZone)
            : formatClock(ms, timeZone),
      opensDay: ms === dayMs,
    });
  }
  return found;
}
