import { localParts } from '@/lib/client/format-time';
import type { Preview } from '@/lib/schemas/upload';
import { StampParser } from '@/lib/trends/timestamps';
import { TIMESTAMP_FORMS, type TimestampForm, type TimestampPlan } from '@/lib/trends/types';

type Table = Preview['tables'][number];
type Problem = Preview['problems'][number];

/** How the times of one table are read. */
export interface TimeAnswer {
  form: TimestampForm;
  /** Of the first row; null where the form has one. */
  year: number | null;
  stamps: 'start' | 'end';
  shiftMinutes: number;
}

/** Tables whose times are read alike and are asked about once. */
export interface TimeGroup {
  tables: number[];
  answer: TimeAnswer;
}

const YEARLESS: readonly TimestampForm[] = ['month/day', 'day/month'];
/** Month and day may stand in either order. */
const OTHER_WAY: Partial<Record<TimestampForm, TimestampForm>> = {
  'month/day/year': 'day/month/year',
  'day/month/year': 'month/day/year',
  'month/day': 'day/month',
  'day/month': 'month/day',
};
const LEAP_YEAR = 2024;
/** Cells of a row that are looked at for its time. */
const MOST_CELLS = 40;
const DAY_MS = 86_400_000;

export const needsYear = (form: TimestampForm): boolean => YEARLESS.includes(form);

const answerOf = (plan: TimestampPlan): TimeAnswer => ({
  form: plan.form,
  year: needsYear(plan.form) ? (plan.year ?? null) : null,
  stamps: plan.stamps ?? 'start',
  shiftMinutes: plan.shiftMinutes ?? 0,
});

/** How each table's times are read: as confirmed for the upload, else as suggested. */
export function timesOf({ tables, confirmed }: Preview): TimeAnswer[] {
  return tables.map(({ timestamp }, index) => {
    const own = confirmed?.tables?.[index]?.timestamp ?? (index === 0 ? confirmed?.timestamp : undefined);
    return answerOf({ ...(own ?? timestamp) });
  });
}

/** A table's plan as the API takes it. All is said, so that no table follows another's change. */
export const timestampPlan = ({ timestamp }: Table, answer: TimeAnswer): TimestampPlan => ({
  columns: timestamp.columns,
  form: answer.form,
  ...(needsYear(answer.form) ? { year: answer.year } : {}),
  stamps: answer.stamps,
  shiftMinutes: answer.shiftMinutes,
});

/** Tables whose times were written alike and are read alike, as one; each by itself when `apart`. */
export function timeGroups(preview: Preview, times: readonly TimeAnswer[], apart: boolean): TimeGroup[] {
  const groups = new Map<string, TimeGroup>();
  preview.tables.forEach(({ timestamp }, index) => {
    const answer = times[index];
    if (answer === undefined) return;
    const key = apart ? String(index) : JSON.stringify([timestamp.form, timestamp.columns.length, answer]);
    const group = groups.get(key) ?? { tables: [], answer };
    group.tables.push(index);
    groups.set(key, group);
  });
  return [...groups.values()];
}

interface Stamp {
  /** The wall clock as if it were UTC, or the instant where the text carries its offset. */
  ms: number;
  hasOffset: boolean;
}

const parserOf = (form: TimestampForm, { dialect }: Table, year: number | null): StampParser =>
  new StampParser(form, dialect.decimal === ',' ? ',' : '.', needsYear(form) ? (year ?? LEAP_YEAR) : null);

function readStamp(text: string, form: TimestampForm, table: Table, year: number | null): Stamp | null {
  const parser = parserOf(form, table, year);
  return parser.parse(text) ? { ms: parser.ms, hasOffset: parser.hasOffset } : null;
}

/**
 * The text of the time in each of the first rows, the date and the time of day with a blank between them. A preview does not say
 * in which cell the time stands: it is the first that reads as one.
 */
export function timeTexts(table: Table): string[] {
  const { timestamp, rows } = table;
  const width = Math.min(MOST_CELLS, Math.max(0, ...rows.map((row) => row.length)));
  const places = Array.from({ length: width }, (_, index) => index);
  const reads = (cells: readonly number[]) => {
    const parser = parserOf(timestamp.form, table, timestamp.year ?? null);
    const [first] = rows;
    const joined = first === undefined ? '' : textAt(first, cells);
    return joined.trim() !== '' && parser.parse(joined) && (cells.length === 1 || parser.hasTime);
  };
  const candidates =
    timestamp.columns.length === 1
      ? places.map((place) => [place])
      : places.flatMap((date) => places.filter((clock) => clock !== date).map((clock) => [date, clock]));
  const found = candidates.find(reads);
  return found === undefined ? [] : rows.map((row) => textAt(row, found)).filter((text) => text !== '');
}

const textAt = (row: readonly string[], cells: readonly number[]): string =>
  cells
    .map((cell) => (row[cell] ?? '').trim())
    .join(' ')
    .trim();

/** The forms in which every one of the first rows can be read, and the present one. */
export function possibleForms(table: Table, answer: TimeAnswer): TimestampForm[] {
  const texts = timeTexts(table);
  return TIMESTAMP_FORMS.filter((form) => {
    if (form === answer.form || texts.length === 0) return true;
    const parser = parserOf(form, table, answer.year);
    return texts.every((text) => parser.parse(text));
  });
}

const MONTHS = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
] as const;
const two = (value: number): string => String(value).padStart(2, '0');

/** `8 July 2026, 00:05` of a wall clock as if it were UTC. */
function wallWords(wallMs: number): string {
  const at = new Date(wallMs);
  const seconds = at.getUTCSeconds() === 0 ? '' : `:${two(at.getUTCSeconds())}`;
  const clock = `${two(at.getUTCHours())}:${two(at.getUTCMinutes())}${seconds}`;
  return `${at.getUTCDate()} ${MONTHS[at.getUTCMonth()] ?? ''} ${at.getUTCFullYear()}, ${clock}`;
}

function wallOfInstant(ms: number, timeZone: string): number {
  const { year, month, day, hour, minute } = localParts(ms, timeZone);
  return Date.UTC(year, month - 1, day, hour, minute, Math.floor((((ms % DAY_MS) + DAY_MS) % 60_000) / 1000));
}

export interface TimeExample {
  /** As the file has it. */
  text: string;
  /** `8 July 2026, 00:05`; null when the form does not read it. */
  read: string | null;
  /** Where the reading counts, when that is another time: the start of its interval. */
  counted: string | null;
  /** The text says its own offset from UTC: the zone does not matter to it. */
  hasOffset: boolean;
  /** Days from now: no reading can be. */
  ahead: boolean;
}

/** What the first row's time means as answered; null when there is no row to show it on. */
export function timeExample(table: Table, answer: TimeAnswer, timeZone: string, row = 0): TimeExample | null {
  const text = timeTexts(table).at(row);
  if (text === undefined) return null;
  const stamp = readStamp(text, answer.form, table, answer.year);
  if (stamp === null || (needsYear(answer.form) && answer.year === null))
    return { text, read: null, counted: null, hasOffset: false, ahead: false };
  const wallMs = (stamp.hasOffset ? wallOfInstant(stamp.ms, timeZone) : stamp.ms) + answer.shiftMinutes * 60_000;
  const backMinutes = answer.stamps === 'end' ? (table.stepMinutes ?? 0) : 0;
  return {
    text,
    read: wallWords(wallMs),
    counted: backMinutes > 0 ? wallWords(wallMs - backMinutes * 60_000) : null,
    hasOffset: stamp.hasOffset,
    ahead: wallMs > Date.now() + 2 * DAY_MS,
  };
}

/** The two orders of day and month a table's times can have, its present one first; null when the file settles it. */
export function dayOrMonth(preview: Preview, index: number, answer: TimeAnswer): TimestampForm[] | null {
  const table = preview.tables[index];
  const other = OTHER_WAY[answer.form];
  if (table === undefined || other === undefined || !doubtsOf(preview, index).some(isDayOrMonth)) return null;
  return ([answer.form, other] satisfies TimestampForm[]).sort();
}

const isDayOrMonth = ({ code }: Problem): boolean => code === 'day-or-month';
const TIME_DOUBTS: ReadonlySet<string> = new Set(['day-or-month', 'no-year', 'end-stamps', 'clock-offset']);

/** Problems that are questions about the times: asked beside them, and nowhere else. */
export const isTimeDoubt = ({ code }: Problem): boolean => TIME_DOUBTS.has(code);

/** The doubts about one table's times. */
export function doubtsOf(preview: Preview, index: number): Problem[] {
  const table = preview.tables[index];
  if (table === undefined) return [];
  const { timestamp } = table;
  return preview.problems.filter(({ code, column, message }) => {
    if (code === 'clock-offset') return tableOfClock(preview, { column, message }) === index;
    if (column !== undefined && !timestamp.columns.includes(column)) return false;
    if (code === 'day-or-month') return OTHER_WAY[timestamp.form] !== undefined && readsBothWays(table);
    if (code === 'no-year') return needsYear(timestamp.form);
    return code === 'end-stamps' && timestamp.stamps === 'end';
  });
}

function readsBothWays(table: Table): boolean {
  const { form, year } = table.timestamp;
  const other = OTHER_WAY[form];
  const [text] = timeTexts(table);
  return other !== undefined && text !== undefined && readStamp(text, other, table, year ?? null) !== null;
}

/** The table whose clock a doubt is about: its sentence begins with one of the table's columns. */
function tableOfClock({ columns }: Preview, { column, message }: Pick<Problem, 'column' | 'message'>): number {
  const about = columns.find((each) => each.column === column || message.startsWith(`"${each.column}" `));
  return about?.table ?? 0;
}

/** The shift that a doubt about two clocks proposes, in minutes; null when its sentence names none. */
export function proposedShift({ code, message }: Problem): number | null {
  const found = code === 'clock-offset' ? /by ([+\u2212-])(\d+(?:\.\d+)?) (h|min)\b/.exec(message) : null;
  if (!found) return null;
  const minutes = Number(found[2]) * (found[3] === 'h' ? 60 : 1);
  return found[1] === '+' ? minutes : -minutes;
}
