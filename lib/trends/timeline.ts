import { DayStore, type StoredColumn } from './day-store';
import { StampWriter } from './gaps';
import type { ProblemLog } from './problems';
import { StepCounter } from './step';
import { stampText } from './stamp-text';
import { shiftOf } from './time-stamps';
import { MINUTE_MS, type StampParser } from './timestamps';
import type { DayOfColumn, ReadPlan, TrendProblem } from './types';
import { LocalClock } from './zone-offsets';

/**
 * One sequence of times and what was read at them: the rows of a wide table, or the readings of one point of a long one.
 * Turns wall times to UTC in the order they come, follows their distance and order, and keeps the open days.
 */
export class Timeline {
  rowsRead = 0;
  firstMs = Number.POSITIVE_INFINITY;
  lastMs = Number.NEGATIVE_INFINITY;
  readonly days: DayStore;
  private readonly step = new StepCounter();
  private readonly clock: LocalClock;
  private readonly shiftMs: number;
  private previousMs = Number.NaN;
  private readonly against = { forward: { row: 0, count: 0 }, backward: { row: 0, count: 0 } };

  constructor(
    private readonly plan: ReadPlan,
    columns: readonly StoredColumn[],
    private readonly problems: ProblemLog,
  ) {
    this.clock = new LocalClock(plan.timeZone);
    this.shiftMs = shiftOf(plan.timestamp, (plan.sourceStepMinutes ?? 0) * MINUTE_MS);
    const stamps = new StampWriter(this.clock, plan.timestamp);
    this.days = new DayStore(columns, plan.stepMinutes, this.step, problems, stamps);
  }

  /** Takes the time just parsed in; where the values belong is then `days.base` in the answer. */
  addRow(stamp: StampParser, row: number): Float64Array {
    const utcMs = (stamp.hasOffset ? stamp.ms : this.utcOfLocal(stamp.ms, row)) + this.shiftMs;
    this.follow(utcMs, row);
    return this.days.addRow(utcMs, row);
  }

  takeOldest(keepOpen: number): DayOfColumn[] {
    return this.days.takeOldest(keepOpen);
  }

  /** Says, once all is read, that rows were out of order. */
  disorder(): TrendProblem[] {
    const { row, count } = this.step.newestFirst ? this.against.forward : this.against.backward;
    if (count === 0) return [];
    const message = 'The time goes back here and there. The rows were put in order.';
    return [{ code: 'out-of-order', severity: 'warning', message, row, column: this.plan.timestamp.columns[0], count }];
  }

  private utcOfLocal(localMs: number, row: number): number {
    const utcMs = this.clock.toUtc(localMs, this.step.newestFirst, this.step.usualMs);
    if (this.clock.kind !== 'plain') this.noteClockChange(localMs, utcMs, row);
    return utcMs;
  }

  private follow(utcMs: number, row: number): void {
    this.rowsRead++;
    if (utcMs < this.firstMs) this.firstMs = utcMs;
    if (utcMs > this.lastMs) this.lastMs = utcMs;
    const deltaMs = utcMs - this.previousMs;
    this.previousMs = utcMs;
    // NaN for the first row.
    if (!(deltaMs > 0 || deltaMs < 0)) return;
    this.step.add(deltaMs);
    const way = deltaMs < 0 ? this.against.backward : this.against.forward;
    if (way.count++ === 0) way.row = row;
  }

  private noteClockChange(localMs: number, utcMs: number, row: number): void {
    const { form, columns } = this.plan.timestamp;
    const { timeZone } = this.clock;
    const stamp = stampText(localMs, form);
    if (this.clock.kind === 'repeated') {
      const message = () =>
        `Clocks went back in ${timeZone}: ${stamp} comes twice. The two passes were told apart by their order in the file.`;
      this.problems.add({ code: 'repeated-hour', severity: 'warning', row, column: columns[0], message });
      return;
    }
    const message = () => {
      const shifted = stampText(utcMs + this.clock.offsetMs(utcMs), form);
      return `${stamp} does not exist in ${timeZone}: clocks went forward. Read as ${shifted}. If the logger never changes its clock, choose a zone without summer time.`;
    };
    this.problems.add({ code: 'missing-hour', severity: 'warning', row, column: columns[0], message });
  }
}
