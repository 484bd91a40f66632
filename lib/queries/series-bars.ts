import { dayStartMs } from '../db/days';
import { slotsInside } from './result-slices';
import type { PeriodMs } from './period';

/** How several feeders of one role become one series: flows and powers add up, everything else averages. */
export type Combine = 'sum' | 'mean';

/** One stretch of equally spaced values of a feeder: a day block, or the 24 hours of its bands. */
export interface Stretch {
  day: string;
  stepMinutes: number;
  lo: Float32Array;
  mean: Float32Array;
  hi: Float32Array;
}

/**
 * Thins a series to bars: the least, the mean and the greatest of the values that begin inside each bar, NaN where there is none.
 * Stretches have to come in order of time.
 *
 * Shapes  `edges` has one entry more than there are bars; the three results have one entry a bar.
 */
export class SeriesBars {
  readonly lo: Float64Array;
  readonly mean: Float64Array;
  readonly hi: Float64Array;
  private readonly counts: Uint32Array;
  private bar = 0;

  constructor(
    private readonly edges: readonly number[],
    private readonly period: PeriodMs,
  ) {
    const bars = edges.length - 1;
    this.lo = new Float64Array(bars).fill(Number.NaN);
    this.mean = new Float64Array(bars);
    this.hi = new Float64Array(bars).fill(Number.NaN);
    this.counts = new Uint32Array(bars);
  }

  add({ day, stepMinutes, lo, mean, hi }: Stretch): void {
    const start = dayStartMs(day);
    const { first, end } = slotsInside(start, stepMinutes, mean.length, this.period);
    for (let slot = first; slot < end; slot++) {
      const value = mean[slot] ?? Number.NaN;
      if (Number.isNaN(value)) continue;
      const at = start + slot * stepMinutes * 60_000;
      while (at >= (this.edges[this.bar + 1] ?? Infinity)) this.bar++;
      const bar = this.bar;
      this.mean[bar] = (this.mean[bar] ?? 0) + value;
      this.counts[bar] = (this.counts[bar] ?? 0) + 1;
      const least = lo[slot] ?? Number.NaN;
      const greatest = hi[slot] ?? Number.NaN;
      if (!(least >= (this.lo[bar] ?? Number.NaN))) this.lo[bar] = least;
      if (!(greatest <= (this.hi[bar] ?? Number.NaN))) this.hi[bar] = greatest;
    }
  }

  /** Sums become means; call once, after the last stretch. */
  finish(): this {
    this.mean.forEach((sum, bar) => {
      const count = this.counts[bar] ?? 0;
      this.mean[bar] = count === 0 ? Number.NaN : sum / count;
    });
    return this;
  }
}

/**
 * The feeders of a role on one day as one: added up, a missing one making the sum missing (never the sum of the rest), or
 * averaged over those that are there. `absent` counts feeders that have values in the period but none on this day.
 */
export function combineFeeders(feeders: readonly Stretch[], how: Combine, absent: number): Stretch | null {
  const [first] = feeders;
  if (!first || (how === 'sum' && absent > 0)) return null;
  if (feeders.length === 1) return first;
  const merged = (pick: (feeder: Stretch) => Float32Array) =>
    first.mean.map((_, slot) =>
      combined(
        feeders.map((feeder) => pick(feeder)[slot] ?? Number.NaN),
        how,
      ),
    );
  return {
    day: first.day,
    stepMinutes: first.stepMinutes,
    // Of a sum only bounds are known: the feeders need not have been low at the same minute.
    lo: merged((feeder) => feeder.lo),
    mean: merged((feeder) => feeder.mean),
    hi: merged((feeder) => feeder.hi),
  };
}

function combined(values: readonly number[], how: Combine): number {
  let sum = 0;
  let count = 0;
  for (const value of values) {
    if (Number.isNaN(value)) {
      if (how === 'sum') return Number.NaN;
      continue;
    }
    sum += value;
    count++;
  }
  return how === 'sum' ? sum : sum / count;
}
