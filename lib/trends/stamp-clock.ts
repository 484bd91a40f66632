import {
  COLON,
  COMMA,
  DOT,
  HOUR_MS,
  isDigit,
  isLetter,
  isSpace,
  MINUS,
  MINUTE_MS,
  PLUS,
  SECOND_MS,
  StampScanner,
} from './stamp-scan';
import { offsetMinutesOfAbbreviation } from './stamp-words';

const TYPOGRAPHIC_MINUS = 0x2212;

/**
 * The time of day in a stamp: `0:05`, `00:05:00.250`, `12:05 AM`, `12:05:00a.m.`, `00.05.00`, `0005`, `24:00`, and what
 * may stand behind it: `Z`, `+hh:mm` or a usual zone abbreviation.
 */
export class ClockScanner extends StampScanner {
  /** Whether the last text says its distance from UTC. */
  hasOffset = false;
  /** Whether the last text held a time of day. */
  hasTime = false;
  /** Whether the last text wrote midnight as hour 24, the end of its day. */
  isHour24 = false;

  /** Since midnight. */
  protected clockMs = 0;
  /** East of UTC; 0 when the text has none. */
  protected offsetMs = 0;

  private zoneWord = '';
  private zoneMinutes = 0;

  /** `compact` also takes `0005` and `000500`. */
  protected readClock(compact: boolean): boolean {
    let hour = this.readNumber();
    let minute = 0;
    let second = 0;
    let milli = 0;
    const hourDigits = this.digits;
    if (hourDigits === 0) return false;
    let bare = true;
    if (hourDigits === 4 || hourDigits === 6) {
      if (!compact) return false;
      if (hourDigits === 6) {
        second = hour % 100;
        hour = Math.floor(hour / 100);
        if (this.code() === DOT && isDigit(this.codeAt(this.at + 1))) milli = this.readFraction();
      }
      minute = hour % 100;
      hour = Math.floor(hour / 100);
      bare = false;
    } else if (hourDigits > 2) return false;
    else if (this.code() === COLON || this.isDotted()) {
      bare = false;
      this.at++;
      minute = this.readNumber();
      if (this.digits === 0 || this.digits > 2) return false;
      if (this.code() === COLON || this.isDotted()) {
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
    if (half === 0 && bare) return false;
    if (half !== 0) {
      if (hour > 23 || (half === 1 && hour > 12)) return false;
      if (hour === 12) hour = half === 1 ? 0 : 12;
      else if (half === 2 && hour < 12) hour += 12;
    }
    // Hour 24 ends a day and is the next day's midnight; nothing lies behind it.
    this.isHour24 = hour === 24;
    if (hour > 24 || (hour === 24 && (minute !== 0 || second !== 0 || milli !== 0))) return false;
    this.clockMs = hour * HOUR_MS + minute * MINUTE_MS + second * SECOND_MS + milli;
    this.hasTime = true;
    return this.readOffset();
  }

  /** A point before two digits parts hours from minutes where the country writes it so. */
  private isDotted(): boolean {
    return this.code() === DOT && isDigit(this.codeAt(this.at + 1)) && isDigit(this.codeAt(this.at + 2));
  }

  /** Milliseconds of a fraction of a second; digits behind the third are left aside. */
  private readFraction(): number {
    let milli = 0;
    let scale = 100;
    for (this.at++; isDigit(this.code()); this.at++) {
      milli += (this.code() - 48) * scale;
      scale = scale === 1 ? 0 : scale / 10;
    }
    return milli;
  }

  /** 1 for AM, 2 for PM, 0 for neither: `AM`, `am`, `a.m.`, `a. m.`, and `A` right behind the digits. */
  private readHalf(): 0 | 1 | 2 {
    const start = this.at;
    this.skipSpaces();
    const letter = this.code() | 32;
    if (letter === 97 || letter === 112) {
      const half = letter === 97 ? 1 : 2;
      let at = this.at + 1;
      if (this.codeAt(at) === DOT) {
        at++;
        if (isSpace(this.codeAt(at))) at++;
      }
      if ((this.codeAt(at) | 32) === 109) {
        at++;
        if (this.codeAt(at) === DOT) at++;
        if (!isLetter(this.codeAt(at))) {
          this.at = at;
          return half;
        }
      } else if (this.at === start && !isLetter(this.codeAt(start + 1))) {
        this.at = start + 1;
        return half;
      }
    }
    this.at = start;
    return 0;
  }

  private readOffset(): boolean {
    this.skipSpaces();
    const code = this.code();
    if (code === PLUS || code === MINUS || code === TYPOGRAPHIC_MINUS) {
      this.at++;
      const hours = this.readNumber();
      const digits = this.digits;
      if (digits === 4) return this.setOffset(code, Math.floor(hours / 100), hours % 100);
      if (digits !== 1 && digits !== 2) return false;
      let minutes = 0;
      if (this.code() === COLON) {
        this.at++;
        minutes = this.readNumber();
        if (this.digits !== 2) return false;
      }
      return this.setOffset(code, hours, minutes);
    }
    return isLetter(code) ? this.readZone(code) : true;
  }

  private setOffset(sign: number, hours: number, minutes: number): boolean {
    if (hours > 15 || minutes > 59) return false;
    const offsetMs = hours * HOUR_MS + minutes * MINUTE_MS;
    this.offsetMs = sign === PLUS ? offsetMs : -offsetMs;
    this.hasOffset = true;
    return true;
  }

  private readZone(code: number): boolean {
    const afterZ = this.codeAt(this.at + 1);
    if ((code | 32) === 122 && !isLetter(afterZ)) this.at++;
    else if (this.zoneWord !== '' && this.text.startsWith(this.zoneWord, this.at)) {
      // The same abbreviation row by row: not cut out of the text again.
      this.at += this.zoneWord.length;
      if (isLetter(this.code())) return false;
      this.offsetMs = this.zoneMinutes * MINUTE_MS;
      this.hasOffset = true;
      return this.zoneMinutes !== 0 || !this.isSign() || this.readOffset();
    } else {
      const word = this.readWord();
      const minutes = offsetMinutesOfAbbreviation(word);
      if (Number.isNaN(minutes)) return false;
      this.zoneWord = word;
      this.zoneMinutes = minutes;
      // "UTC+2" and the like go on with digits.
      if (minutes === 0 && this.isSign()) return this.readOffset();
      this.offsetMs = minutes * MINUTE_MS;
    }
    this.hasOffset = true;
    return true;
  }

  private isSign(): boolean {
    const code = this.code();
    return code === PLUS || code === MINUS || code === TYPOGRAPHIC_MINUS;
  }
}
