import { quoted } from './problems';
import { weekdayOf } from './stamp-date';
import { monthOfWord } from './stamp-words';
import { StepCounter } from './step';
import { proposeYear } from './time-year';
import { DAY_MS, StampParser } from './timestamps';
import type { TimestampForm } from './types';

/** A column holds times when at least this share of its filled cells can be read as such. */
export const TIME_SHARE = 0.9;
/** Rows of a quick look. */
const QUICK_ROWS = 40;
/** Numbers under a heading that says time are times when nearly all of them go the same way. */
const ORDERED_SHARE = 0.9;
/** A leap year, to see whether dates without a year can be read at all. */
const LEAP_YEAR = 2024;
/** Headings over times. */
export const TIME_WORDS =
  /time|date|stamp|^ts$|datum|zeit|uhr|fecha|hora|heure|datetime|^when$|interval|period|hour ending|\bHE\b/i;

const CALENDAR_FORMS: readonly TimestampForm[] = ['iso', 'month/day/year', 'day/month/year'];
const YEARLESS_FORMS: readonly TimestampForm[] = ['month/day', 'day/month'];
/** Numbers are taken for times when they come at an even distance, row by row. */
export const NUMBER_FORMS: readonly TimestampForm[] = ['epoch-s', 'epoch-ms', 'spreadsheet-serial'];

/** What a person should check: how the times were read, and why. */
export interface TimeDoubt {
  code: 'day-or-month' | 'no-year' | 'end-stamps';
  message: string;
}

export interface TimeContext {
  timeZone: string;
  decimal: '.' | ',';
  /** null when it is not known: then dates without a year are not read. */
  nowMs: number | null;
}

export interface Reading {
  form: TimestampForm;
  /** Of the first row, where the form has none. */
  year: number | null;
  share: number;
  hasTime: boolean;
  /** Share of rows that follow their predecessor at the usual distance. */
  regular: number;
  /** Share of moves that go the way most do. */
  ordered: number;
  stepMs: number;
  /** Rows that name a weekday on which their date falls, less those that name another. */
  weekdays: number;
  hour24: boolean;
  hour0: boolean;
  doubts: TimeDoubt[];
}

export function shareOf(texts: readonly string[], matches: (text: string) => boolean): number {
  const filled = texts.filter((text) => text.trim() !== '');
  return filled.length === 0 ? 0 : filled.filter(matches).length / filled.length;
}

/** The form in which nearly all of a column's filled cells can be read, or null when it holds no times. */
export function bestReading(texts: readonly string[], name: string, context: TimeContext): Reading | null {
  const inForms = (forms: readonly TimestampForm[]) =>
    forms
      .filter((form) => mayHold(texts, form, context.decimal))
      .map((form) => read(texts, form, context.decimal))
      .filter(({ share }) => share >= TIME_SHARE);
  const calendar = inForms(CALENDAR_FORMS);
  const iso = calendar.find(({ form }) => form === 'iso');
  if (iso) return { ...iso, form: isoOrSlashes(texts) };
  const dated = oneOf(calendar, texts, context.timeZone);
  if (dated) return dated;
  const fit = inForms(NUMBER_FORMS).find((reading) => isTimeLike(reading, texts, name));
  if (fit) return fit;
  const { nowMs } = context;
  if (nowMs === null) return null;
  const yearless = inForms(YEARLESS_FORMS).map((reading) => withYear(reading, texts, context, nowMs));
  return oneOf(yearless, texts, context.timeZone);
}

/** Month or day first, where one or both readings work. */
function oneOf(readings: readonly Reading[], texts: readonly string[], timeZone: string): Reading | null {
  const monthFirst = readings.find(({ form }) => form.startsWith('month'));
  const dayFirst = readings.find(({ form }) => form.startsWith('day'));
  if (monthFirst && dayFirst) return monthOrDayFirst(texts, monthFirst, dayFirst, timeZone);
  return monthFirst ?? dayFirst ?? null;
}

/** Readings can lie in the range of times: a counter of 46223 kWh must not become a day. */
function isTimeLike({ form, regular, ordered, stepMs }: Reading, texts: readonly string[], name: string): boolean {
  const named = TIME_WORDS.test(name);
  if (named) return texts.length < 3 || regular > 0.5 || ordered >= ORDERED_SHARE;
  return regular > 0.5 && stepMs > 0 && (form === 'spreadsheet-serial' ? stepMs < DAY_MS : stepMs <= DAY_MS);
}

function withYear(reading: Reading, texts: readonly string[], context: TimeContext, nowMs: number): Reading {
  const { year, weekdays, fitting } = proposeYear(texts, reading.form, context.decimal, context.timeZone, nowMs);
  const proposed = { ...reading, year, weekdays: 2 * fitting - weekdays };
  if (weekdays > 0 && fitting === weekdays) return proposed;
  const first = texts.find((text) => text.trim() !== '') ?? '';
  const message = `The times have no year (${quoted(first)}). The first row was taken to be of ${year}, the latest year that puts no row in the future; choose another if the file is older.`;
  return { ...proposed, doubts: [{ code: 'no-year', message }] };
}

const isoOrSlashes = (texts: readonly string[]): TimestampForm =>
  shareOf(texts, (text) => /^\s*(\d{4}-\d{1,2}-\d{1,2}|\d{8}|\d{1,2}:)/.test(text)) > 0.5 ? 'iso' : 'year/month/day';

/** A quick look at some rows, so that columns of readings are not read through in every form. */
function mayHold(texts: readonly string[], form: TimestampForm, decimal: '.' | ','): boolean {
  const parser = new StampParser(form, decimal, LEAP_YEAR);
  const every = Math.max(1, Math.floor(texts.length / QUICK_ROWS));
  const filled = texts.filter((text) => text.trim() !== '');
  const some = filled.filter((_, i) => i % Math.min(every, Math.max(1, Math.floor(filled.length / 2))) === 0);
  return shareOf(some, (text) => parser.parse(text)) >= 0.5;
}

function read(texts: readonly string[], form: TimestampForm, decimal: '.' | ','): Reading {
  const parser = new StampParser(form, decimal, LEAP_YEAR);
  const step = new StepCounter();
  const distances: number[] = [];
  const shown = { hour24: false, hour0: false, weekdays: 0 };
  let filled = 0;
  let good = 0;
  let timed = 0;
  let onward = 0;
  let previousMs = Number.NaN;
  for (const text of texts) {
    if (text.trim() === '') continue;
    filled++;
    if (!parser.parse(text)) continue;
    good++;
    if (parser.hasTime) {
      timed++;
      if (parser.isHour24) shown.hour24 = true;
      else if (parser.ms % DAY_MS === 0) shown.hour0 = true;
    }
    if (parser.weekday !== -1) shown.weekdays += parser.weekday === weekdayOf(parser.dayMs) ? 1 : -1;
    const deltaMs = parser.ms - previousMs;
    previousMs = parser.ms;
    if (!(deltaMs > 0 || deltaMs < 0)) continue;
    if (deltaMs > 0) onward++;
    step.add(deltaMs);
    distances.push(Math.abs(deltaMs));
  }
  const moves = distances.length;
  const usual = distances.filter((distance) => Math.abs(distance - step.usualMs) <= step.usualMs * 0.1).length;
  return {
    form,
    year: null,
    share: filled === 0 ? 0 : good / filled,
    hasTime: timed > 0,
    regular: moves === 0 ? 0 : usual / moves,
    ordered: moves === 0 ? 0 : Math.max(onward, moves - onward) / moves,
    stepMs: step.usualMs,
    ...shown,
    doubts: [],
  };
}

/** Both readings work on nearly every row. A row that only one can read, weekdays or uneven distances settle it. */
function monthOrDayFirst(texts: readonly string[], monthFirst: Reading, dayFirst: Reading, timeZone: string): Reading {
  const first = texts.find((text) => text.trim() !== '') ?? '';
  const words = first.match(/[^\W\d_]{3,}/gu) ?? [];
  // A month in letters reads the same both ways.
  if (words.some((word) => monthOfWord(word) !== 0)) return /^\s*\p{L}/u.test(first) ? monthFirst : dayFirst;
  for (const key of ['share', 'weekdays', 'regular'] as const)
    if (monthFirst[key] !== dayFirst[key]) return monthFirst[key] > dayFirst[key] ? monthFirst : dayFirst;
  // Points part days from months only where the day comes first.
  if (/^\s*\d{1,2}\./.test(first)) return dayFirst;
  const american = timeZone.startsWith('America/') || timeZone.startsWith('US/') || timeZone === 'Pacific/Honolulu';
  const reading = american ? monthFirst : dayFirst;
  const message = `${quoted(first)} can be read with the month or the day first. Read as ${reading.form} because the plant's zone is ${timeZone}; check it.`;
  return { ...reading, doubts: [...reading.doubts, { code: 'day-or-month', message }] };
}
