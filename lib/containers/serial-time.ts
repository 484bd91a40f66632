import type { TimeKind } from './number-format';

const DAY_SECONDS = 86_400;
/** Serial number of 1970-01-01 in either system. */
const UNIX_EPOCH_1900 = 25_569;
const UNIX_EPOCH_1904 = 24_107;
/** The 1900 system has a 29 February 1900 that never was; before it everything is one day off. */
const PHANTOM_DAY = 60;
/** First day after 9999-12-31 in the 1900 system. */
const END_OF_TIME = 2_958_466;

const two = (value: number): string => (value < 10 ? `0${value}` : String(value));

/** Turns serial numbers into text; keeps the last day, because trends have many rows a day. */
export class SerialTimes {
  private day = NaN;
  private dayText = '';

  constructor(private readonly since1904: boolean) {}

  /**
   * A spreadsheet's serial time as `YYYY-MM-DD HH:MM:SS`, or `HH:MM:SS` when it has no day, or `YYYY-MM-DD` when it is a
   * whole day shown as a date: a clock may stand in the column beside it. Null when it is outside what the spreadsheet itself
   * can show, and then the number has to stand as it is.
   *
   * Units  days since 1900 or 1904, local time; rounded to the nearest second.
   */
  text(serial: number, kind: TimeKind): string | null {
    if (!(serial >= 0 && serial < END_OF_TIME)) return null;
    const seconds = Math.round(serial * DAY_SECONDS);
    if (kind === 'elapsed') return clock(seconds);
    const day = Math.floor(seconds / DAY_SECONDS);
    // A time format over a whole date hides the date; it is there all the same. A serial under 1 has none to show.
    if (serial < 1) return clock(seconds);
    const ofDay = seconds - day * DAY_SECONDS;
    return kind === 'date' && ofDay === 0 ? this.dateOf(day) : `${this.dateOf(day)} ${clock(ofDay)}`;
  }

  private dateOf(day: number): string {
    if (day !== this.day) {
      const epoch = this.since1904 ? UNIX_EPOCH_1904 : day < PHANTOM_DAY ? UNIX_EPOCH_1900 - 1 : UNIX_EPOCH_1900;
      this.dayText = new Date((day - epoch) * DAY_SECONDS * 1000).toISOString().slice(0, 10);
      this.day = day;
    }
    return this.dayText;
  }
}

function clock(seconds: number): string {
  return `${two(Math.floor(seconds / 3600))}:${two(Math.floor(seconds / 60) % 60)}:${two(seconds % 60)}`;
}
