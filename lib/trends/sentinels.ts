import { TREND_UNITS, type TrendUnitId } from '../units';
import { readableRange } from './cell-text';

/** Largest numbers of 8, 15, 16, 31 and 32 bits and their neighbours: what a register shows that holds nothing. */
const REGISTER_LIMITS = new Set([255, 32_767, 32_768, 65_535, 65_536, 2_147_483_647, 2_147_483_648, 4_294_967_295]);
/** Registers are scaled by these. */
const SCALES = [1, 10, 100];
/** Floats beyond this are the limits of the type, not readings. */
const FLOAT_LIMIT = 1e30;
const SAME_DIGIT = /^(\d)\1{2,}$/;
const NINES_AND_EIGHTS = /^[89]{3,}$/;
/** Relative error that a number may have picked up on its way through 32-bit floats. */
const FLOAT_NOISE = 1e-6;

/** Whether a number is written as placeholders are: 888.8, -9999, 99.99, 32767, 6553.5, 3.4e38. Common practice, no source. */
export function looksLikePlaceholder(value: number): boolean {
  const size = Math.abs(value);
  if (size >= FLOAT_LIMIT) return true;
  const digits = String(size).replace('.', '');
  if (SAME_DIGIT.test(digits) || NINES_AND_EIGHTS.test(digits)) return size !== 0;
  return SCALES.some((scale) => {
    const whole = Math.round(size * scale);
    return REGISTER_LIMITS.has(whole) && Math.abs(size * scale - whole) <= whole * FLOAT_NOISE;
  });
}

/** A value must recur this often, among at least that many other readings. Common practice, no source. */
const FEWEST_TIMES = 3;
const FEWEST_OTHERS = 20;
/** "Far outside": this many widths of the bulk beyond it. Common practice, no source. */
const FAR_WIDTHS = 2;
/** The least width of a bulk, in the stored unit: a steady column is not a reason to call 5 F away far. */
const LEAST_WIDTH: Readonly<Record<string, number>> = {
  temperature: 5,
  flow: 10,
  power: 5,
  percent: 5,
  pressure: 2,
};

/**
 * The numbers that stand in place of a reading in one column: each is written like a placeholder (or is 0 in a column
 * of temperatures), recurs to the last digit, lies over two widths of the bulk (1st to 99th percentile of the rest)
 * beyond it, and stands alone out there: no other reading lies in the outer half of the way to it.
 *
 * Shapes  any number of values; up to a few thousand say enough.
 * Units   `values` and the answer in the file's unit, which `unit` names; null when it is not known.
 * Gaps    NaN and infinite values are passed over. With under 20 other readings only what no sensor can read is named.
 */
export function detectSentinels(values: ArrayLike<number>, unit: TrendUnitId | null): number[] {
  const quantity = unit === null ? null : TREND_UNITS[unit].quantity;
  if (quantity === 'status') return [];
  const counts = new Map<number, number>();
  const others: number[] = [];
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    if (!Number.isFinite(value)) continue;
    const isCandidate = value === 0 ? quantity === 'temperature' : looksLikePlaceholder(value);
    if (isCandidate) counts.set(value, (counts.get(value) ?? 0) + 1);
    else others.push(value);
  }
  const candidates = [...counts].filter(([, count]) => count >= FEWEST_TIMES).map(([value]) => value);
  if (candidates.length === 0) return [];
  const range = unit === null ? null : readableRange(unit);
  const unreadable = (value: number) => range !== null && (value < range[0] || value > range[1]);
  if (others.length < FEWEST_OTHERS) return candidates.filter(unreadable).sort((a, b) => a - b);
  const bulk = Float64Array.from(others).sort();
  const low = bulk[Math.floor(0.01 * (bulk.length - 1))]!;
  const high = bulk[Math.ceil(0.99 * (bulk.length - 1))]!;
  const width = Math.max(high - low, leastWidth(unit));
  return candidates
    .filter((value) => {
      if (unreadable(value)) return true;
      if (value > high) return value > high + FAR_WIDTHS * width && bulk.at(-1)! < (value + high) / 2;
      return value < low - FAR_WIDTHS * width && bulk[0]! > (value + low) / 2;
    })
    .sort((a, b) => a - b);
}

function leastWidth(unit: TrendUnitId | null): number {
  if (unit === null) return 0;
  const { quantity, toStored } = TREND_UNITS[unit];
  return (LEAST_WIDTH[quantity] ?? 0) / Math.abs(toStored(1) - toStored(0));
}
