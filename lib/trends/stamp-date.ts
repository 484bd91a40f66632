import { ClockScanner } from './stamp-clock';
import { COLON, COMMA, DAY_MS, DOT, isDigit, isLetter, isSpace, MINUS, SPACE } from './stamp-scan';
import { monthOfWord, weekdayOfWord } from './stamp-words';
import type { TimestampForm } from './types';

const DAYS_IN_MONTH = [31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31] as const;

/** The nearest of the years is never farther than half of one. */
const FARTHEST_MS = 184 * DAY_MS;

const isLeapYear = (year: number): boolean => year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0);

/** Day of the week of a day counted from 1970-01-01, a Thursday: 0 = Sunday. */
export const weekdayOf = (dayMs: number): number => (((Math.floor(dayMs / DAY_MS) + 4) % 7) + 7) % 7;

/**
 * The date in a stamp of one form. Parts are parted by `/ - . ,` or blanks; months may be names; years of two digits are
 * 1970 to 2069; a weekday may stand in front or behind.
 *
 * Where the form has no year, the first date is of the given year and each later one of that year which brings it nearest
 * to the date before: December to January goes on to the next year, January to December back to the last, and a few rows
 * out of order across New Year change nothing.
 */
export class DateScanner extends ClockScanner {
  /** Month (1 to 12) and day of the last date read; `isNamed` when the month was a word. */
  month = 0;
  day = 0;
  isNamed = false;
  /** Weekday in the last text: 0 = Sunday, -1 = none. */
  weekday = -1;
  /** Changes with every new date: year, month and day in one number, or month and day for the forms without a year. */
  dateKey = -1;

  /** The last date's midnight. */
  protected dateMs = 0;
  /** Date of the row before, to which a date without a year is held; NaN at the first row. */
  protected heldMs = Number.NaN;
  /** Two numbers with a point between them are a date without a year only when a time of day follows. */
  protected needsTime = false;
  /** Where a clock begins that stands between the day and the year: `Aug 28 00:05:00 2026`; 0 = as usual. */
  protected clockAt = 0;

  protected readonly yearFirst: boolean;
  protected readonly yearless: boolean;

  constructor(
    readonly form: TimestampForm,
    private readonly year: number | null,
  ) {
    super();
    this.yearFirst = form === 'iso' || form === 'year/month/day';
    this.yearless = form === 'month/day' || form === 'day/month';
  }

  /** Midnight of the last date read, as the stamp writes it: hour 24 belongs to it. */
  get dayMs(): number {
    return this.dateMs;
  }

  protected readDate(): boolean {
    this.needsTime = false;
    this.clockAt = 0;
    this.weekday = -1;
    if (isLetter(this.code())) this.skipWeekday();
    let named = 0;
    let first = 0;
    let firstDigits = 0;
    if (isLetter(this.code())) named = monthOfWord(this.readWord());
    else {
      first = this.readNumber();
      firstDigits = this.digits;
    }
    if (this.yearFirst && firstDigits >= 8) return this.readCompact(first, firstDigits);
    if (named === 0 && (firstDigits === 0 || firstDigits > 4)) return false;
    const sign = this.skipSeparator();
    if (sign === 0) return false;
    let second = 0;
    let secondDigits = 0;
    if (named === 0 && isLetter(this.code())) {
      named = monthOfWord(this.readWord());
      if (named === 0) return false;
    } else {
      second = this.readNumber();
      secondDigits = this.digits;
      if (secondDigits === 0) return false;
    }
    if (this.yearless) return this.endYearless(named, first, firstDigits, second, secondDigits, sign);
    // 08/28 00:05 has no year: numbers are parted by the same sign twice.
    const again = this.skipSeparator();
    if (again === 0 || (named === 0 && again !== sign)) return false;
    const start = this.at;
    const third = this.readNumber();
    const thirdDigits = this.digits;
    if (thirdDigits === 0) return false;
    if (named !== 0 && thirdDigits <= 2 && again === SPACE && this.code() === COLON)
      return this.readYearBehind(named, firstDigits === 0 ? second : first, start);
    return this.orderDate(named, first, firstDigits, second, secondDigits, third, thirdDigits);
  }

  /** A weekday between date and time, or before the date. */
  protected skipWeekday(): void {
    const start = this.at;
    const word = this.readWord();
    const weekday = monthOfWord(word) === 0 ? weekdayOfWord(word) : -1;
    if (weekday === -1) {
      this.at = start;
      return;
    }
    this.weekday = weekday;
    this.skipSeparator();
  }

  /** `20260828`, and with a time glued on `202608280005` or `20260828000500`. */
  private readCompact(number: number, digits: number): boolean {
    if (digits !== 8 && digits !== 12 && digits !== 14) return false;
    const clockDigits = digits - 8;
    const date = Math.floor(number / 10 ** clockDigits);
    this.at -= clockDigits;
    return this.setDate(Math.floor(date / 10_000), Math.floor(date / 100) % 100, date % 100, 4, false);
  }

  /** `Aug 28 00:05:00 2026` or with a zone before the year: the clock is read later, the year ends the text. */
  private readYearBehind(month: number, day: number, clockAt: number): boolean {
    let end = this.text.length;
    while (isSpace(this.codeAt(end - 1))) end--;
    this.at = end;
    while (isDigit(this.codeAt(this.at - 1))) this.at--;
    if (end - this.at !== 4 || !isSpace(this.codeAt(this.at - 1))) return false;
    this.clockAt = clockAt;
    return this.setDate(this.readNumber(), month, day, 4, true);
  }

  private orderDate(
    named: number,
    first: number,
    firstDigits: number,
    second: number,
    secondDigits: number,
    third: number,
    thirdDigits: number,
  ): boolean {
    if (this.yearFirst) {
      return named === 0
        ? secondDigits <= 2 && thirdDigits <= 2 && this.setDate(first, second, third, firstDigits, false)
        : this.setDate(first, named, third, firstDigits, true);
    }
    if (named !== 0) return this.setDate(third, named, firstDigits === 0 ? second : first, thirdDigits, true);
    if (firstDigits > 2 || secondDigits > 2) return false;
    return this.form === 'month/day/year'
      ? this.setDate(third, first, second, thirdDigits, false)
      : this.setDate(third, second, first, thirdDigits, false);
  }

  private setDate(shortYear: number, month: number, day: number, yearDigits: number, isNamed: boolean): boolean {
    if (yearDigits !== 4 && (yearDigits !== 2 || this.form === 'iso')) return false;
    const year = yearDigits === 4 ? shortYear : shortYear + (shortYear < 70 ? 2000 : 1900);
    if (month < 1 || month > 12 || day < 1 || day > DAYS_IN_MONTH[month - 1]! || year < 1900 || year > 2200)
      return false;
    const key = year * 512 + month * 32 + day;
    if (key === this.dateKey) return true;
    if (month === 2 && day === 29 && !isLeapYear(year)) return false;
    this.dateMs = Date.UTC(year, month - 1, day);
    return this.remember(key, month, day, isNamed);
  }

  private remember(key: number, month: number, day: number, isNamed: boolean): true {
    this.dateKey = key;
    this.month = month;
    this.day = day;
    this.isNamed = isNamed;
    return true;
  }

  private endYearless(
    named: number,
    first: number,
    firstDigits: number,
    second: number,
    secondDigits: number,
    sign: number,
  ): boolean {
    // "28.08. 00:05" and "28 Aug. 00:05"; two numbers with a lone point between them are a reading.
    const pointed = this.code() === DOT && !isDigit(this.codeAt(this.at + 1));
    if (pointed) this.at++;
    const next = this.code();
    if (next === MINUS || (next === COMMA && isDigit(this.codeAt(this.at + 1)))) return false;
    if (firstDigits > 2 || secondDigits > 2) return false;
    this.needsTime = named === 0 && (sign === SPACE || sign === COMMA || (sign === DOT && !pointed));
    if (named !== 0) return this.setYearless(named, firstDigits === 0 ? second : first, true);
    return this.form === 'month/day' ? this.setYearless(first, second, false) : this.setYearless(second, first, false);
  }

  private setYearless(month: number, day: number, isNamed: boolean): boolean {
    const key = month * 32 + day;
    if (key === this.dateKey) return true;
    if (this.year === null || month < 1 || month > 12 || day < 1 || day > DAYS_IN_MONTH[month - 1]!) return false;
    const isFirst = Number.isNaN(this.heldMs);
    const year = isFirst ? this.year : new Date(this.heldMs).getUTCFullYear();
    let bestMs = Number.NaN;
    let least = Number.POSITIVE_INFINITY;
    for (let y = isFirst ? year : year - 1; y <= (isFirst ? year : year + 1); y++) {
      if (month === 2 && day === 29 && !isLeapYear(y)) continue;
      const ms = Date.UTC(y, month - 1, day);
      // A weekday that does not fit counts as farther than any other year.
      const away = (isFirst ? 0 : Math.abs(ms - this.heldMs)) + (this.misfits(ms) ? 1000 * DAY_MS : 0);
      if (away >= least) continue;
      least = away;
      bestMs = ms;
    }
    if (Number.isNaN(bestMs)) return false;
    // 29 February that exists only in a far year: the first row's year is wrong.
    if (!isFirst && this.weekday === -1 && Math.abs(bestMs - this.heldMs) > FARTHEST_MS) return false;
    this.dateMs = bestMs;
    return this.remember(key, month, day, isNamed);
  }

  /** Whether the text names a weekday and it is not that of the date. */
  private misfits(dayMs: number): boolean {
    return this.weekday !== -1 && weekdayOf(dayMs) !== this.weekday;
  }
}
