import type { DayBuffer, DayTail } from './day-buffer';
import { roundedDistance } from './step';
import { DAY_MS } from './timestamps';
import { BLANK } from './values';

/** Rows this share of the plant's step apart, or more, may leave a slot empty only because the logger was early or late. */
const HOLD_FROM_SHARE = 0.9;
/** A column that is blank in some rows has a distance of its own from this many distances on. */
const FEWEST_DISTANCES = 3;

/**
 * Puts one column's readings of a UTC day on the plant's step.
 *
 * A slot [t, t + step) holds the mean of the readings in it; a status too, so that 0.4 is "on for 40 % of the slot".
 * When the column is logged at about the plant's step or more rarely, a slot without a reading holds the last reading
 * for as long as the column's own usual distance (if that covers the slot's middle), never longer and never interpolated;
 * a reading that is missing ("Bad") is missing for that long, too. The last reading of the day before may reach in.
 *
 * Shapes  `out` has one element a slot, all of which are written.
 * Units   those of the file; the caller converts.
 * Gaps    NaN where no reading reaches.
 */
export class DayAligner {
  private readonly sums: Float64Array;
  private readonly counts: Uint32Array;
  /** 1 where a slot has a row of its own, with or without a number. */
  private readonly own: Uint8Array;
  readonly slots: number;

  constructor(private readonly stepMs: number) {
    this.slots = DAY_MS / stepMs;
    this.sums = new Float64Array(this.slots);
    this.counts = new Uint32Array(this.slots);
    this.own = new Uint8Array(this.slots);
  }

  align(day: DayBuffer, column: number, usualMs: number, before: DayTail | undefined, out: Float64Array): void {
    const { sums, counts, own, stepMs } = this;
    const { columns, values, timesMs, count } = day;
    sums.fill(0);
    counts.fill(0);
    own.fill(0);
    let blanks = 0;
    for (let i = 0, at = column; i < count; i++, at += columns) {
      const value = values[at]!;
      if (value === BLANK) {
        blanks++;
        continue;
      }
      const slot = Math.floor(timesMs[i]! / stepMs);
      own[slot] = 1;
      if (value === value) {
        sums[slot]! += value;
        counts[slot]!++;
      }
    }
    for (let slot = 0; slot < out.length; slot++)
      out[slot] = counts[slot] === 0 ? Number.NaN : sums[slot]! / counts[slot]!;
    const holdMs = blanks > 0 ? (usualDistance(day, column) ?? usualMs) : usualMs;
    if (holdMs >= stepMs * HOLD_FROM_SHARE) this.hold(day, column, holdMs, before, out);
  }

  private hold(day: DayBuffer, column: number, holdMs: number, before: DayTail | undefined, out: Float64Array): void {
    const { columns, values, timesMs, count } = day;
    let lastMs = before ? before.timesMs[column]! - DAY_MS : Number.NEGATIVE_INFINITY;
    let last = before ? before.values[column]! : Number.NaN;
    let i = 0;
    for (let slot = 0; slot < out.length; slot++) {
      const startMs = slot * this.stepMs;
      for (; i < count && timesMs[i]! < startMs; i++) {
        const value = values[i * columns + column]!;
        if (value === BLANK) continue;
        last = value;
        lastMs = timesMs[i]!;
      }
      if (this.own[slot] === 0 && startMs + this.stepMs / 2 < lastMs + holdMs) out[slot] = last;
    }
  }
}

/** The most common distance between the rows in which a column is not blank; null when there are too few. */
function usualDistance(day: DayBuffer, column: number): number | null {
  const counts = new Map<number, number>();
  let lastMs = Number.NaN;
  let total = 0;
  let usual = 0;
  for (let i = 0; i < day.count; i++) {
    if (day.values[i * day.columns + column] === BLANK) continue;
    const distance = roundedDistance(day.timesMs[i]! - lastMs);
    lastMs = day.timesMs[i]!;
    if (Number.isNaN(distance)) continue;
    total++;
    const seen = (counts.get(distance) ?? 0) + 1;
    counts.set(distance, seen);
    if (seen > (counts.get(usual) ?? 0)) usual = distance;
  }
  return total < FEWEST_DISTANCES ? null : usual;
}
