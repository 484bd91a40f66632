import type { TrendUnitId } from '../../units';
import { isMissingWord, isSentinel, numberOfText, readableRange, stateOfWord } from '../cell-text';

/** What the values of one column look like, in the file's unit. */
export interface ColumnStatistics {
  /** One a data row; NaN where there is no reading. On and off words are 1 and 0. */
  values: Float64Array;
  /** How many are numbers. */
  count: number;
  /** Cells that are words without a meaning here. */
  words: number;
  /** On and off words. */
  stateWords: number;
  low: number;
  high: number;
  median: number;
  /** 5th and 95th percentile. */
  p05: number;
  p95: number;
  /** Only 0 and 1. */
  binary: boolean;
  /** All whole numbers. */
  whole: boolean;
  /** Never falls and mostly rises: a running total or a row counter. */
  onlyRises: boolean;
}

/** A total rises in more than this share of rows. */
const RISING_SHARE = 0.3;
const FEWEST_FOR_TOTAL = 12;

/** `unit`, where it is named, keeps out numbers that no sensor reads, which loggers write for broken ones. */
export function columnStatistics(
  cells: readonly string[],
  decimal: '.' | ',',
  unit: TrendUnitId | null = null,
): ColumnStatistics {
  const [lowest, highest] = unit ? readableRange(unit) : [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  const values = new Float64Array(cells.length).fill(Number.NaN);
  let words = 0;
  let stateWords = 0;
  cells.forEach((cell, i) => {
    const text = cell.replace(/\s*\{[^{}]*\}\s*$/, '').trim();
    if (text === '') return;
    const number = numberOfText(text, decimal);
    if (!Number.isNaN(number)) {
      if (!isSentinel(number) && number >= lowest && number <= highest) values[i] = number;
      return;
    }
    const state = stateOfWord(text);
    if (!Number.isNaN(state)) {
      stateWords++;
      values[i] = state;
    } else if (!isMissingWord(text)) words++;
  });
  return { values, words, stateWords, ...summary(values) };
}

function summary(values: Float64Array): Omit<ColumnStatistics, 'values' | 'words' | 'stateWords'> {
  const sorted = values.filter((value) => !Number.isNaN(value)).sort();
  const count = sorted.length;
  const at = (share: number) => (count === 0 ? Number.NaN : sorted[Math.round(share * (count - 1))]!);
  let rises = 0;
  let falls = 0;
  let previous = Number.NaN;
  for (const value of values) {
    if (value > previous) rises++;
    if (value < previous) falls++;
    if (!Number.isNaN(value)) previous = value;
  }
  return {
    count,
    low: at(0),
    high: at(1),
    median: at(0.5),
    p05: at(0.05),
    p95: at(0.95),
    binary: count > 0 && sorted.every((value) => value === 0 || value === 1),
    whole: sorted.every((value) => Number.isInteger(value)),
    onlyRises: count >= FEWEST_FOR_TOTAL && falls === 0 && rises > count * RISING_SHARE,
  };
}

/** Up to `most` evenly spaced values for a sparkline, null where missing. */
export function evenSamples(values: Float64Array, most: number): (number | null)[] {
  const count = Math.min(most, values.length);
  return Array.from({ length: count }, (_, i) => {
    const value = values[Math.round((i * (values.length - 1)) / Math.max(1, count - 1))]!;
    return Number.isNaN(value) ? null : value;
  });
}

/**
 * The usual size of a column's sudden steps: the median of the changes from row to row that are over half of `sizeOfOne`.
 * NaN when there are fewer than two.
 */
export function stepSize(values: Float64Array, sizeOfOne: number): number {
  const steps: number[] = [];
  for (let i = 1; i < values.length; i++) {
    const change = Math.abs(values[i]! - values[i - 1]!);
    if (change > sizeOfOne / 2) steps.push(change);
  }
  if (steps.length < 2) return Number.NaN;
  steps.sort((a, b) => a - b);
  return steps[Math.floor(steps.length / 2)]!;
}
