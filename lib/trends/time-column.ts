import type { NumberedRow } from './dialect';
import { quoted } from './problems';
import { monthOfWord } from './stamp-words';
import { StepCounter } from './step';
import { StampParser } from './timestamps';
import { TrendError, type TimestampForm, type TimestampPlan } from './types';

/** A column holds times when at least this share of its filled cells can be read as such. */
const TIME_SHARE = 0.9;
/** Rows of a quick look. */
const QUICK_ROWS = 40;
/** Headings over times. */
const TIME_WORDS = /time|date|stamp|^ts$|datum|zeit|uhr|fecha|hora|heure|datetime|^when$/i;
/** Seldom the time of the reading. */
const OTHER_TIME_WORDS = /\b(end|created|modified|updated|export)/i;

const CALENDAR_FORMS: readonly TimestampForm[] = ['iso', 'month/day/year', 'day/month/year'];
/** Numbers are taken for times when they come at an even distance, row by row. */
const NUMBER_FORMS: readonly TimestampForm[] = ['epoch-s', 'epoch-ms', 'spreadsheet-serial'];

export interface TimeDoubt {
  code: 'day-or-month' | 'no-year' | 'end-stamps';
  message: string;
}

export interface FoundTime {
  plan: TimestampPlan;
  /** What a person should check: how the times were read, and why. */
  doubts: TimeDoubt[];
  /** Indexes of the time's cells. */
  cells: number[];
  /** Further columns of times, which no role reads. */
  others: number[];
}

interface Reading {
  form: TimestampForm;
  share: number;
  hasTime: boolean;
  /** Share of rows that follow their predecessor at the usual distance. */
  regular: number;
}

/**
 * Which column (or which two) holds the time and in which form, judged from all rows of the head.
 *
 * Day and month are told apart by a value over 12; where there is none, by which reading gives rows at an even distance;
 * where both do, the zone decides and the doubt is reported.
 * Throws  TrendError `no-time-column`, or `unsupported` for dates without a year.
 */
export function findTime(
  names: readonly string[],
  data: readonly NumberedRow[],
  timeZone: string,
  decimal: '.' | ',',
): FoundTime {
  const columns = names.map((name, index) => ({ name, index, texts: data.map(({ cells }) => cells[index] ?? '') }));
  const candidates = columns.flatMap((column) => {
    const reading = bestReading(column.texts, column.name, timeZone, decimal);
    return reading ? [{ ...column, ...reading }] : [];
  });
  const clocks = columns.filter(({ texts }) => shareOf(texts, (text) => CLOCK_ALONE.test(text.trim())) >= TIME_SHARE);
  const best = candidates.sort((a, b) => preference(b) - preference(a))[0];
  if (!best)
    throw noTime(
      columns,
      clocks.map(({ name }) => name),
    );
  const clock = best.reading.hasTime ? undefined : nearest(clocks, best.index);
  const cells = clock ? [best.index, clock.index] : [best.index];
  const plan = { columns: cells.map((cell) => names[cell]!), form: best.reading.form };
  if (clock) {
    const joined = best.texts.map((text, i) => `${text} ${clock.texts[i] ?? ''}`);
    const together = bestReading(joined, best.name, timeZone, decimal);
    if (together) plan.form = together.reading.form;
    return { plan, doubts: together?.doubts ?? best.doubts, cells, others: othersThan(cells, candidates) };
  }
  return { plan, doubts: best.doubts, cells, others: othersThan(cells, candidates) };
}

/** A time of day and nothing else. */
const CLOCK_ALONE = /^\d{1,2}:\d{2}(:\d{2}([.,]\d+)?)?(\s?[ap]\.?m\.?)?$/i;
/** Month and day or day and month, then a time of day, and no year. */
const NO_YEAR = /^\d{1,2}[/.-]\d{1,2}\.?[\sT]+\d{1,2}:\d{2}/;

const nearest = <Column extends { index: number }>(columns: readonly Column[], index: number): Column | undefined =>
  [...columns].sort((a, b) => Math.abs(a.index - index) - Math.abs(b.index - index))[0];

const othersThan = (cells: readonly number[], candidates: readonly { index: number }[]): number[] =>
  candidates.map(({ index }) => index).filter((index) => !cells.includes(index));

/** Named columns first, then those with a time of day, then calendar times before numbers, then the leftmost. */
function preference({ name, index, reading }: { name: string; index: number; reading: Reading }): number {
  const named = TIME_WORDS.test(name) ? 4 : 0;
  const other = OTHER_TIME_WORDS.test(name) ? -3 : 0;
  const number = NUMBER_FORMS.includes(reading.form) ? -2 : 0;
  return named + other + number + (reading.hasTime ? 3 : 0) + reading.regular - index / 1000;
}

function shareOf(texts: readonly string[], matches: (text: string) => boolean): number {
  const filled = texts.filter((text) => text.trim() !== '');
  return filled.length === 0 ? 0 : filled.filter(matches).length / filled.length;
}

function bestReading(
  texts: readonly string[],
  name: string,
  timeZone: string,
  decimal: '.' | ',',
): { reading: Reading; doubts: TimeDoubt[] } | null {
  const inForms = (forms: readonly TimestampForm[]) =>
    forms
      .filter((form) => mayHold(texts, form, decimal))
      .map((form) => read(texts, form, decimal))
      .filter(({ share }) => share >= TIME_SHARE);
  const calendar = inForms(CALENDAR_FORMS);
  const iso = calendar.find(({ form }) => form === 'iso');
  if (iso) return { reading: { ...iso, form: isoOrSlashes(texts) }, doubts: [] };
  const [monthFirst, dayFirst] = (['month/day/year', 'day/month/year'] as const).map((form) =>
    calendar.find((each) => each.form === form),
  );
  if (monthFirst && dayFirst) return monthOrDayFirst(texts, monthFirst, dayFirst, timeZone);
  const one = monthFirst ?? dayFirst;
  if (one) return { reading: one, doubts: [] };
  const numbers = inForms(NUMBER_FORMS);
  const fit = numbers.find(({ regular }) => regular > 0.5 || (texts.length < 3 && TIME_WORDS.test(name)));
  return fit ? { reading: fit, doubts: [] } : null;
}

const isoOrSlashes = (texts: readonly string[]): TimestampForm =>
  shareOf(texts, (text) => /^\s*(\d{4}-\d{1,2}-\d{1,2}|\d{8})/.test(text)) > 0.5 ? 'iso' : 'year/month/day';

/** A quick look at some rows, so that columns of readings are not read through in every form. */
function mayHold(texts: readonly string[], form: TimestampForm, decimal: '.' | ','): boolean {
  const parser = new StampParser(form, decimal);
  const every = Math.max(1, Math.floor(texts.length / QUICK_ROWS));
  const some = texts.filter((text, i) => i % every === 0 && text.trim() !== '');
  return shareOf(some, (text) => parser.parse(text)) >= 0.5;
}

function read(texts: readonly string[], form: TimestampForm, decimal: '.' | ','): Reading {
  const parser = new StampParser(form, decimal);
  const step = new StepCounter();
  let filled = 0;
  let good = 0;
  let timed = 0;
  let usual = 0;
  let previousMs = Number.NaN;
  const distances: number[] = [];
  for (const text of texts) {
    if (text.trim() === '') continue;
    filled++;
    if (!parser.parse(text)) continue;
    good++;
    if (parser.hasTime) timed++;
    const deltaMs = parser.ms - previousMs;
    previousMs = parser.ms;
    if (Number.isNaN(deltaMs)) continue;
    step.add(deltaMs);
    distances.push(Math.abs(deltaMs));
  }
  for (const distance of distances) if (Math.abs(distance - step.usualMs) <= step.usualMs * 0.1) usual++;
  return {
    form,
    share: filled === 0 ? 0 : good / filled,
    hasTime: timed > 0,
    regular: distances.length === 0 ? 0 : usual / distances.length,
  };
}

/** Both readings work on nearly every row. A row that only one can read, or uneven distances, settle it. */
function monthOrDayFirst(
  texts: readonly string[],
  monthFirst: Reading,
  dayFirst: Reading,
  timeZone: string,
): { reading: Reading; doubts: TimeDoubt[] } {
  const first = texts.find((text) => text.trim() !== '') ?? '';
  const words = first.match(/[^\W\d_]{3,}/gu) ?? [];
  // A month in letters reads the same both ways.
  if (words.some((word) => monthOfWord(word) !== 0))
    return { reading: /^[^\W\d_]/u.test(first.trim()) ? monthFirst : dayFirst, doubts: [] };
  if (monthFirst.share !== dayFirst.share)
    return { reading: monthFirst.share > dayFirst.share ? monthFirst : dayFirst, doubts: [] };
  if (monthFirst.regular !== dayFirst.regular)
    return { reading: monthFirst.regular > dayFirst.regular ? monthFirst : dayFirst, doubts: [] };
  // Points part days from months only where the day comes first.
  if (/^\s*\d{1,2}\./.test(first)) return { reading: dayFirst, doubts: [] };
  const american = timeZone.startsWith('America/') || timeZone.startsWith('US/') || timeZone === 'Pacific/Honolulu';
  const reading = american ? monthFirst : dayFirst;
  const message = `${quoted(first)} can be read with the month or the day first. Read as ${reading.form} because the plant's zone is ${timeZone}; check it.`;
  return { reading, doubts: [{ code: 'day-or-month', message }] };
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
