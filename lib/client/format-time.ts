import { addDays, formatISO, parseISO } from 'date-fns';
import { TZDate } from '@date-fns/tz';
import { EN_DASH, NO_BREAK_SPACE } from './format';

/**
 * Times as people at the plant read them. Instants come in as epoch ms (or ISO text), days and clocks go out in the
 * plant's IANA zone, 24 hours, day before month, month as a word: no reader can take one for the other.
 */

export interface LocalParts {
  year: number;
  /** 1 to 12. */
  month: number;
  day: number;
  hour: number;
  minute: number;
  /** `Mon` to `Sun`. */
  weekday: string;
  /** `Jan` to `Dec`. */
  monthName: string;
}

const HOUR_MS = 3_600_000;
// Making an Intl formatter costs far more than using one; a page has one or two zones.
const formatters = new Map<string, Intl.DateTimeFormat>();

function formatterFor(timeZone: string): Intl.DateTimeFormat {
  const known = formatters.get(timeZone);
  if (known) return known;
  const made = new Intl.DateTimeFormat('en-US', {
    timeZone,
    hourCycle: 'h23',
    weekday: 'short',
    year: 'numeric',
    month: 'numeric',
    day: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
  });
  formatters.set(timeZone, made);
  return made;
}

const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'] as const;

/** The clock and calendar of an instant in a zone. */
export function localParts(epochMs: number, timeZone: string): LocalParts {
  const found: Record<string, string> = {};
  for (const part of formatterFor(timeZone).formatToParts(epochMs)) found[part.type] = part.value;
  const month = Number(found.month);
  return {
    year: Number(found.year),
    month,
    day: Number(found.day),
    hour: Number(found.hour),
    minute: Number(found.minute),
    weekday: found.weekday ?? '',
    monthName: MONTHS[month - 1] ?? '',
  };
}

const two = (value: number): string => String(value).padStart(2, '0');

/** `2026-07-24`, the local day as the API writes it. */
export function localDay(epochMs: number, timeZone: string): string {
  const { year, month, day } = localParts(epochMs, timeZone);
  return `${year}-${two(month)}-${two(day)}`;
}

/** The instant at which a local day begins; where clocks skip midnight, the first instant of that day. */
export function startOfLocalDay(day: string, timeZone: string): number {
  const [year = 1970, month = 1, date = 1] = day.split('-').map(Number);
  const start = new TZDate(year, month - 1, date, timeZone).getTime();
  // A skipped midnight resolves to one side or the other of the gap: step to the side that is the day itself.
  return localDay(start, timeZone) < day ? start + HOUR_MS : start;
}

/** The local day so many days later, by the calendar. */
export function addLocalDays(day: string, days: number): string {
  return formatISO(addDays(parseISO(day), days), { representation: 'date' });
}

/** Epoch ms of a wall clock reading as a form gives it, `2026-07-24T15:10`, in a zone; NaN when it is none. */
export function wallClockMs(text: string, timeZone: string): number {
  const found = /^(\d{4})-(\d{2})-(\d{2})T(\d{2}):(\d{2})/.exec(text);
  if (!found) return Number.NaN;
  const [year = 1970, month = 1, day = 1, hour = 0, minute = 0] = found.slice(1).map(Number);
  return new TZDate(year, month - 1, day, hour, minute, timeZone).getTime();
}

/** The wall clock of an instant as a form takes it, `2026-07-24T15:10`. */
export function wallClock(epochMs: number, timeZone: string): string {
  return `${localDay(epochMs, timeZone)}T${formatClock(epochMs, timeZone)}`;
}

/** Epoch ms of `from` or `to`, which is an instant or a local day; NaN when it is neither. */
export function momentMs(moment: string, timeZone: string): number {
  return /^\d{4}-\d{2}-\d{2}$/.test(moment) ? startOfLocalDay(moment, timeZone) : Date.parse(moment);
}

/**
 * The starts of every local day that touches [fromMs, toMs), in order: 23 and 25 hours apart across a clock change.
 * The first may lie before `fromMs`.
 */
export function localDayStarts(fromMs: number, toMs: number, timeZone: string): number[] {
  const starts: number[] = [];
  let day = localDay(fromMs, timeZone);
  for (let start = startOfLocalDay(day, timeZone); start < toMs;) {
    starts.push(start);
    day = addLocalDays(day, 1);
    start = startOfLocalDay(day, timeZone);
  }
  return starts;
}

/** `15:00`. */
export function formatClock(epochMs: number, timeZone: string): string {
  const { hour, minute } = localParts(epochMs, timeZone);
  return `${two(hour)}:${two(minute)}`;
}

/** `Fri 24`. */
export function formatDayShort(epochMs: number, timeZone: string): string {
  const { weekday, day } = localParts(epochMs, timeZone);
  return `${weekday}${NO_BREAK_SPACE}${day}`;
}

/** `24 Jul`. */
export function formatDate(epochMs: number, timeZone: string): string {
  const { day, monthName } = localParts(epochMs, timeZone);
  return `${day}${NO_BREAK_SPACE}${monthName}`;
}

/** `Fri 24 Jul`. */
export function formatDay(epochMs: number, timeZone: string): string {
  return `${localParts(epochMs, timeZone).weekday}${NO_BREAK_SPACE}${formatDate(epochMs, timeZone)}`;
}

/** `Fri 24 Jul 2026`. */
export function formatDayYear(epochMs: number, timeZone: string): string {
  return `${formatDay(epochMs, timeZone)}${NO_BREAK_SPACE}${localParts(epochMs, timeZone).year}`;
}

/** `Fri 24 Jul 15:00`; the second run of an hour that clocks repeat says so. */
export function formatDayTime(epochMs: number, timeZone: string): string {
  const again = isRepeatedClock(epochMs, timeZone) ? ', second' : '';
  return `${formatDay(epochMs, timeZone)} ${formatClock(epochMs, timeZone)}${again}`;
}

/** True in the second of two runs of the same clock hour, at the end of summer time. */
export function isRepeatedClock(epochMs: number, timeZone: string): boolean {
  const before = localParts(epochMs - HOUR_MS, timeZone);
  const now = localParts(epochMs, timeZone);
  return before.hour === now.hour && before.minute === now.minute && before.day === now.day;
}

/** `Fri 24 Jul 2026, 15:00 – 16:00`, the title of an hour. */
export function formatHourTitle(hourStart: string, timeZone: string): string {
  const start = Date.parse(hourStart);
  const end = formatClock(start + HOUR_MS, timeZone);
  return `${formatDayYear(start, timeZone)}, ${formatClock(start, timeZone)} ${EN_DASH} ${end}`;
}

/** `13 – 26 Jul 2026`: a half-open period of whole days named by its first and last day; parts that repeat stand once. */
export function formatPeriod(fromMs: number, toMs: number, timeZone: string, withWeekday = false): string {
  const first = localParts(fromMs, timeZone);
  const last = localParts(Math.max(fromMs, toMs - 1), timeZone);
  const name = (parts: LocalParts, month: boolean, year: boolean): string =>
    [withWeekday ? parts.weekday : '', String(parts.day), month ? parts.monthName : '', year ? String(parts.year) : '']
      .filter((word) => word !== '')
      .join(NO_BREAK_SPACE);
  if (first.year === last.year && first.month === last.month && first.day === last.day) return name(last, true, true);
  const otherYear = first.year !== last.year;
  const otherMonth = otherYear || first.month !== last.month;
  return `${name(first, otherMonth, otherYear)} ${EN_DASH} ${name(last, true, true)}`;
}

/** `Fri 24 Jul 13:00 – 18:00`: a stretch of time; the second day only where it is another. */
export function formatStretch(fromMs: number, toMs: number, timeZone: string): string {
  const sameDay = localDay(fromMs, timeZone) === localDay(toMs - 1, timeZone);
  const end = sameDay ? formatClock(toMs, timeZone) : formatDayTime(toMs, timeZone);
  return `${formatDay(fromMs, timeZone)} ${formatClock(fromMs, timeZone)} ${EN_DASH} ${end}`;
}

/** The start of the local clock hour an instant lies in; correct in zones off the full hour. */
export function startOfLocalHour(epochMs: number, timeZone: string): number {
  const intoHourMs = localParts(epochMs, timeZone).minute * 60_000 + (((epochMs % 60_000) + 60_000) % 60_000);
  return epochMs - intoHourMs;
}

/** An instant as the API writes it: ISO 8601 in UTC, without fractions of a second. */
export const isoInstant = (epochMs: number): string => new Date(epochMs).toISOString().replace('.000Z', 'Z');
