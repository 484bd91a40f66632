import { TREND_UNITS, type TrendUnitId } from '../units';
import { convertedBetween, isMissingWord, isSentinel, measureOfText, readableRange, stateOfWord } from './cell-text';
import { isLogEvent } from './event-words';
import { detached, quoted, type CountedProblem, type ProblemLog } from './problems';
import { looksLikePlaceholder } from './sentinels';
import { statusMeaning } from './status-words';

/** A cell that holds nothing: the point was not logged at that time. Told apart from NaN, a reading that is missing. */
export const BLANK = Number.POSITIVE_INFINITY;

/** Numbers above this need no comparison with the placeholders. */
const FAST_LOW = -900;

/** A point's state in braces behind its value: `44.2 {ok}`. */
const QUALITY = /\s*\{([^{}]*)\}\s*$/;
/** A date, or a time of day with seconds or minutes: no reading, so the cells of its row have moved. */
const TIME_INSIDE =
  /(?:^|[^\d])(?:\d{4}[-/.]\d{1,2}[-/.]\d{1,2}|\d{1,2}[-/.]\d{1,2}[-/.]\d{2,4})(?:$|[T\s,]+\d{1,2}:\d{2})/;

/** Different cells of a column whose reading is remembered. */
const MOST_REMEMBERED = 64;

/** Longest text that tells two kinds of trouble apart. */
const LONGEST_DETAIL = 40;

/** What a cell was read as, and the kind of trouble that was counted. */
interface Outcome {
  value: number;
  kind?: CountedProblem;
  /** Not to be remembered. */
  forget?: boolean;
}

interface Trouble {
  code: string;
  severity?: 'error' | 'warning';
  detail?: string;
  message: () => string;
}

/** What is known of a column besides its unit. */
export interface ValueReaderOptions {
  /** Numbers that stand in place of a reading in this column (detectSentinels), in the file's unit. */
  sentinels?: readonly number[];
  /** Hears of a cell that holds a date instead of a value: two records were spliced, and the row's cells have moved. */
  onTime?: (row: number) => void;
}

/**
 * Reads the cells of one column to numbers in the file's unit, and says what could not be read. No text makes it throw.
 *
 * A value that names another unit of the same quantity is converted. A record about the log (disabled, interrupted,
 * purged) is a missing reading that ends what was held, with the code `log-ended`.
 */
export class ValueReader {
  /** What a sensor can read, in the file's unit. */
  private readonly low: number;
  private readonly high: number;
  private readonly fastLow: number;
  private readonly fastHigh: number;
  private readonly sentinels: ReadonlySet<number>;
  private readonly isStatus: boolean;
  private readonly met = new Map<string, Outcome>();

  constructor(
    private readonly column: string,
    private readonly unit: TrendUnitId,
    private readonly decimal: '.' | ',',
    private readonly problems: ProblemLog,
    private readonly options: ValueReaderOptions = {},
  ) {
    this.isStatus = TREND_UNITS[unit].quantity === 'status';
    [this.low, this.high] = readableRange(unit);
    const sentinels = options.sentinels ?? [];
    this.sentinels = new Set(sentinels);
    // Cells between the placeholders are read without comparing them.
    this.fastLow = Math.max(this.low, FAST_LOW, ...sentinels.filter((value) => value <= 0).map(justAbove));
    this.fastHigh = Math.min(this.high, ...sentinels.filter((value) => value > 0).map(justBelow));
  }

  /** A reading, NaN for a missing one, BLANK for an empty cell. `row` is for the report. */
  read(cell: string, row: number): number {
    let value = Number.NaN;
    if (this.decimal === '.') value = +cell;
    else {
      const comma = cell.indexOf(',');
      if (comma !== -1) value = +`${cell.slice(0, comma)}.${cell.slice(comma + 1)}`;
      else if (!cell.includes('.')) value = +cell;
    }
    // What unary plus reads too kindly: 0x1F and 1e5 have a letter second, blanks give 0 without one in the text.
    if (
      value >= this.fastLow &&
      value <= this.fastHigh &&
      !(cell.charCodeAt(1) >= 65) &&
      (value !== 0 || cell.includes('0'))
    )
      return value;
    return this.readSlowly(cell, row);
  }

  private readSlowly(cell: string, row: number): number {
    const again = this.met.get(cell);
    if (again) {
      if (again.kind) again.kind.count++;
      return again.value;
    }
    const outcome = this.readText(cell, row);
    // Bad cells come in thousands of a kind: blanks, one or two words.
    const remember = this.isStatus || (outcome.kind !== undefined && outcome.kind.code !== 'more');
    if (remember && !outcome.forget && this.met.size < MOST_REMEMBERED) this.met.set(detached(cell), outcome);
    return outcome.value;
  }

  private readText(cell: string, row: number): Outcome {
    const note = (trouble: Trouble): CountedProblem =>
      this.problems.add({ severity: 'warning', ...trouble, row, column: this.column });
    const state = cell.includes('}') ? QUALITY.exec(cell) : null;
    const meaning = state ? statusMeaning(state[1]!) : 'good';
    if (meaning === 'ends') return this.logEnded(cell, note);
    if (state && meaning !== 'good') {
      const message = () => `${quoted(cell)} is marked "${state[1]}". Read as missing.`;
      const kind = note({ code: 'bad-quality', detail: state[1]!.toLowerCase(), message });
      return { value: Number.NaN, kind };
    }
    const text = (state ? cell.slice(0, state.index) : cell).trim();
    if (text === '') {
      const kind = note({ code: 'empty-cell', message: () => 'The cell is empty. Read as missing.' });
      return { value: BLANK, kind };
    }
    const measure = measureOfText(text, this.decimal);
    if (measure) return this.measured(measure.value, measure.unit, text, note);
    const onOrOff = this.isStatus ? stateOfWord(text) : Number.NaN;
    if (!Number.isNaN(onOrOff)) return { value: onOrOff };
    if (isLogEvent(text)) return this.logEnded(cell, note);
    const detail = text.toLowerCase();
    if (isMissingWord(text)) {
      const message = () => `${quoted(text)} stands for no reading. Read as missing.`;
      return { value: Number.NaN, kind: note({ code: 'missing-word', detail, message }) };
    }
    if (TIME_INSIDE.test(text)) {
      this.options.onTime?.(row);
      const message = () =>
        `${quoted(text)} is a time where a value should be. Read as missing; the row's cells may have moved.`;
      return { value: Number.NaN, kind: note({ code: 'time-in-value', severity: 'error', message }), forget: true };
    }
    const what = this.isStatus ? 'neither on nor off' : 'not a number';
    const message = () => `${quoted(text)} is ${what}. Read as missing.`;
    return { value: Number.NaN, kind: note({ code: 'not-a-number', severity: 'error', detail, message }) };
  }

  private logEnded(cell: string, note: (trouble: Trouble) => CountedProblem): Outcome {
    const message = () =>
      `${quoted(cell)} says that the log itself was off, cleared or set. The value before it ends there; missing until the next.`;
    const kind = note({ code: 'log-ended', detail: cell.trim().toLowerCase().slice(0, LONGEST_DETAIL), message });
    return { value: Number.NaN, kind };
  }

  private measured(
    value: number,
    unit: TrendUnitId | null,
    text: string,
    note: (trouble: Trouble) => CountedProblem,
  ): Outcome {
    if (unit === null || unit === this.unit) return this.checked(value, text, note);
    const here = TREND_UNITS[this.unit].label;
    const converted = convertedBetween(value, unit, this.unit);
    if (Number.isNaN(converted)) {
      const message = () => `${quoted(text)} is no value of a column in ${here}. Read as missing; check the unit.`;
      const kind = note({ code: 'other-quantity', severity: 'error', detail: unit, message });
      return { value: Number.NaN, kind, forget: true };
    }
    const outcome = this.checked(converted, text, note);
    if (outcome.kind) return outcome;
    const message = () => `${quoted(text)} stands in a column in ${here}. Converted.`;
    return { value: converted, kind: note({ code: 'unit-converted', detail: unit, message }), forget: true };
  }

  private checked(value: number, text: string, note: (trouble: Trouble) => CountedProblem): Outcome {
    const isBeyond = value < this.low || value > this.high;
    if (isSentinel(value) || this.sentinels.has(value) || (isBeyond && !this.isStatus && looksLikePlaceholder(value))) {
      const message = () => `${text} is what loggers write in place of a reading. Read as missing.`;
      return { value: Number.NaN, kind: note({ code: 'placeholder', detail: text, message }) };
    }
    if (!isBeyond) return { value };
    if (this.isStatus && value > 1) {
      const message = () => `${text} is neither 0 nor 1. Read as on.`;
      return { value: 1, kind: note({ code: 'status-number', detail: text, message }) };
    }
    const unit = TREND_UNITS[this.unit].label;
    const message = () => `${text} ${unit} is beyond what such a sensor can read. Read as missing; check the unit.`;
    return { value: Number.NaN, kind: note({ code: 'out-of-range', severity: 'error', message }) };
  }
}

/** The neighbours of a number, give or take the grain of a double: bounds that leave the number itself out. */
const justAbove = (value: number): number => value + Math.max(Math.abs(value), 1) * Number.EPSILON;
const justBelow = (value: number): number => value - Math.max(Math.abs(value), 1) * Number.EPSILON;
