import { columnNames, plainName, type ColumnPlaces } from './headings';
import { detached, quoted, type ProblemLog } from './problems';
import { StatusReader } from './status-reader';
import { Timeline } from './timeline';
import { StampParser } from './timestamps';
import { TrendError, type DayOfColumn, type ReadPlan, type TableShape, type TrendProblem } from './types';
import { ValueReader } from './values';
import type { RowSink } from './wide-rows';

type LongShape = Extract<TableShape, { kind: 'long' }>;

/** Readings of open days kept in memory over all points: a day of a thousand points at one minute is 1.4 million. */
const MOST_OPEN_READINGS = 6_000_000;
const MINUTES_OF_DAY = 1440;
/** Days of one point that stay open at the least, so that rows slightly out of order find theirs. */
const FEWEST_OPEN_DAYS = 2;
/** Different spellings of points, statuses remembered: names that are cut from each row anew. */
const MOST_REMEMBERED = 4096;

interface Point {
  timeline: Timeline;
  values: ValueReader;
  /** Of its own where times have no year: the year of each follows from the point's time before. */
  stamp: StampParser | null;
}

/** One row a reading. Each point has its own sequence of times, since change-of-value points come when they please. */
export class LongRows implements RowSink {
  rowsRead = 0;
  private readonly stamp: StampParser;
  private readonly points: (Point | null)[];
  /** Which point a cell of the point's column names; -1 for one that is left out or unknown. */
  private readonly byCell = new Map<string, number>();
  private readonly byName: ReadonlyMap<string, number>;
  private pointCell = 0;
  private valueCell = 0;
  private status: StatusReader | null = null;
  private dayReadings = 0;
  /** Whose reading the row under way is. */
  private point: Point | null = null;

  constructor(
    private readonly plan: ReadPlan,
    private readonly shape: LongShape,
    private readonly problems: ProblemLog,
  ) {
    this.stamp = StampParser.of(plan.timestamp, plan.dialect.decimal);
    const yearless = plan.timestamp.form === 'month/day' || plan.timestamp.form === 'day/month';
    this.byName = new Map(plan.columns.map(({ column }, i) => [column, i]));
    this.points = plan.columns.map(({ column, role, unit, sentinels }, i) =>
      role === 'ignore'
        ? null
        : {
            timeline: new Timeline(plan, [{ plan: i, unit: unit!, name: column, ownRows: true }], problems),
            values: new ValueReader(column, unit!, plan.dialect.decimal, problems, { sentinels }),
            stamp: yearless ? StampParser.of(plan.timestamp, plan.dialect.decimal) : null,
          },
    );
    this.dayReadings = this.points.filter((point) => point !== null).length * MINUTES_OF_DAY;
  }

  place(heading: readonly string[]): ColumnPlaces {
    const names = columnNames(heading);
    const place = (column: string): number => {
      const cell = names.indexOf(plainName(column));
      if (cell !== -1) return cell;
      const what = `Row ${this.plan.dialect.headerRow} has no column "${column}".`;
      throw new TrendError('no-column', `${what} Map the points of this file anew.`, this.plan.dialect.headerRow);
    };
    this.pointCell = place(this.shape.point);
    this.valueCell = place(this.shape.value);
    const { status } = this.shape;
    this.status = status === null ? null : new StatusReader(status, place(status), this.problems);
    const time = this.plan.timestamp.columns.map(place);
    return { time, read: [], width: names.length, timeHeading: heading[time[0]!]?.trim() ?? '' };
  }

  stampFor(cells: readonly string[], row: number): StampParser | null {
    this.point = this.pointOf(cells[this.pointCell] ?? '', row);
    return this.point && (this.point.stamp ?? this.stamp);
  }

  take(cells: readonly string[], row: number, stamp: StampParser): boolean {
    this.rowsRead++;
    const { point } = this;
    if (!point) return true;
    const value = this.valueOf(point, cells, row);
    const values = point.timeline.addRow(stamp, row);
    values[point.timeline.days.base] = value;
    return true;
  }

  private valueOf(point: Point, cells: readonly string[], row: number): number {
    // Not BLANK: a missing reading also ends what a change-of-value point held.
    if (this.status && !this.status.accepts(cells, row)) return Number.NaN;
    return point.values.read(cells[this.valueCell] ?? '', row);
  }

  private pointOf(cell: string, row: number): Point | null {
    let index = this.byCell.get(cell);
    if (index === undefined) {
      const name = plainName(cell);
      index = this.byName.get(name) ?? -1;
      if (index === -1) this.noteUnknown(name, row);
      else if (this.byCell.size < MOST_REMEMBERED) this.byCell.set(detached(cell), index);
    }
    return index === -1 ? null : this.points[index]!;
  }

  private noteUnknown(name: string, row: number): void {
    const message = () =>
      name === ''
        ? 'The row names no point. Left out.'
        : `Point ${quoted(name)} is not among the points that were mapped. Its rows were left out; map this file again to read them.`;
    const code = name === '' ? 'no-point' : 'unmapped-point';
    this.problems.add({ code, severity: name === '' ? 'error' : 'warning', row, detail: name, message });
  }

  takeOldest(keepOpen: number): DayOfColumn[] {
    const fit = Math.floor(MOST_OPEN_READINGS / Math.max(1, this.dayReadings));
    const keep = Math.max(FEWEST_OPEN_DAYS, Math.min(keepOpen, fit));
    return this.points.flatMap((point) => point?.timeline.takeOldest(keep) ?? []);
  }

  takeAll(): DayOfColumn[] {
    // A point that is logged on change holds to the file's last instant, not only to its own.
    const { lastMs } = this;
    return this.points.flatMap((point) => point?.timeline.days.takeAll(lastMs) ?? []);
  }

  private readonly timelines = (): Timeline[] => this.points.flatMap((point) => (point ? [point.timeline] : []));

  get samplesStored(): number {
    return this.timelines().reduce((sum, each) => sum + each.days.samplesStored, 0);
  }

  get firstMs(): number {
    return Math.min(...this.timelines().map((each) => each.firstMs));
  }

  get lastMs(): number {
    return Math.max(...this.timelines().map((each) => each.lastMs));
  }

  /** One warning for all points: the first row it is met in, and how often over all. */
  disorder(): TrendProblem[] {
    const all = this.timelines().flatMap((each) => each.disorder());
    const first = all.sort((a, b) => (a.row ?? 0) - (b.row ?? 0))[0];
    return first ? [{ ...first, count: all.reduce((sum, { count }) => sum + count, 0) }] : [];
  }
}
