import { DAY_MS, StampParser } from './timestamps';
import { TrendError, type TimestampForm } from './types';

const OTHER_FORM: Readonly<Partial<Record<TimestampForm, TimestampForm>>> = {
  'month/day/year': 'day/month/year',
  'day/month/year': 'month/day/year',
  'month/day': 'day/month',
  'day/month': 'month/day',
};
/** From this many rows on that only the other form can read, against none that only this one can, reading stops. */
const CONTRADICTED_ROWS = 10;
/** So many new dates must lie nearer to each other in the other form, and none in this one, for a warning. */
const CLOSER_DATES = 3;

/** The same digits with month and day the other way round; null for a form in which the two have no order. */
export const otherDayMonthForm = (form: TimestampForm): TimestampForm | null => OTHER_FORM[form] ?? null;

/**
 * Watches a whole time column for the order of month and day, which the head of a file often cannot settle: 01/02 to 12/02
 * can be read both ways, 13/02 only one.
 *
 * Call `accept` after every row whose time could be read and `refuse` after every one whose time could not, in the order
 * of the file. Rows of one date cost two comparisons.
 *
 *   while reading: stop with `error()` once `isMisread`: many rows can be read only the other way and none only this way.
 *   at the end:    stop with `error()` when `isMisreadAtEnd`: even one row speaks against the form and none for it, so
 *                  every date read may be another day. Otherwise report `warning()` when it is not null.
 */
export class DayMonthWitness {
  /** Rows read that could also be read the other way round. */
  ambiguousRows = 0;
  /** Rows read that only this form can read. */
  confirmingRows = 0;
  /** Rows refused that only the other form can read. */
  contradictingRows = 0;
  /** The first of them. */
  firstRow: number | null = null;
  private firstText = '';

  private readonly other: StampParser | null;
  private key = -1;
  private isAmbiguous = false;
  private isTelling = false;
  private thisMs = Number.NaN;
  private thatMs = Number.NaN;
  private closerThis = 0;
  private closerThat = 0;

  constructor(
    readonly form: TimestampForm,
    decimal: '.' | ',' = '.',
  ) {
    const other = otherDayMonthForm(form);
    // Any leap year will do to see whether a date without a year can be read.
    this.other = other === null ? null : new StampParser(other, decimal, 2024);
  }

  /** After `parser`, which has the witness's form, has read a row. */
  accept(parser: StampParser): void {
    if (parser.dateKey !== this.key) this.takeDate(parser);
    if (this.isAmbiguous) this.ambiguousRows++;
    else if (this.isTelling) this.confirmingRows++;
  }

  private takeDate(parser: StampParser): void {
    const { month, day, isNamed } = parser;
    this.key = parser.dateKey;
    if (this.other === null) return;
    // A month in letters, and 5 May, say nothing.
    this.isAmbiguous = !isNamed && day <= 12 && day !== month;
    this.isTelling = !isNamed && day > 12;
    const year = new Date(parser.ms).getUTCFullYear();
    const thisMs = Date.UTC(year, month - 1, day);
    const thatMs = day <= 12 && !isNamed ? Date.UTC(year, day - 1, month) : Number.NaN;
    const thisAway = Math.abs(thisMs - this.thisMs) / DAY_MS;
    const thatAway = Math.abs(thatMs - this.thatMs) / DAY_MS;
    if (thisAway < thatAway) this.closerThis++;
    else if (thatAway < thisAway) this.closerThat++;
    this.thisMs = thisMs;
    this.thatMs = thatMs;
  }

  /** After a row's time could not be read. */
  refuse(text: string, row: number): void {
    if (this.other === null || !this.other.parse(text) || this.other.isNamed || this.other.day <= 12) return;
    if (this.firstRow === null) {
      this.firstRow = row;
      this.firstText = text.trim().replace(/\s+/g, ' ').slice(0, 40);
    }
    this.contradictingRows++;
  }

  get isMisread(): boolean {
    return this.contradictingRows >= CONTRADICTED_ROWS && this.confirmingRows === 0;
  }

  get isMisreadAtEnd(): boolean {
    return this.contradictingRows > 0 && this.contradictingRows > this.confirmingRows;
  }

  /** Says which row can only be read the other way round and what to do. */
  error(): TrendError {
    const said = `Row ${this.firstRow ?? 0} holds "${this.firstText}", which can only be ${this.words(true)}`;
    const read = `the file was to be read as ${this.words(false)}`;
    return new TrendError(
      'unsupported',
      `${said}, but ${read}. Choose ${otherDayMonthForm(this.form) ?? this.form} for the time and read the file again.`,
      this.firstRow ?? undefined,
    );
  }

  /** A sentence for a problem at the end of the file, or null when nothing speaks against the form. */
  warning(): string | null {
    if (this.contradictingRows > 0 && this.ambiguousRows > 0)
      return `Rows like "${this.firstText}" can only be ${this.words(true)}, others only ${this.words(false)}. Those that could be either were read as ${this.words(false)}; check their days.`;
    const isOpen = this.confirmingRows === 0 && this.contradictingRows === 0;
    if (isOpen && this.closerThis === 0 && this.closerThat >= CLOSER_DATES)
      return `Every date could have month and day either way round. Read as ${this.words(false)} they lie far apart; as ${this.words(true)} they would follow each other. Check the form of the time.`;
    return null;
  }

  private words(other: boolean): string {
    const form = other ? (otherDayMonthForm(this.form) ?? this.form) : this.form;
    return form.startsWith('month') ? 'month first' : 'day first';
  }
}
