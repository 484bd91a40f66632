import { tzOffset } from '@date-fns/tz';
import { DAY_MS, MINUTE_MS, SECOND_MS } from './timestamps';

/** Days remembered before the memory of them is emptied: ten years, far more than any usual file. */
const MOST_DAYS = 3700;

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
 * least half the repeated stretch (or stands still, when rows are as far apart as the stretch is long) the rows that
 * follow get the later one. In a file with the newest row first it is the other way round.
 * The missing hour of spring: the wall time is read with the offset from before the change, as a clock that was not yet
 * put forward showed it: 02:30 becomes 03:30.
 *
 * Offsets are asked of Intl only twice for each local day met, and in a search when they differ.
 * Throws  RangeError when the zone is not known.
 */
export class LocalClock {
  /** What the last wall time given to `toUtc` was. */
  kind: LocalKind = 'plain';

  private readonly days = new Map<number, number | Change>();
  private dayNow = Number.NaN;
  private offsetNow = 0;
  private changeNow: Change | null = null;
  private overlapNow = Number.NaN;
  private lastLocalMs = Number.NaN;
  private later = false;

  constructor(readonly timeZone: string) {
    if (Number.isNaN(tzOffset(timeZone, new Date(0))))
      throw new RangeError(`LocalClock: unknown time zone "${timeZone}"`);
  }

  /** `newestFirst` and `usualStepMs` (0 = not yet known) are what the file has shown so far. */
  toUtc(localMs: number, newestFirst: boolean, usualStepMs: number): number {
    const day = Math.floor(localMs / DAY_MS);
    if (day !== this.dayNow) this.enterDay(day);
    if (this.changeNow === null) {
      this.kind = 'plain';
      return localMs - this.offsetNow;
    }
    return this.nearChange(localMs, this.changeNow, newestFirst, usualStepMs);
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
    } else {
      const jumpMs = newestFirst ? localMs - this.lastLocalMs : this.lastLocalMs - localMs;
      if (jumpMs >= stretchMs / 2 || (jumpMs === 0 && usualStepMs >= stretchMs)) this.later = !newestFirst;
    }
    this.lastLocalMs = localMs;
  }
}
