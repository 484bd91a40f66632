import { TREND_UNITS, type Quantity, type TrendUnitId } from '../units';
import { quoted, type ProblemLog } from './problems';
import { unitOfText } from './unit-text';

/** A cell that holds nothing: the point was not logged at that time. Told apart from NaN, a reading that is missing. */
export const BLANK = Number.POSITIVE_INFINITY;

/** What programs write where there is no reading. Lower case. */
const MISSING_WORDS = new Set([
  'bad',
  'nan',
  '-nan',
  'na',
  'n/a',
  'nil',
  'none',
  'null',
  'no data',
  'nodata',
  'no value',
  'missing',
  '-',
  '--',
  '---',
  '----',
  '*',
  '**',
  '***',
  '****',
  '*****',
  '?',
  '#n/a',
  '#na',
  '#value!',
  '#ref!',
  '#div/0!',
  '#num!',
  '#name?',
  'inf',
  '-inf',
  'infinity',
  '-infinity',
  'fault',
  'down',
  'offline',
  'comm fail',
  'unknown',
  'undefined',
]);

const ON_WORDS = new Set([
  'on',
  'true',
  'running',
  'run',
  'yes',
  'active',
  'enabled',
  'enable',
  'started',
  'start',
  'open',
  'opened',
  'ein',
  'an',
]);
const OFF_WORDS = new Set([
  'off',
  'false',
  'stopped',
  'stop',
  'no',
  'inactive',
  'disabled',
  'disable',
  'closed',
  'close',
  'aus',
  'idle',
]);

/** Numbers that loggers write in place of a reading, all below FAST_LOW. Common practice, no source. */
const SENTINELS = new Set([-999, -999.9, -9999, -9999.9, -99999, -32768, -3276.8]);

/** Numbers above this need no comparison with the placeholders. */
const FAST_LOW = -900;

/** Beyond these no sensor of the trade reads; in the stored unit. Common practice, no source. */
const PHYSICAL_LIMITS: Readonly<Record<Quantity, readonly [low: number, high: number]>> = {
  temperature: [-90, 300],
  flow: [-500_000, 500_000],
  power: [-1_000_000, 1_000_000],
  percent: [-250, 250],
  status: [0, 1],
  pressure: [-1000, 5000],
};

/** What a sensor can read, in a file's unit. Every conversion is a straight line, so the limits can be carried back. */
export function readableRange(unit: TrendUnitId): readonly [low: number, high: number] {
  const { quantity, toStored } = TREND_UNITS[unit];
  const atZero = toStored(0);
  const slope = toStored(1) - atZero;
  const [low, high] = PHYSICAL_LIMITS[quantity];
  return [(low - atZero) / slope, (high - atZero) / slope];
}

export const isMissingWord = (trimmed: string): boolean => MISSING_WORDS.has(trimmed.toLowerCase());
/** 1 for on, 0 for off, NaN for another word. A state may be followed by its number: "On (1)". */
export function stateOfWord(trimmed: string): number {
  const word = trimmed.toLowerCase().replace(/\s*\(\d\)$/, '');
  if (ON_WORDS.has(word)) return 1;
  return OFF_WORDS.has(word) ? 0 : Number.NaN;
}
export const isSentinel = (value: number): boolean => SENTINELS.has(value);

/** Digits in groups of three, parted by one and the same mark, then perhaps a decimal mark and more digits. */
const GROUPED = /^([-+]?\d{1,3})(?:([,.' \u00a0\u202f\u2019])\d{3})(?:\2\d{3})*(?:([.,])\d*)?$/;
const WITH_UNIT = /^([-+]?[\d.,]+(?:[eE][-+]?\d+)?)\s*([°º]?\s?[a-zA-Z%³²/]+[a-zA-Z0-9³/]*)$/;
/** A point's state in braces behind its value: `44.2 {ok}`. */
const QUALITY = /\s*\{([^{}]*)\}\s*$/;
const GOOD_QUALITY = new Set(['', 'ok', 'good', 'overridden', 'unackedalarm', 'alarm']);
/** What unary plus reads but people do not write: hexadecimal and the like. */
const PLAIN = /^[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?$/;

/**
 * A number as people write it, with grouped thousands, the file's decimal sign and perhaps a unit behind.
 * NaN when the text is no number.
 */
export function numberOfText(trimmed: string, decimal: '.' | ','): number {
  const text = decimal === ',' ? trimmed.replace(',', '.') : trimmed;
  if (PLAIN.test(text) && !(decimal === ',' && groupsWithDots(trimmed))) return +text;
  const grouped = GROUPED.exec(trimmed);
  if (grouped && grouped[2] !== decimal && (grouped[3] === undefined || grouped[3] === decimal)) {
    const bare = trimmed.replaceAll(grouped[2]!, '');
    return +(decimal === ',' ? bare.replace(',', '.') : bare);
  }
  const united = WITH_UNIT.exec(trimmed);
  return united && unitOfText(united[2]!) ? numberOfText(united[1]!, decimal) : Number.NaN;
}

/** With a decimal comma `1.234` is one thousand and so on. */
const groupsWithDots = (text: string): boolean => /^[-+]?\d{1,3}(\.\d{3})+$/.test(text);

/** Reads the cells of one column to numbers in the file's unit, and says what could not be read. */
export class ValueReader {
  /** What a sensor can read, in the file's unit. */
  private readonly low: number;
  private readonly high: number;
  private readonly fastLow: number;
  private readonly isStatus: boolean;

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
    const { column } = this;
    const state = QUALITY.exec(cell);
    if (state && !GOOD_QUALITY.has(state[1]!.toLowerCase())) {
      const message = () => `${quoted(cell)} is marked "${state[1]}". Read as missing.`;
      this.problems.add({
        code: 'bad-quality',
        severity: 'warning',
        row,
        column,
        detail: state[1]!.toLowerCase(),
        message,
      });
      return Number.NaN;
    }
    const text = (state ? cell.slice(0, state.index) : cell).trim();
    if (text === '') {
      const message = () => 'The cell is empty. Read as missing.';
      this.problems.add({ code: 'empty-cell', severity: 'warning', row, column, message });
      return BLANK;
    }
    const value = numberOfText(text, this.decimal);
    if (!Number.isNaN(value)) return this.checked(value, text, row);
    if (this.isStatus) {
      const onOrOff = stateOfWord(text);
      if (!Number.isNaN(onOrOff)) return onOrOff;
    }
    if (isMissingWord(text)) {
      const message = () => `${quoted(text)} stands for no reading. Read as missing.`;
      this.problems.add({
        code: 'missing-word',
        severity: 'warning',
        row,
        column,
        detail: text.toLowerCase(),
        message,
      });
    } else {
      const what = this.isStatus ? 'neither on nor off' : 'not a number';
      const message = () => `${quoted(text)} is ${what}. Read as missing.`;
      this.problems.add({ code: 'not-a-number', severity: 'error', row, column, detail: text.toLowerCase(), message });
    }
    return Number.NaN;
  }

  private checked(value: number, text: string, row: number): number {
    const { column } = this;
    if (isSentinel(value)) {
      const message = () => `${text} is what loggers write in place of a reading. Read as missing.`;
      this.problems.add({ code: 'placeholder', severity: 'warning', row, column, detail: text, message });
      return Number.NaN;
    }
    if (value >= this.low && value <= this.high) return value;
    if (this.isStatus && value > 1) {
      const message = () => `${text} is neither 0 nor 1. Read as on.`;
      this.problems.add({ code: 'status-number', severity: 'warning', row, column, detail: text, message });
      return 1;
    }
    const unit = TREND_UNITS[this.unit].label;
    const message = () => `${text} ${unit} is beyond what such a sensor can read. Read as missing; check the unit.`;
    this.problems.add({ code: 'out-of-range', severity: 'error', row, column, message });
    return Number.NaN;
  }
}
