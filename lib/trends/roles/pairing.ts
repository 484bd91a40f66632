import { TREND_UNITS } from '../../units';
import type { Draft } from './draft';

/** A value of another column counts for an instant when it is at most this many of its own steps old. */
const STEPS_HELD = 2;
const LEAST_HELD_MS = 10 * 60_000;
/** Fewest rows in which two columns can be compared. */
export const FEWEST_ROWS = 24;

export interface Ordered {
  timesMs: Float64Array;
  values: Float64Array;
  heldMs: number;
}
const ordered = new WeakMap<Draft, Ordered>();

/**
 * Values of `other` at the rows of `draft`: its own where both stand in one table, else the last before each instant, not
 * older than two usual steps.
 *
 * Gaps  NaN where there is none. null where the rows cannot be matched (different tables, no times).
 */
export function alignedTo(draft: Draft, other: Draft): Float64Array | null {
  if (draft === other) return draft.statistics.values;
  if (draft.timesMs === null || other.timesMs === null)
    return draft.timesMs === other.timesMs && draft.table === other.table ? other.statistics.values : null;
  if (draft.timesMs === other.timesMs) return other.statistics.values;
  const { timesMs, values, heldMs } = inOrder(other);
  return draft.timesMs.map((ms) => {
    let low = 0;
    let high = timesMs.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (timesMs[middle]! <= ms) low = middle + 1;
      else high = middle;
    }
    return low > 0 && ms - timesMs[low - 1]! <= heldMs ? values[low - 1]! : Number.NaN;
  });
}

/** A column's values by time, and how long one holds. */
export function inOrder(draft: Draft): Ordered {
  const before = ordered.get(draft);
  if (before) return before;
  const times = draft.timesMs!;
  const { values } = draft.statistics;
  const sorted = times.every((ms, i) => i === 0 || ms >= times[i - 1]!);
  let result: Ordered = { timesMs: times, values, heldMs: 0 };
  if (!sorted) {
    const order = Array.from(times, (_, i) => i).sort((a, b) => times[a]! - times[b]!);
    result = {
      timesMs: Float64Array.from(order, (i) => times[i]!),
      values: Float64Array.from(order, (i) => values[i] ?? Number.NaN),
      heldMs: 0,
    };
  }
  const steps = result.timesMs
    .slice(1)
    .map((ms, i) => ms - result.timesMs[i]!)
    .filter((ms) => ms > 0)
    .sort();
  result.heldMs = Math.max(LEAST_HELD_MS, STEPS_HELD * (steps[steps.length >> 1] ?? 0));
  ordered.set(draft, result);
  return result;
}

/** A value of a column in the unit kept inside (deg F, gpm, kW, %). */
export const stored = (draft: Draft, value: number): number =>
  draft.unit ? TREND_UNITS[draft.unit].toStored(value) : value;

/** A factor from the column's unit to the one kept inside, for quantities without an offset. */
export const factorOf = (draft: Draft): number => stored(draft, 1) - stored(draft, 0);

/** Median of the numbers among `values`; NaN when there are none. */
export function medianOf(values: ArrayLike<number>): number {
  const sorted = Float64Array.from(values)
    .filter((value) => !Number.isNaN(value))
    .sort();
  return sorted.length === 0 ? Number.NaN : sorted[sorted.length >> 1]!;
}

/** Pearson's correlation over the rows where both are numbers, two passes; NaN with too few rows or no change. */
export function correlationOf(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let count = 0;
  let sumA = 0;
  let sumB = 0;
  for (let i = 0; i < a.length; i++) {
    if (Number.isNaN(a[i]! + b[i]!)) continue;
    count++;
    sumA += a[i]!;
    sumB += b[i]!;
  }
  if (count < FEWEST_ROWS) return Number.NaN;
  let ab = 0;
  let aa = 0;
  let bb = 0;
  for (let i = 0; i < a.length; i++) {
    const da = a[i]! - sumA / count;
    const db = b[i]! - sumB / count;
    if (Number.isNaN(da + db)) continue;
    ab += da * db;
    aa += da * da;
    bb += db * db;
  }
  return aa > 0 && bb > 0 ? ab / Math.sqrt(aa * bb) : Number.NaN;
}
