import { DateScanner } from './stamp-date';
import {
  CAPITAL_T,
  COLON,
  COMMA,
  DAY_MS,
  DOT,
  isDigit,
  isLetter,
  isSpace,
  MINUS,
  OPENING_BRACKET,
  SECOND_MS,
  UNDERSCORE,
} from './stamp-scan';
import type { TimestampForm, TimestampPlan } from './types';

export { DAY_MS, HOUR_MS, MINUTE_MS, SECOND_MS } from './stamp-scan';

/** Day 0 of spreadsheet serials, 1899-12-30, in days from 1970-01-01. */
const SERIAL_DAY_ZERO = -25_569;
/** Plausible range of serials: 1954 to 2119. */
const SERIAL_LOW = 20_000;
const SERIAL_HIGH = 80_000;
/** Plausible range of epoch seconds: 1990 to 2100. */
const EPOCH_LOW_S = 631_152_000;
const EPOCH_HIGH_S = 4_102_444_800;

/**
 * Reads times of one form, written by hand because it runs once a row: no Date, no Intl, no regular expression and no
 * allocation on the usual path. After `parse` answered true, `ms` is the instant (`hasOffset`) or the local wall time
 * counted as if it were UTC.
 *
 * Dates are read as DateScanner says, times of day as ClockScanner; a date alone is its midnight. Epoch milliseconds may
 * also be micro- or nanoseconds: the size tells them apart.
 *
 * A text that holds a time of day alone goes on from the row before, for exports that write the date only in the first
 * row of a day: the day rolls on when the clock goes back by more than half a day, or back a day when it goes forward by
 * more than that in a file with the newest row first. Once a row's date could not be read, times alone are refused until
 * the next date.
 *
 * One parser reads one file (or one point of a file in which whole points follow each other), row by row.
 */
export class StampParser extends DateScanner {
  ms = 0;

  /** The characters of the last date, so that an equal date in the next row is not taken apart again. */
  private datePrefix = '';
  private prefixWeekday = -1;
  /** Whether a time of day alone may follow. */
  private mayContinue = false;
  /** Offset of the row that held the date. */
  private heldHasOffset = false;
  private heldOffsetMs = 0;
  private lastClockMs = Number.NaN;
  private clockForward = 0;
  private clockBackward = 0;

  /** `year` is that of the first row, for the forms without one, which cannot be read when it is null. */
  constructor(
    form: TimestampForm,
    private readonly decimal: '.' | ',' = '.',
    year: number | null = null,
  ) {
    super(form, year);
  }

  /**
   * The parser of a plan.
   * Throws  RangeError when the plan's form has no year and the plan gives none.
   */
  static of(plan: TimestampPlan, decimal: '.' | ','): StampParser {
    const { form, year = null } = plan;
    if (year === null && (form === 'month/day' || form === 'day/month'))
      throw new RangeError(`StampParser: times of the form ${form} need the year of the first row`);
    return new StampParser(form, decimal, year);
  }

  parse(text: string): boolean {
    this.hasOffset = false;
    this.hasTime = false;
    this.isHour24 = false;
    switch (this.form) {
      case 'epoch-s':
        return this.parseEpoch(text, SECOND_MS);
      case 'epoch-ms':
        return this.parseEpoch(text, 1);
      case 'spreadsheet-serial':
        return this.parseSerial(text);
      default:
        return this.parseCalendar(text);
    }
  }

  private number(text: string): number {
    if (text.trim() === '') return Number.NaN;
    return +(this.decimal === ',' ? text.replace(',', '.') : text);
  }

  private parseEpoch(text: string, unitMs: number): boolean {
    let ms = this.number(text) * unitMs;
    // Only nearest: 2 ** 53 is passed by nanoseconds, whose last digits do not matter.
    if (unitMs === 1) for (let i = 0; i < 2 && ms > EPOCH_HIGH_S * SECOND_MS; i++) ms /= 1000;
    if (!(ms >= EPOCH_LOW_S * SECOND_MS && ms <= EPOCH_HIGH_S * SECOND_MS)) return false;
    this.ms = Math.round(ms);
    this.hasOffset = true;
    this.hasTime = true;
    return true;
  }

  /** Serials carry the wall time as a fraction of a day in limited digits: to the nearest second. */
  private parseSerial(text: string): boolean {
    const days = this.number(text);
    if (!(days >= SERIAL_LOW && days <= SERIAL_HIGH)) return this.parseSerialParts(text, days);
    this.holdSerial(days);
    return true;
  }

  private holdSerial(days: number): void {
    const whole = Math.floor(days);
    this.dateMs = (whole + SERIAL_DAY_ZERO) * DAY_MS;
    this.heldMs = this.dateMs;
    this.mayContinue = true;
    this.hasTime = days !== whole;
    this.clockMs = Math.round((days - whole) * 86_400) * SECOND_MS;
    this.lastClockMs = this.hasTime ? this.clockMs : Number.NaN;
    this.ms = this.dateMs + this.clockMs;
  }

  /** A day's number in one cell and its time in the next: `46223 0.25`, `46223 06:00`, or the time alone. */
  private parseSerialParts(text: string, days: number): boolean {
    if (days >= 0 && days <= 1) return this.continueAt(Math.round(days * 86_400) * SECOND_MS);
    this.text = text;
    this.at = 0;
    this.skipSpaces();
    if (this.isClockAlone()) return this.parseClockAlone();
    const start = this.at;
    const end = text.indexOf(' ', start);
    if (end === -1) return false;
    const day = this.number(text.slice(start, end));
    if (!Number.isInteger(day) || !(day >= SERIAL_LOW && day <= SERIAL_HIGH)) return false;
    const share = this.number(text.slice(end));
    this.at = end;
    this.skipSpaces();
    if (!(share >= 0 && share <= 1) && !(this.readClock(false) && this.at === text.length && !this.hasOffset))
      return false;
    const clockMs = share >= 0 ? Math.round(share * 86_400) * SECOND_MS : this.clockMs;
    this.holdSerial(day);
    this.ms += clockMs;
    this.lastClockMs = clockMs;
    this.hasTime = true;
    return true;
  }

  private parseCalendar(text: string): boolean {
    this.text = text;
    this.at = 0;
    this.skipSpaces();
    if (this.isClockAlone()) return this.parseClockAlone();
    if (this.isDateAgain()) {
      this.at = this.datePrefix.length;
      this.weekday = this.prefixWeekday;
      this.needsTime = false;
      this.clockAt = 0;
    } else {
      const start = this.at;
      if (!this.readDate()) return this.refuse();
      // Kept only where the text begins with it and what follows cannot belong to it.
      const end = this.code();
      const keep = start === 0 && this.clockAt === 0 && !this.needsTime && (isSpace(end) || end === CAPITAL_T);
      this.datePrefix = keep ? text.slice(0, this.at) : '';
      this.prefixWeekday = this.weekday;
    }
    if (!this.endCalendar()) return this.refuse();
    this.ms = this.dateMs + this.clockMs - this.offsetMs;
    this.heldMs = this.dateMs;
    this.mayContinue = true;
    this.heldHasOffset = this.hasOffset;
    this.heldOffsetMs = this.offsetMs;
    this.lastClockMs = this.hasTime ? this.clockMs : Number.NaN;
    return true;
  }

  private isDateAgain(): boolean {
    const { text, datePrefix } = this;
    const { length } = datePrefix;
    if (length === 0 || this.at !== 0) return false;
    for (let i = length - 1; i >= 0; i--) if (text.charCodeAt(i) !== datePrefix.charCodeAt(i)) return false;
    const end = text.charCodeAt(length);
    return isSpace(end) || end === CAPITAL_T;
  }

  /** Reads what follows the date. */
  private endCalendar(): boolean {
    const { text } = this;
    this.clockMs = 0;
    this.offsetMs = 0;
    if (this.clockAt > 0) {
      // The year stands behind the clock, and its four digits were read.
      const end = this.at - 4;
      this.at = this.clockAt;
      if (!this.readClock(false)) return false;
      this.skipSpaces();
      return this.at === end;
    }
    this.skipToTime();
    if (this.at < text.length && !this.readClock(!this.yearless)) return false;
    if (this.needsTime && !this.hasTime) return false;
    this.skipSpaces();
    // Some programs add the zone's name in brackets after its offset.
    if (this.code() === OPENING_BRACKET && text.endsWith(']')) return this.hasOffset;
    return this.at === text.length;
  }

  /** Between date and time: blanks, a comma, a T, a colon, an underscore, a weekday; a hyphen before `00.05`. */
  private skipToTime(): void {
    this.skipSpaces();
    const code = this.code();
    const next = this.codeAt(this.at + 1);
    if (code === COMMA || code === COLON || code === UNDERSCORE || (code === CAPITAL_T && isDigit(next))) this.at++;
    else if (code === MINUS && isDigit(next) && this.codeAt(this.at + 3) === DOT) this.at++;
    else if (isLetter(code)) this.skipWeekday();
    this.skipSpaces();
  }

  private isClockAlone(): boolean {
    const { at } = this;
    if (!isDigit(this.code())) return false;
    const second = this.codeAt(at + 1);
    return second === COLON || (isDigit(second) && this.codeAt(at + 2) === COLON);
  }

  private parseClockAlone(): boolean {
    this.offsetMs = 0;
    if (!this.mayContinue || !this.readClock(false)) return false;
    this.skipSpaces();
    if (this.at !== this.text.length) return false;
    return this.continueAt(this.clockMs);
  }

  private continueAt(clockMs: number): boolean {
    if (!this.mayContinue) return false;
    const deltaMs = clockMs - this.lastClockMs;
    // NaN behind a date that had a row of its own.
    if (deltaMs < -DAY_MS / 2) {
      if (this.clockBackward <= this.clockForward) this.roll(DAY_MS);
    } else if (deltaMs > DAY_MS / 2) {
      if (this.clockBackward > this.clockForward) this.roll(-DAY_MS);
    } else if (deltaMs > 0) this.clockForward++;
    else if (deltaMs < 0) this.clockBackward++;
    this.lastClockMs = clockMs;
    if (!this.hasOffset && this.heldHasOffset) {
      this.hasOffset = true;
      this.offsetMs = this.heldOffsetMs;
    }
    this.hasTime = true;
    this.ms = this.heldMs + clockMs - (this.hasOffset ? this.offsetMs : 0);
    return true;
  }

  private roll(ms: number): void {
    this.heldMs += ms;
    if (!this.yearless) return;
    // The date read last is no longer the one that dates without a year are held to.
    this.dateKey = -1;
    this.datePrefix = '';
  }

  /** A text with digits that is no time of this form may have held the next day's date: times alone do not go on from it. */
  private refuse(): false {
    for (let i = 0; i < this.text.length; i++) if (isDigit(this.text.charCodeAt(i))) this.mayContinue = false;
    return false;
  }
}
