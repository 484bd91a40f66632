import { TREND_UNITS, type Quantity, type TrendUnitId } from '../units';
import { unitOfText } from './unit-text';

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

/** Numbers that loggers write in place of a reading, all below -900. Common practice, no source. */
const SENTINELS = new Set([-999, -999.9, -9999, -9999.9, -99999, -32768, -3276.8]);

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
