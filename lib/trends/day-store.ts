import { TREND_UNITS, type TrendUnitId } from '../units';
import { DayAligner } from './align';
import { DayBuffer, tailOf, type DayTail } from './day-buffer';
import { noteGap, type StampWriter } from './gaps';
import { mannerOf, NOT_SEEN, seenOf, type Manner, type Pace, type Seen } from './hold-manner';
import { durationText, type ProblemLog } from './problems';
import type { StepCounter } from './step';
import { DAY_MS, MINUTE_MS } from './timestamps';
import { TrendError, type DayOfColumn } from './types';

/** More days than this in one file (54 years): the time is read wrongly, and would fill the memory. */
const MOST_DAYS = 20_000;
/** Closed days whose last readings are kept although the day after is closed, too: it may come again. */
const MOST_TAILS = 64;
/** No day is closed before this many distances are known, unless this many days are open already. */
const FEWEST_TO_LEARN = 8;
const MOST_WAITING_DAYS = 8;

interface DaySpan {
  firstMs: number;
  firstRow: number;
  lastMs: number;
  /** Whether a column was held on it. */
  held: boolean;
}

/** What a closed day leaves for the next: its last readings and what it shows of each column. */
interface ClosedDay {
  tail: DayTail;
  seen: Seen[];
}

/** What the store has to know of each column it keeps. */
export interface StoredColumn {
  /** Index into ReadPlan.columns. */
  plan: number;
  unit: TrendUnitId;
  /** The column's name, for problems. */
  name?: string;
  /** The column has rows of its own, as a point of a long file has: few rows mean few changes then. */
  ownRows?: boolean;
}

/**
 * The open days of a file: rows go in, aligned days come out. A day that gets rows after it was handed out is opened
 * again and handed out as a further part, with a warning; held values do not reach into such a part.
 *
 * Where no day is opened again, the answer does not depend on when days are taken. Days without rows into which a value
 * reaches are handed out by `takeAll`.
 */
export class DayStore {
  samplesStored = 0;
  private readonly open = new Map<number, DayBuffer>();
  private readonly spans = new Map<number, DaySpan>();
  private readonly closed = new Map<number, ClosedDay>();
  private readonly aligner: DayAligner;
  private readonly scratch: Float64Array;
  private dayNow = Number.NaN;
  private bufferNow: DayBuffer | null = null;
  private lastMs = Number.NEGATIVE_INFINITY;
  /** The first pace that rests on enough rows: it counts for the days before, too. */
  private firstPace: Pace | null = null;

  constructor(
    private readonly columns: readonly StoredColumn[],
    stepMinutes: number,
    private readonly step: StepCounter,
    private readonly problems: ProblemLog,
    private readonly stamps: StampWriter,
  ) {
    this.aligner = new DayAligner(stepMinutes * MINUTE_MS);
    this.scratch = new Float64Array(this.aligner.slots);
  }

  /** Adds a row at an instant; `values` of the answer takes one number a column from `base` on. */
  base = 0;
  addRow(utcMs: number, row: number): Float64Array {
    const day = Math.floor(utcMs / DAY_MS);
    if (day !== this.dayNow || this.bufferNow === null) this.touch(day, row);
    const buffer = this.bufferNow!;
    if (utcMs > this.lastMs) this.lastMs = utcMs;
    if (this.step.distances >= FEWEST_TO_LEARN) this.learnPace(buffer);
    this.base = buffer.addRow(utcMs - day * DAY_MS, row);
    return buffer.values;
  }

  private learnPace(buffer: DayBuffer): void {
    const { isRegular, holdMs } = this.step;
    buffer.pace ??= { isRegular, holdMs };
    buffer.pace.isRegular = isRegular;
    buffer.pace.holdMs = holdMs;
    this.firstPace ??= { isRegular, holdMs };
  }

  private touch(day: number, row: number): void {
    let buffer = this.open.get(day);
    if (buffer) this.open.delete(day);
    else {
      buffer = new DayBuffer(this.columns.length);
      if (this.spans.has(day)) this.noteReopened(day, row);
      if (this.spans.size + this.open.size > MOST_DAYS) {
        const what = `The file holds more than ${MOST_DAYS.toLocaleString('en-US')} different days by row ${row}.`;
        throw new TrendError('unsupported', `${what} Check the time column and its form.`, row);
      }
    }
    // The last key is the day touched last.
    this.open.set(day, buffer);
    this.dayNow = day;
    this.bufferNow = buffer;
  }

  private noteReopened(day: number, row: number): void {
    const message = () =>
      `Rows of ${dayText(day)} come again after many other days. They were added to that day; where both hold a value, the later one is kept.`;
    this.problems.add({ code: 'day-again', severity: 'warning', row, column: this.stamps.column(), message });
  }

  /**
   * Closes the days touched longest ago beyond `keepOpen`. The day being filled stays open, and so does the one after it
   * (in a newest-first file), into which its last value reaches.
   */
  takeOldest(keepOpen: number): DayOfColumn[] {
    const taken: DayOfColumn[] = [];
    if (this.firstPace === null && this.open.size <= MOST_WAITING_DAYS) return taken;
    for (const [day, buffer] of this.open) {
      if (this.open.size <= Math.max(keepOpen, 1)) break;
      if (day === this.dayNow || day === this.dayNow + 1) break;
      this.close(day, buffer, taken);
    }
    return taken;
  }

  /**
   * Hands out everything. `untilMs` is where the file's record ends when other points go on longer than this store's
   * rows: held values reach that far. Gaps between days are reported now that all days are known.
   */
  takeAll(untilMs = Number.NEGATIVE_INFINITY): DayOfColumn[] {
    const taken: DayOfColumn[] = [];
    this.lastMs = Math.max(this.lastMs, untilMs);
    for (const [day, buffer] of this.open) this.close(day, buffer, taken);
    for (const day of [...this.closed.keys()]) {
      if (!this.spans.has(day + 1)) this.close(day + 1, new DayBuffer(this.columns.length), taken);
    }
    const days = [...this.spans].sort(([a], [b]) => a - b);
    for (let i = 1; i < days.length; i++) {
      const before = days[i - 1]![1];
      const after = days[i]![1];
      const held = before.held || after.held;
      noteGap(this.problems, this.step, this.stamps, before.lastMs, after.firstMs, after.firstRow, held);
    }
    return taken;
  }

  private close(day: number, buffer: DayBuffer, taken: DayOfColumn[]): void {
    buffer.settle((timeMs, row, differs) => this.noteTwice(day * DAY_MS + timeMs, row, differs));
    const pace = buffer.pace ?? this.firstPace ?? this.step;
    const isAgain = this.spans.has(day);
    const dayBefore = this.open.get(day - 1);
    const closedBefore = this.closed.get(day - 1);
    const before = dayBefore ? tailOf(dayBefore) : closedBefore?.tail;
    const seen: Seen[] = [];
    let held = false;
    this.columns.forEach((stored, column) => {
      const own = buffer.count === 0 ? NOT_SEEN : seenOf(buffer, column, pace);
      seen.push(own);
      const seenBefore = dayBefore ? seenOf(dayBefore, column, pace) : closedBefore?.seen[column];
      const { quantity } = TREND_UNITS[stored.unit];
      const usual = mannerOf(own, seenBefore, pace, { quantity, ownRows: stored.ownRows ?? false });
      const manner: Manner = isAgain && usual.kind === 'held' ? { kind: 'regular', holdMs: 0 } : usual;
      if (manner.kind === 'held') held = true;
      const endMs = this.lastMs - day * DAY_MS;
      const tooLong = this.aligner.align(buffer, column, manner, before, endMs, this.scratch);
      if (tooLong && manner.kind === 'held')
        this.noteTooLong(day * DAY_MS + tooLong.fromMs, tooLong.row, tooLong.count, manner.ageMs, stored.name);
      this.handOut(stored, day, taken);
    });
    this.noteGapsWithin(day, buffer, held);
    this.remember(day, buffer, { tail: tailOf(buffer), seen }, held);
  }

  private handOut({ plan, unit }: StoredColumn, day: number, taken: DayOfColumn[]): void {
    const { toStored } = TREND_UNITS[unit];
    const values = new Float32Array(this.scratch.length);
    let stored = 0;
    for (let slot = 0; slot < values.length; slot++) {
      const value = this.scratch[slot]!;
      if (value === value) stored++;
      values[slot] = toStored(value);
    }
    if (stored === 0) return;
    this.samplesStored += stored;
    taken.push({ column: plan, day: dayText(day), values });
  }

  private remember(day: number, buffer: DayBuffer, closed: ClosedDay, held: boolean): void {
    this.open.delete(day);
    if (day === this.dayNow) this.bufferNow = null;
    if (buffer.count === 0) return;
    this.closed.set(day, closed);
    for (const older of this.closed.keys()) {
      if (this.closed.size <= MOST_TAILS) break;
      // A day whose next one has not come keeps its last readings: they may reach into it.
      if (this.spans.has(older + 1)) this.closed.delete(older);
    }
    const firstMs = day * DAY_MS + buffer.timesMs[0]!;
    const lastMs = day * DAY_MS + buffer.timesMs[buffer.count - 1]!;
    const known = this.spans.get(day);
    const earlier = known && known.firstMs <= firstMs;
    this.spans.set(day, {
      firstMs: earlier ? known.firstMs : firstMs,
      firstRow: earlier ? known.firstRow : buffer.rows[0]!,
      lastMs: known ? Math.max(known.lastMs, lastMs) : lastMs,
      held: held || (known?.held ?? false),
    });
  }

  private noteGapsWithin(day: number, buffer: DayBuffer, held: boolean): void {
    for (let i = 1; i < buffer.count; i++) {
      const fromMs = buffer.timesMs[i - 1]!;
      const toMs = buffer.timesMs[i]!;
      if (toMs - fromMs <= this.step.usualMs) continue;
      noteGap(this.problems, this.step, this.stamps, day * DAY_MS + fromMs, day * DAY_MS + toMs, buffer.rows[i]!, held);
    }
  }

  private noteTooLong(fromMs: number, row: number, count: number, ageMs: number, column: string | undefined): void {
    const message = () =>
      `No new value came within ${durationText(ageMs)} after ${this.stamps.text(fromMs)}. Left empty from then to the next value; let the logger also write once an hour when nothing changes.`;
    this.problems.add({ code: 'held-too-long', severity: 'warning', row, column, count, message });
  }

  private noteTwice(utcMs: number, row: number, differs: boolean): void {
    const code = differs ? 'time-twice' : 'row-twice';
    const message = () =>
      differs
        ? `${this.stamps.text(utcMs)} comes twice with other values. The later row is kept.`
        : `${this.stamps.text(utcMs)} comes twice with the same values. Counted once.`;
    this.problems.add({ code, severity: 'warning', row, column: this.stamps.column(), message });
  }
}

/** A UTC day by its number since 1970-01-01, as YYYY-MM-DD. */
const dayText = (day: number): string => new Date(day * DAY_MS).toISOString().slice(0, 10);
