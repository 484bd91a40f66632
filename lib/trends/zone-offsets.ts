import { tzOffset } from '@date-fns/tz';
import { DAY_MS, MINUTE_MS, SECOND_MS } from './timestamps';

/** Days remembered before the memory of them is emptied: ten years, far more than any usual file. */
const MOST_DAYS = 3700;

/** A distance is the usual one when it differs from it by at most this share. */
const STEP_SLACK = 0.1;
/** A file that never went back in this many rows is taken to be in order. */
const ORDERLY_ROWS = 20;
/** The order of a file is not known in its very first rows. */
const ROWS_BEFORE_ORDER = 3;

/** A change of the clocks: at `atMs` the offset goes from `beforeMs` to `afterMs`. */
interface Change {
  atMs: number;
  beforeMs: number;
  afterMs: number;
}

/** How a local wall time stood to the clock changes. */
export type LocalKind = 'plain' | 'repeated' | 'missing';

const offsetMsAt = (timeZone: string, utcMs: number): number =>
  Math.round(tzOffset(timeZone, new Date(utcMs)) * MINUTE_MS);

/**
 * Local wall times of one zone to UTC, one by one in the order of the file.
 *
 * The repeated hour of autumn: the first pass gets the earlier instant, and once the wall clock has jumped back by at
 * least half the repeated stretch (or stands still, when rows are as far apart as the stretch is long; or by more than a
 * usual step in a file that was in order so far) the rows that follow get the later one. A row that lies one usual step
 * behind its predecessor when read as the later one, and not when read as the earlier, is of the later pass at once. In a
 * file with the newest row first it is the other way round. Rows of several points that repeat each other's times need a
 * clock each: see `another`.
 * The missing hour of spring: the wall time is read with the offset from before the change, as a clock that was not yet
 * put forward showed it: 02:30 becomes 03:30.
 *
 * Offsets are asked of Intl only twice for each local day met, and in a search when they differ.
 * Throws  RangeError when the zone is not known.
 */
export class LocalClock {
  /** What the last wall time given to `toUtc` was. */
  kind: LocalKind = 'plain';

  private dayNow = Number.NaN;
  private offsetNow = 0;
  private changeNow: Change | null = null;
  private overlapNow = Number.NaN;
  private lastLocalMs = Number.NaN;
  private lastUtcMs = Number.NaN;
  private later = false;
  private moves = 0;
  private backMoves = 0;

  constructor(
    readonly timeZone: string,
    private readonly days = new Map<number, number | Change>(),
  ) {
    if (Number.isNaN(tzOffset(timeZone, new Date(0))))
      throw new RangeError(`LocalClock: unknown time zone "${timeZone}"`);
  }

  /** `newestFirst` and `usualStepMs` (0 = not yet known) are what the file has shown so far. */
  toUtc(localMs: number, newestFirst: boolean, usualStepMs: number): number {
    const day = Math.floor(localMs / DAY_MS);
    if (day !== this.dayNow) this.enterDay(day);
    const { changeNow } = this;
    let utcMs: number;
    if (changeNow === null) {
      this.kind = 'plain';
      utcMs = localMs - this.offsetNow;
    } else utcMs = this.nearChange(localMs, changeNow, newestFirst, usualStepMs);
    if (utcMs !== this.lastUtcMs) {
      this.moves++;
      const isBack = newestFirst ? utcMs > this.lastUtcMs : utcMs < this.lastUtcMs;
      if (isBack && this.moves > ROWS_BEFORE_ORDER) this.backMoves++;
      this.lastUtcMs = utcMs;
    }
    return utcMs;
  }

  /** A clock of the same zone for another point of the file, with passes of its own. */
  another(): LocalClock {
    return new LocalClock(this.timeZone, this.days);
  }

  /** Offset of a UTC instant, for turning it into wall time again. */
  offsetMs(utcMs: number): number {
    return offsetMsAt(this.timeZone, utcMs);
  }

  private enterDay(day: number): void {
    let found = this.days.get(day);
    if (found === undefined) {
      found = this.lookUp(day);
      if (this.days.size >= MOST_DAYS) this.days.clear();
      this.days.set(day, found);
    }
    this.dayNow = day;
    this.offsetNow = typeof found === 'number' ? found : 0;
    this.changeNow = typeof found === 'number' ? null : found;
  }

  /** One offset for the whole local day, or the change within a day of it. */
  private lookUp(day: number): number | Change {
    let low = (day - 1) * DAY_MS;
    let high = (day + 2) * DAY_MS;
    const beforeMs = offsetMsAt(this.timeZone, low);
    const afterMs = offsetMsAt(this.timeZone, high);
    if (beforeMs === afterMs) return beforeMs;
    while (high - low > SECOND_MS) {
      const middle = Math.floor((low + high) / 2 / SECOND_MS) * SECOND_MS;
      if (offsetMsAt(this.timeZone, middle) === beforeMs) low = middle;
      else high = middle;
    }
    return { atMs: high, beforeMs, afterMs };
  }

  private nearChange(localMs: number, change: Change, newestFirst: boolean, usualStepMs: number): number {
    const earlier = localMs - change.beforeMs;
    const later = localMs - change.afterMs;
    const earlierHolds = earlier < change.atMs;
    const laterHolds = later >= change.atMs;
    if (earlierHolds !== laterHolds) {
      this.kind = 'plain';
      this.overlapNow = Number.NaN;
      return earlierHolds ? earlier : later;
    }
    if (!earlierHolds) {
      this.kind = 'missing';
      this.overlapNow = Number.NaN;
      return earlier;
    }
    this.kind = 'repeated';
    this.choosePass(localMs, change, newestFirst, usualStepMs);
    return this.later ? later : earlier;
  }

  private choosePass(localMs: number, change: Change, newestFirst: boolean, usualStepMs: number): void {
    const stretchMs = change.beforeMs - change.afterMs;
    if (this.overlapNow !== change.atMs) {
      this.overlapNow = change.atMs;
      this.later = newestFirst;
      if (this.fitsOtherPass(localMs, change, newestFirst, usualStepMs)) this.later = !newestFirst;
    } else if (this.later === newestFirst) {
      const jumpMs = newestFirst ? localMs - this.lastLocalMs : this.lastLocalMs - localMs;
      const orderly = this.moves >= ORDERLY_ROWS && this.backMoves === 0 && usualStepMs > 0;
      const jumped = jumpMs >= stretchMs / 2 || (jumpMs === 0 && usualStepMs >= stretchMs);
      if (jumped || (orderly && jumpMs > usualStepMs)) this.later = !newestFirst;
      else if (this.fitsOtherPass(localMs, change, newestFirst, usualStepMs)) this.later = !newestFirst;
    }
    this.lastLocalMs = localMs;
  }

  /** Whether only as part of the pass that comes second in the file the row lies one usual step from the row before. */
  private fitsOtherPass(localMs: number, change: Change, newestFirst: boolean, usualStepMs: number): boolean {
    const earlier = localMs - change.beforeMs - this.lastUtcMs;
    const later = localMs - change.afterMs - this.lastUtcMs;
    const fits = (distanceMs: number) => Math.abs(distanceMs - usualStepMs) <= usualStepMs * STEP_SLACK;
    if (usualStepMs <= 0) return false;
    return newestFirst ? fits(-earlier) && !fits(-later) : fits(later) && !fits(earlier);
  }
}
