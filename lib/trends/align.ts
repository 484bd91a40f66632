import type { DayBuffer, DayTail } from './day-buffer';
import { HeldMeans } from './hold';
import type { Manner } from './hold-manner';
import { DAY_MS } from './timestamps';
import { BLANK } from './values';

/** Rows this share of the plant's step apart, or more, may leave a slot empty only because the logger was early or late. */
const HOLD_FROM_SHARE = 0.9;
/** Values that stood longer than they are believed: how many, and the first. */
export interface TooLong {
  count: number;
  fromMs: number;
  row: number;
}

/**
 * Puts one column's readings of a UTC day on the plant's step.
 *
 * A slot [t, t + step) of a regular column holds the mean of the readings in it; a status too, so that 0.4 is "on for
 * 40 % of the slot". When the column is logged at about the plant's step or more rarely, a slot without a reading holds
 * the last reading for as long as the column's usual distance (if that covers the slot's middle), never longer and never
 * interpolated; a reading that is missing ("Bad") is missing for that long, too.
 *
 * A column that is logged on change is held instead: each value stands until the next one and for its longest age at
 * most, and the slot holds its mean weighted by time (HeldMeans). A missing reading ends the value before it.
 *
 * In both, the last reading of the day before may reach in.
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
  private readonly held: HeldMeans;
  readonly slots: number;

  constructor(private readonly stepMs: number) {
    this.slots = DAY_MS / stepMs;
    this.sums = new Float64Array(this.slots);
    this.counts = new Uint32Array(this.slots);
    this.own = new Uint8Array(this.slots);
    this.held = new HeldMeans(this.slots, stepMs);
  }

  /**
   * Writes the slots of one column. `endMs` is where the file's record ends, from the day's start: a held value does not
   * reach beyond the slot of that time. Answers with the values whose age ran out on this day before a newer one came.
   */
  align(
    day: DayBuffer,
    column: number,
    manner: Manner,
    before: DayTail | undefined,
    endMs: number,
    out: Float64Array,
  ): TooLong | null {
    if (manner.kind === 'held') return this.alignHeld(day, column, manner.ageMs, before, endMs, out);
    this.alignRegular(day, column, manner.holdMs, before, out);
    return null;
  }

  private alignRegular(
    day: DayBuffer,
    column: number,
    holdMs: number,
    before: DayTail | undefined,
    out: Float64Array,
  ): void {
    const { sums, counts, own, stepMs } = this;
    const { columns, values, timesMs, count } = day;
    sums.fill(0);
    counts.fill(0);
    own.fill(0);
    for (let i = 0, at = column; i < count; i++, at += columns) {
      const value = values[at]!;
      if (value === BLANK) continue;
      const slot = Math.floor(timesMs[i]! / stepMs);
      own[slot] = 1;
      if (value === value) {
        sums[slot]! += value;
        counts[slot]!++;
      }
    }
    for (let slot = 0; slot < out.length; slot++)
      out[slot] = counts[slot] === 0 ? Number.NaN : sums[slot]! / counts[slot]!;
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

  private alignHeld(
    day: DayBuffer,
    column: number,
    ageMs: number,
    before: DayTail | undefined,
    endMs: number,
    out: Float64Array,
  ): TooLong | null {
    const { columns, values, timesMs, rows, count } = day;
    const untilMs = (Math.floor(endMs / this.stepMs) + 1) * this.stepMs;
    let tooLong: TooLong | null = null;
    let value = before ? before.values[column]! : Number.NaN;
    let fromMs = before ? before.timesMs[column]! - DAY_MS : Number.NEGATIVE_INFINITY;
    let row = before ? before.rows[column]! : 0;
    const stand = (nextMs: number) => {
      const oldMs = fromMs + ageMs;
      this.held.stand(value, fromMs, Math.min(nextMs, oldMs, untilMs));
      if (value !== value || oldMs >= Math.min(nextMs, untilMs) || oldMs < 0 || oldMs >= DAY_MS) return;
      if (tooLong) tooLong.count++;
      else tooLong = { count: 1, fromMs, row };
    };
    this.held.start();
    for (let i = 0; i < count; i++) {
      const next = values[i * columns + column]!;
      if (next === BLANK) continue;
      stand(timesMs[i]!);
      value = next;
      fromMs = timesMs[i]!;
      row = rows[i]!;
    }
    stand(Number.POSITIVE_INFINITY);
    this.held.write(out);
    return tooLong;
  }
}
