/** Different distances kept count of; rarer ones beyond that are not told apart. */
const MOST_DISTANCES = 512;

/** Loggers are late by a second or two: distances are rounded to this many ms, more coarsely from two minutes on. */
const FINE_MS = 1000;
const COARSE_MS = 10_000;
const COARSE_FROM_MS = 120_000;

/** Distances under this part of the usual one are shorter, and a timer has at most this share of them. */
const SHORTER = 0.9;
const SHORTER_SHARE = 0.1;

/** A distance between rows without the logger's small delays. */
export function roundedDistance(distanceMs: number): number {
  if (distanceMs < FINE_MS) return distanceMs;
  const grain = distanceMs < COARSE_FROM_MS ? FINE_MS : COARSE_MS;
  return Math.round(distanceMs / grain) * grain;
}

/** The usual distance between rows and the order of the file, kept up as rows come. */
export class StepCounter {
  /** Most common distance so far in ms; 0 = none yet. */
  usualMs = 0;
  private usualCount = 0;
  private total = 0;
  private backward = 0;
  /** Distances clearly shorter than the usual one. */
  private shorter = 0;
  private readonly counts = new Map<number, number>();

  /** `deltaMs` from one row to the next; rows at the same time say nothing. */
  add(deltaMs: number): void {
    if (deltaMs === 0) return;
    this.total++;
    if (deltaMs < 0) this.backward++;
    const distance = roundedDistance(Math.abs(deltaMs));
    if (distance === this.usualMs) {
      this.usualCount++;
      return;
    }
    const known = this.counts.get(distance);
    if (known === undefined && this.counts.size >= MOST_DISTANCES) return;
    const count = (known ?? 0) + 1;
    this.counts.set(distance, count);
    if (distance < this.usualMs * SHORTER) this.shorter++;
    if (count > this.usualCount) {
      this.counts.set(this.usualMs, this.usualCount);
      this.usualMs = distance;
      this.usualCount = count;
      this.shorter = 0;
      for (const [other, times] of this.counts) if (other < distance * SHORTER) this.shorter += times;
    }
  }

  /** Distances met so far. */
  get distances(): number {
    return this.total;
  }

  get newestFirst(): boolean {
    return this.backward * 2 > this.total;
  }

  /** How long a reading may stand for: the usual distance, or 0 when most distances are others. */
  get holdMs(): number {
    return this.usualCount * 2 >= this.total && this.isOnTimer ? this.usualMs : 0;
  }

  /** A row that is lost makes a distance longer, never shorter: where many are shorter, rows come when something changes. */
  private get isOnTimer(): boolean {
    return this.shorter <= this.total * SHORTER_SHARE;
  }

  /** Whether rows come at a regular distance at all: at least half of them, and at least two. */
  get isRegular(): boolean {
    return this.usualCount >= 2 && this.usualCount * 2 >= this.total && this.isOnTimer;
  }
}
