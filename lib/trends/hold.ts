/** A slot must be covered by known values for at least this share of it. */
const LEAST_COVERED = 0.5;

/**
 * Time-weighted means of a value that stands until the next one comes:
 *   mean = sum(v_i * d_i) / sum(d_i), d_i the time in the slot during which v_i stood.
 *
 * Values are given in the order of time. Each stands from its time to its end, which the caller sets: the next value,
 * the longest age, or the end of the record.
 *
 * Shapes  `out` has one element a slot.
 * Units   those of the file; times in ms from the day's start, which may lie before it.
 * Gaps    a missing value (NaN) is missing for as long as it stands; a slot that known values cover for less than half is
 *         NaN. Nothing is interpolated.
 */
export class HeldMeans {
  private readonly first: Float64Array;
  /** Sum of (value - first) * ms: the mean of one steady value is that value to the last bit. */
  private readonly beyondFirst: Float64Array;
  private readonly coveredMs: Float64Array;

  constructor(
    private readonly slots: number,
    private readonly stepMs: number,
  ) {
    this.first = new Float64Array(slots);
    this.beyondFirst = new Float64Array(slots);
    this.coveredMs = new Float64Array(slots);
  }

  start(): void {
    this.beyondFirst.fill(0);
    this.coveredMs.fill(0);
  }

  /** Lets a value stand in [fromMs, toMs). */
  stand(value: number, fromMs: number, toMs: number): void {
    if (value !== value) return;
    const { first, beyondFirst, coveredMs, stepMs } = this;
    let atMs = Math.max(0, fromMs);
    const endMs = Math.min(toMs, this.slots * stepMs);
    for (let slot = Math.floor(atMs / stepMs); atMs < endMs; slot++) {
      const leftMs = Math.min(endMs, (slot + 1) * stepMs);
      const lengthMs = leftMs - atMs;
      if (coveredMs[slot] === 0) first[slot] = value;
      else beyondFirst[slot]! += (value - first[slot]!) * lengthMs;
      coveredMs[slot]! += lengthMs;
      atMs = leftMs;
    }
  }

  write(out: Float64Array): void {
    for (let slot = 0; slot < out.length; slot++) {
      const covered = this.coveredMs[slot]!;
      out[slot] =
        covered < this.stepMs * LEAST_COVERED ? Number.NaN : this.first[slot]! + this.beyondFirst[slot]! / covered;
    }
  }
}
