import type { NumberedRow } from './dialect';
import { quoted } from './problems';
import {
  bestReading,
  NUMBER_FORMS,
  shareOf,
  TIME_SHARE,
  TIME_WORDS,
  type Reading,
  type TimeContext,
  type TimeDoubt,
} from './time-form';
import { whyEndStamps } from './time-stamps';
import { TrendError, type TimestampPlan } from './types';

export type { TimeDoubt } from './time-form';

/** Seldom the time of the reading. */
const OTHER_TIME_WORDS = /\b(end|created|modified|updated|export)/i;

export interface FoundTime {
  plan: TimestampPlan;
  /** What a person should check: how the times were read, and why. */
  doubts: TimeDoubt[];
  /** Indexes of the time's cells. */
  cells: number[];
  /** Further columns of times, which no role reads. */
  others: number[];
}

interface Column {
  name: string;
  index: number;
  texts: string[];
}
interface Candidate extends Column {
  reading: Reading;
}

/**
 * Which column (or which two) holds the time and in which form, judged from all rows of the head.
 *
 * Day and month are told apart by a value over 12 or a weekday; where there is none, by which reading gives rows at an even
 * distance; where both do, the zone decides and the doubt is reported. Dates may stand only in the first row of a day.
 * Dates without a year get the latest one that puts no row in the future, so `nowMs` must be given to read them. Times are
 * taken for the ends of their intervals where the heading or hour 24 says so.
 * Throws  TrendError `no-time-column`, or `unsupported` for dates without a year when `nowMs` is not given.
 */
export function findTime(
  names: readonly string[],
  data: readonly NumberedRow[],
  timeZone: string,
  decimal: '.' | ',',
  options: { nowMs?: number | null } = {},
): FoundTime {
  const context = { timeZone, decimal, nowMs: options.nowMs ?? null };
  const columns = names.map((name, index) => ({ name, index, texts: data.map(({ cells }) => cells[index] ?? '') }));
  const clocks = columns.filter(({ texts }) => shareOf(texts, (text) => CLOCK_ALONE.test(text.trim())) >= TIME_SHARE);
  const candidates = candidatesOf(columns, clocks.length > 0, context);
  const best = candidates[0] ?? dayNumbers(columns, clocks, context);
  if (!best) {
    const clockNames = clocks.map(({ name }) => name);
    throw noTime(columns, clockNames);
  }
  const clock = best.reading.hasTime ? undefined : nearest(clocks, best.index);
  const cells = clock ? [best.index, clock.index] : [best.index];
  const joined = clock ? joinedTexts(best, clock) : null;
  const reading = (joined && bestReading(joined, best.name, context)) ?? best.reading;
  const plan: TimestampPlan = { columns: cells.map((cell) => names[cell]!), form: reading.form };
  if (reading.year !== null) plan.year = reading.year;
  const doubts = [...reading.doubts];
  const why = whyEndStamps(plan.columns, reading);
  if (why !== null) {
    plan.stamps = 'end';
    const message = `${why}, so each time was taken for the end of its interval and moved one usual step back. Choose the start if it is the moment of the reading.`;
    doubts.push({ code: 'end-stamps', message });
  }
  const others = candidates.map(({ index }) => index).filter((index) => !cells.includes(index));
  return { plan, doubts, cells, others };
}

/** A column with a spreadsheet's number of one day all along, which is a time only together with the clock beside it. */
function dayNumbers(columns: readonly Column[], clocks: readonly Column[], context: TimeContext): Candidate | null {
  for (const column of columns) {
    const clock = nearest(clocks, column.index);
    if (!clock || clocks.includes(column) || !TIME_WORDS.test(column.name)) continue;
    const reading = bestReading(joinedTexts(column, clock), column.name, context);
    if (reading?.form === 'spreadsheet-serial') return { ...column, reading: { ...reading, hasTime: false } };
  }
  return null;
}

const joinedTexts = (date: Column, clock: Column): string[] =>
  date.texts.map((text, i) => `${text} ${clock.texts[i] ?? ''}`);

/** Columns that hold times, the likeliest first. */
function candidatesOf(columns: readonly Column[], hasClock: boolean, context: TimeContext): Candidate[] {
  const all = columns.flatMap((column): Candidate[] => {
    const reading = bestReading(column.texts, column.name, context);
    return reading ? [{ ...column, reading }] : [];
  });
  const isWeak = ({ name, reading }: Candidate) =>
    (reading.year !== null && !reading.hasTime) || (NUMBER_FORMS.includes(reading.form) && !TIME_WORDS.test(name));
  const sure = all.filter((each) => !isWeak(each));
  // "Dec 1" is a day without a year only where nothing else can be the time and something says so.
  const weak = all.filter(
    (each) => isWeak(each) && (NUMBER_FORMS.includes(each.reading.form) || hasClock || TIME_WORDS.test(each.name)),
  );
  return (sure.length > 0 ? sure : weak).sort((a, b) => preference(b) - preference(a));
}

/** A time of day and nothing else. */
const CLOCK_ALONE = /^\d{1,2}:\d{2}(:\d{2}([.,]\d+)?)?(\s?[ap]\.?m\.?)?$/i;
/** Month and day or day and month, then a time of day, and no year. */
const NO_YEAR = /^\d{1,2}[/.-]\d{1,2}\.?[\sT]+\d{1,2}:\d{2}/;

const nearest = (columns: readonly Column[], index: number): Column | undefined =>
  [...columns].sort((a, b) => Math.abs(a.index - index) - Math.abs(b.index - index))[0];

/** Named columns first, then those with a time of day, then calendar times before numbers, then the leftmost. */
function preference({ name, index, reading }: { name: string; index: number; reading: Reading }): number {
  const named = TIME_WORDS.test(name) ? 4 : 0;
  const other = OTHER_TIME_WORDS.test(name) ? -3 : 0;
  const number = NUMBER_FORMS.includes(reading.form) ? -2 : 0;
  return named + other + number + (reading.hasTime ? 3 : 0) + reading.regular - index / 1000;
}

function noTime(columns: readonly { name: string; texts: readonly string[] }[], clocks: readonly string[]): TrendError {
  const yearless = columns.find(({ texts }) => shareOf(texts, (text) => NO_YEAR.test(text.trim())) >= TIME_SHARE);
  if (yearless) {
    const first = yearless.texts.find((text) => text.trim() !== '') ?? '';
    const what = `The times in column "${yearless.name}" have no year (${quoted(first)}).`;
    return new TrendError(
      'unsupported',
      `${what} Export them with the year, for example 2026-08-28 00:05, and drop the file again.`,
    );
  }
  if (clocks.length > 0)
    return new TrendError(
      'no-time-column',
      `Column "${clocks[0]}" holds times of day but no column holds dates. Export the trend with its dates.`,
    );
  const shown = columns
    .slice(0, 6)
    .map(({ name }) => `"${name}"`)
    .join(', ');
  const more = columns.length > 6 ? ` and ${columns.length - 6} more` : '';
  return new TrendError(
    'no-time-column',
    `No time column was found: none of ${shown}${more} holds dates and times. Export the trend with a time in every row.`,
  );
}
