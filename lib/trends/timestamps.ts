import { isWeekday, monthOfWord, offsetMinutesOfAbbreviation } from './stamp-words';
import type { TimestampForm } from './types';

export const SECOND_MS = 1000;
export const MINUTE_MS = 60_000;
export const HOUR_MS = 3_600_000;
export const DAY_MS = 86_400_000;

/** Day 0 of spreadsheet serials, 1899-12-30, in days from 1970-01-01. */
const SERIAL_DAY_ZERO = -25_569;
/** Plausible range of serials: 1954 to 2119. */
const SERIAL_LOW = 20_000;
const SERIAL_HIGH = 80_000;
/** Plausible range of epoch seconds: 1990 to 2100. */
const EPOCH_LOW_S = 631_152_000;
const EPOCH_HIGH_S = 4_102_444_800;

const DAYS_IN_MONTH = [31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31] as const;
const ZERO = 48;
const COLON = 58;
const DOT = 46;
const COMMA = 44;
const SLASH = 47;
const SPACE = 32;
const PLUS = 43;
const MINUS = 45;

const isDigit = (code: number) => code >= 48 && code <= 57;
/** Latin letters, with accents. */
const isLetter = (code: number) => ((code | 32) >= 97 && (code | 32) <= 122) || (code >= 192 && code <= 591);
const isSpace = (code: number) =>
  code === 32 || code === 9 || code === 160 || code === 0x202f || code === 13 || code === 10;

/**
 * Reads times of one form, written by hand because it runs once a row: no Date, no Intl, no regular expression and no
 * allocation on the usual path. After `parse` answered true, `ms` is the instant (`hasOffset`) or the local wall time
 * counted as if it were UTC.
 *
 * Dates take `/ - . ,` or blanks between their parts, month names, two-digit years (70 to 99 are 1970 to 1999) and a
 * weekday in front; times take seconds, fractions, AM/PM, hour 24 for the end of a day, and `Z`, `+hh:mm` or a usual
 * zone abbreviation behind. A date alone is its midnight.
 */
export class StampParser {
  ms = 0;
  hasOffset = false;
  /** Whether the last text held a time of day. */
  hasTime = false;

  private text = '';
  private at = 0;
  private dateKey = -1;
  private dateMs = 0;

  constructor(
    private readonly form: TimestampForm,
    private readonly decimal: '.' | ',' = '.',
  ) {}

  parse(text: string): boolean {
    this.hasOffset = false;
    this.hasTime = false;
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
    const ms = this.number(text) * unitMs;
    if (!(ms >= EPOCH_LOW_S * SECOND_MS && ms <= EPOCH_HIGH_S * SECOND_MS)) return false;
    this.ms = Math.round(ms);
    this.hasOffset = true;
    this.hasTime = true;
    return true;
  }

  /** Serials carry the wall time as a fraction of a day in limited digits: to the nearest second. */
  private parseSerial(text: string): boolean {
    const days = this.number(text);
    if (!(days >= SERIAL_LOW && days <= SERIAL_HIGH)) return false;
    this.ms = Math.round((days + SERIAL_DAY_ZERO) * 86_400) * SECOND_MS;
    this.hasTime = true;
    return true;
  }

  private parseCalendar(text: string): boolean {
    this.text = text;
    this.at = 0;
    this.skipSpaces();
    if (!this.readDate()) return false;
    this.ms = this.dateMs;
    // Between date and time: blanks, a comma, a T or a colon.
    this.skipSpaces();
    const code = this.code();
    if (code === COMMA || code === COLON || (code === 84 && isDigit(this.codeAt(this.at + 1)))) this.at++;
    this.skipSpaces();
    if (this.at < text.length && !this.readTime()) return false;
    this.skipSpaces();
    // Some programs add the zone's name in brackets after its offset.
    if (this.code() === 91 && this.text.endsWith(']')) return this.hasOffset;
    return this.at === text.length;
  }

  private code(): number {
    return this.text.charCodeAt(this.at);
  }

  private codeAt(at: number): number {
    return this.text.charCodeAt(at);
  }

  private skipSpaces(): void {
    while (isSpace(this.code())) this.at++;
  }

  /** Digits from here on as a number; `digits` says how many there were. */
  private digits = 0;
  private readNumber(): number {
    let value = 0;
    const start = this.at;
    let code = this.code();
    while (isDigit(code)) {
      value = value * 10 + code - ZERO;
      code = this.codeAt(++this.at);
    }
    this.digits = this.at - start;
    return value;
  }

  private readWord(): string {
    const start = this.at;
    while (isLetter(this.code())) this.at++;
    return this.text.slice(start, this.at);
  }

  /** The sign between two parts of a date (a blank when there is nothing else), or 0 when there is none. */
  private skipSeparator(): number {
    const start = this.at;
    this.skipSpaces();
    const code = this.code();
    const sign = code === SLASH || code === MINUS || code === DOT || code === COMMA;
    if (sign) this.at++;
    this.skipSpaces();
    return this.at === start ? 0 : sign ? code : SPACE;
  }

  private readDate(): boolean {
    if (isLetter(this.code())) {
      const start = this.at;
      const word = this.readWord();
      if (isWeekday(word) && monthOfWord(word) === 0) this.skipSeparator();
      else this.at = start;
    }
    let named = 0;
    let first = 0;
    let firstDigits = 0;
    if (isLetter(this.code())) named = monthOfWord(this.readWord());
    else {
      first = this.readNumber();
      firstDigits = this.digits;
    }
    if (firstDigits === 8 && (this.form === 'iso' || this.form === 'year/month/day'))
      return this.setDate(Math.floor(first / 10_000), Math.floor(first / 100) % 100, first % 100, 4);
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
    // 08/28 00:05 has no year: numbers are parted by the same sign twice.
    const again = this.skipSeparator();
    if (again === 0 || (named === 0 && again !== sign)) return false;
    const third = this.readNumber();
    const thirdDigits = this.digits;
    if (thirdDigits === 0) return false;
    return this.orderDate(named, first, firstDigits, second, secondDigits, third, thirdDigits);
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
    if (this.form === 'iso' || this.form === 'year/month/day') {
      return named === 0
        ? secondDigits <= 2 && thirdDigits <= 2 && this.setDate(first, second, third, firstDigits)
        : this.setDate(first, named, third, firstDigits);
    }
    if (named !== 0) return this.setDate(third, named, firstDigits === 0 ? second : first, thirdDigits);
    if (firstDigits > 2 || secondDigits > 2) return false;
    return this.form === 'month/day/year'
      ? this.setDate(third, first, second, thirdDigits)
      : this.setDate(third, second, first, thirdDigits);
  }

  private setDate(shortYear: number, month: number, day: number, yearDigits: number): boolean {
    if (yearDigits !== 4 && (yearDigits !== 2 || this.form === 'iso')) return false;
    const year = yearDigits === 4 ? shortYear : shortYear + (shortYear < 70 ? 2000 : 1900);
    if (month < 1 || month > 12 || day < 1 || day > DAYS_IN_MONTH[month - 1]! || year < 1900) return false;
    const key = year * 512 + month * 32 + day;
    if (key === this.dateKey) return true;
    if (month === 2 && day === 29 && (year % 4 !== 0 || (year % 100 === 0 && year % 400 !== 0))) return false;
    this.dateKey = key;
    this.dateMs = Date.UTC(year, month - 1, day);
    return true;
  }

  private readTime(): boolean {
    let hour = this.readNumber();
    let minute = 0;
    let second = 0;
    let milli = 0;
    const hourDigits = this.digits;
    if (hourDigits === 0) return false;
    let bare = true;
    if (hourDigits === 4 || hourDigits === 6) {
      // Compact: 0005 or 000500.
      if (hourDigits === 6) {
        second = hour % 100;
        hour = Math.floor(hour / 100);
      }
      minute = hour % 100;
      hour = Math.floor(hour / 100);
      bare = false;
    } else if (hourDigits > 2) return false;
    else if (this.code() === COLON) {
      bare = false;
      this.at++;
      minute = this.readNumber();
      if (this.digits === 0 || this.digits > 2) return false;
      if (this.code() === COLON) {
        this.at++;
        second = this.readNumber();
        if (this.digits === 0 || this.digits > 2) return false;
        const code = this.code();
        if ((code === DOT || code === COMMA || code === COLON) && isDigit(this.codeAt(this.at + 1)))
          milli = this.readFraction();
      }
    }
    if (minute > 59 || second > 60) return false;
    const half = this.readHalf();
    if (half !== 0) {
      if (hour === 12) hour = half === 1 ? 0 : 12;
      else if (half === 2 && hour < 12) hour += 12;
      else if (half === 1 && hour > 12) return false;
    } else if (bare) return false;
    // Hour 24 ends a day and is the next day's midnight; nothing lies behind it.
    if (hour > 24 || (hour === 24 && (minute !== 0 || second !== 0 || milli !== 0))) return false;
    this.ms += hour * HOUR_MS + minute * MINUTE_MS + second * SECOND_MS + milli;
    this.hasTime = true;
    return this.readOffset();
  }

  private readFraction(): number {
    this.at++;
    const start = this.at;
    this.readNumber();
    const three = this.text.slice(start, Math.min(this.at, start + 3)).padEnd(3, '0');
    return +three;
  }

  /** 1 for AM, 2 for PM, 0 for neither. */
  private readHalf(): 0 | 1 | 2 {
    const start = this.at;
    this.skipSpaces();
    const letter = this.code() | 32;
    if (letter === 97 || letter === 112) {
      let at = this.at + 1;
      if (this.codeAt(at) === DOT) at++;
      if ((this.codeAt(at) | 32) === 109) {
        at++;
        if (this.codeAt(at) === DOT) at++;
        if (!isLetter(this.codeAt(at))) {
          this.at = at;
          return letter === 97 ? 1 : 2;
        }
      }
    }
    this.at = start;
    return 0;
  }

  private readOffset(): boolean {
    this.skipSpaces();
    const code = this.code();
    if (code === PLUS || code === MINUS || code === 0x2212) {
      this.at++;
      const hours = this.readNumber();
      const digits = this.digits;
      if (digits === 4) return this.applyOffset(code, Math.floor(hours / 100), hours % 100);
      if (digits !== 1 && digits !== 2) return false;
      let minutes = 0;
      if (this.code() === COLON) {
        this.at++;
        minutes = this.readNumber();
        if (this.digits !== 2) return false;
      }
      return this.applyOffset(code, hours, minutes);
    }
    if (isLetter(code)) {
      const minutes = offsetMinutesOfAbbreviation(this.readWord());
      if (Number.isNaN(minutes)) return false;
      // "UTC+2" and the like go on with digits.
      if (minutes === 0 && (this.code() === PLUS || this.code() === MINUS)) return this.readOffset();
      this.ms -= minutes * MINUTE_MS;
      this.hasOffset = true;
    }
    return true;
  }

  private applyOffset(sign: number, hours: number, minutes: number): boolean {
    if (hours > 15 || minutes > 59) return false;
    const offsetMs = hours * HOUR_MS + minutes * MINUTE_MS;
    this.ms += sign === PLUS ? -offsetMs : offsetMs;
    this.hasOffset = true;
    return true;
  }
}
