import { TREND_UNITS, type TrendUnitId } from '../units';
import { DayAligner } from './align';
import { DayBuffer, tailOf, type DayTail } from './day-buffer';
import { noteGap, type StampWriter } from './gaps';
import type { ProblemLog } from './problems';
import type { StepCounter } from './step';
import { DAY_MS, MINUTE_MS } from './timestamps';
import { TrendError, type DayOfColumn } from './types';

/** More days than this in one file (54 years): the time is read wrongly, and would fill the memory. */
const MOST_DAYS = 20_000;
/** Closed days whose last readings are kept for the day after. */
const MOST_TAILS = 64;

interface DaySpan {
  firstMs: number;
  firstRow: number;
  lastMs: number;
}

/** What the store has to know of each column it keeps. */
export interface StoredColumn {
  /** Index into ReadPlan.columns. */
  plan: number;
  unit: TrendUnitId;
}

/**
 * The open days of a file: rows go in, aligned days come out. A day that gets rows after it was handed out is opened
 * again and handed out as a further part, with a warning.
 */
export class DayStore {
  samplesStored = 0;
  private readonly open = new Map<number, DayBuffer>();
  private readonly spans = new Map<number, DaySpan>();
  private readonly tails = new Map<number, DayTail>();
  private readonly aligner: DayAligner;
  private readonly scratch: Float64Array;
  private dayNow = Number.NaN;
  private bufferNow: DayBuffer | null = null;

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
    this.base = buffer.addRow(utcMs - day * DAY_MS, row);
    return buffer.values;
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

  takeOldest(keepOpen: number): DayOfColumn[] {
    const taken: DayOfColumn[] = [];
    for (const [day, buffer] of this.open) {
      if (this.open.size <= keepOpen) break;
      this.close(day, buffer, taken);
    }
    return taken;
  }

  /** Hands out everything. Gaps between days are reported now that all days are known. */
  takeAll(): DayOfColumn[] {
    const taken = this.takeOldest(0);
    for (const [day, tail] of [...this.tails]) {
      const reachMs = Math.max(...tail.timesMs) + this.step.holdMs;
      if (!this.spans.has(day + 1) && reachMs > DAY_MS) this.close(day + 1, new DayBuffer(this.columns.length), taken);
    }
    const days = [...this.spans].sort(([a], [b]) => a - b);
    for (let i = 1; i < days.length; i++) {
      const before = days[i - 1]![1];
      const after = days[i]![1];
      noteGap(this.problems, this.step, this.stamps, before.lastMs, after.firstMs, after.firstRow);
    }
    return taken;
  }

  private close(day: number, buffer: DayBuffer, taken: DayOfColumn[]): void {
    buffer.settle((timeMs, row, differs) => this.noteTwice(day * DAY_MS + timeMs, row, differs));
    this.noteGapsWithin(day, buffer);
    const dayBefore = this.open.get(day - 1);
    const before = dayBefore ? tailOf(dayBefore) : this.tails.get(day - 1);
    this.columns.forEach(({ plan, unit }, column) => {
      this.aligner.align(buffer, column, this.step.holdMs, before, this.scratch);
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
    });
    this.remember(day, buffer);
  }

  private remember(day: number, buffer: DayBuffer): void {
    this.open.delete(day);
    if (day === this.dayNow) this.bufferNow = null;
    if (buffer.count === 0) return;
    this.tails.set(day, tailOf(buffer));
    for (const oldest of this.tails.keys()) {
      if (this.tails.size <= MOST_TAILS) break;
      this.tails.delete(oldest);
    }
    const firstMs = day * DAY_MS + buffer.timesMs[0]!;
    const lastMs = day * DAY_MS + buffer.timesMs[buffer.count - 1]!;
    const known = this.spans.get(day);
    const earlier = known && known.firstMs <= firstMs;
    this.spans.set(day, {
      firstMs: earlier ? known.firstMs : firstMs,
      firstRow: earlier ? known.firstRow : buffer.rows[0]!,
      lastMs: known ? Math.max(known.lastMs, lastMs) : lastMs,
    });
  }

  private noteGapsWithin(day: number, buffer: DayBuffer): void {
    for (let i = 1; i < buffer.count; i++) {
      const fromMs = buffer.timesMs[i - 1]!;
      const toMs = buffer.timesMs[i]!;
      if (toMs - fromMs <= this.step.usualMs) continue;
      noteGap(this.problems, this.step, this.stamps, day * DAY_MS + fromMs, day * DAY_MS + toMs, buffer.rows[i]!);
    }
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
