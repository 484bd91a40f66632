import { TREND_UNITS, type TrendUnitId } from '../units';
import { isMissingWord, isSentinel, numberOfText, readableRange, stateOfWord } from './cell-text';
import { detached, quoted, type CountedProblem, type ProblemLog } from './problems';

/** A cell that holds nothing: the point was not logged at that time. Told apart from NaN, a reading that is missing. */
export const BLANK = Number.POSITIVE_INFINITY;

/** Numbers above this need no comparison with the placeholders. */
const FAST_LOW = -900;

/** A point's state in braces behind its value: `44.2 {ok}`. */
const QUALITY = /\s*\{([^{}]*)\}\s*$/;
const GOOD_QUALITY = new Set(['', 'ok', 'good', 'overridden', 'unackedalarm', 'alarm']);

/** Different cells of a column whose reading is remembered. */
const MOST_REMEMBERED = 64;

/** What a cell was read as, and the kind of trouble that was counted. */
interface Outcome {
  value: number;
  kind?: CountedProblem;
}

interface Trouble {
  code: string;
  severity?: 'error' | 'warning';
  detail?: string;
  message: () => string;
}

/** Reads the cells of one column to numbers in the file's unit, and says what could not be read. */
export class ValueReader {
  /** What a sensor can read, in the file's unit. */
  private readonly low: number;
  private readonly high: number;
  private readonly fastLow: number;
  private readonly isStatus: boolean;
  private readonly met = new Map<string, Outcome>();

  constructor(
    private readonly column: string,
    private readonly unit: TrendUnitId,
    private readonly decimal: '.' | ',',
    private readonly problems: ProblemLog,
  ) {
    this.isStatus = TREND_UNITS[unit].quantity === 'status';
    [this.low, this.high] = readableRange(unit);
    this.fastLow = Math.max(this.low, FAST_LOW);
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
      value <= this.high &&
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
    if (remember && this.met.size < MOST_REMEMBERED) this.met.set(detached(cell), outcome);
    return outcome.value;
  }

  private readText(cell: string, row: number): Outcome {
    const note = (trouble: Trouble): CountedProblem =>
      this.problems.add({ severity: 'warning', ...trouble, row, column: this.column });
    const state = QUALITY.exec(cell);
    if (state && !GOOD_QUALITY.has(state[1]!.toLowerCase())) {
      const message = () => `${quoted(cell)} is marked "${state[1]}". Read as missing.`;
      const kind = note({ code: 'bad-quality', detail: state[1]!.toLowerCase(), message });
      return { value: Number.NaN, kind };
    }
    const text = (state ? cell.slice(0, state.index) : cell).trim();
    if (text === '') {
      const kind = note({ code: 'empty-cell', message: () => 'The cell is empty. Read as missing.' });
      return { value: BLANK, kind };
    }
    const value = numberOfText(text, this.decimal);
    if (!Number.isNaN(value)) return this.checked(value, text, note);
    const onOrOff = this.isStatus ? stateOfWord(text) : Number.NaN;
    if (!Number.isNaN(onOrOff)) return { value: onOrOff };
    const detail = text.toLowerCase();
    if (isMissingWord(text)) {
      const message = () => `${quoted(text)} stands for no reading. Read as missing.`;
      return { value: Number.NaN, kind: note({ code: 'missing-word', detail, message }) };
    }
    const what = this.isStatus ? 'neither on nor off' : 'not a number';
    const message = () => `${quoted(text)} is ${what}. Read as missing.`;
    return { value: Number.NaN, kind: note({ code: 'not-a-number', severity: 'error', detail, message }) };
  }

  private checked(value: number, text: string, note: (trouble: Trouble) => CountedProblem): Outcome {
    if (isSentinel(value)) {
      const message = () => `${text} is what loggers write in place of a reading. Read as missing.`;
      return { value: Number.NaN, kind: note({ code: 'placeholder', detail: text, message }) };
    }
    if (value >= this.low && value <= this.high) return { value };
    if (this.isStatus && value > 1) {
      const message = () => `${text} is neither 0 nor 1. Read as on.`;
      return { value: 1, kind: note({ code: 'status-number', detail: text, message }) };
    }
    const unit = TREND_UNITS[this.unit].label;
    const message = () => `${text} ${unit} is beyond what such a sensor can read. Read as missing; check the unit.`;
    return { value: Number.NaN, kind: note({ code: 'out-of-range', severity: 'error', message }) };
  }
}
