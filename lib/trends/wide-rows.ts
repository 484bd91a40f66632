import { columnNames, placeColumns, plainName, type ColumnPlaces } from './headings';
import type { ProblemLog } from './problems';
import { StatusReader } from './status-reader';
import { Timeline } from './timeline';
import { StampParser } from './timestamps';
import type { DayOfColumn, ReadPlan, TrendProblem } from './types';
import { BLANK, ValueReader } from './values';

/** What takes in the rows of a table once their time is read; one kind for each shape of table. */
export interface RowSink {
  /** Finds its columns in the heading. Throws TrendError `no-column`. */
  place(heading: readonly string[]): ColumnPlaces;
  /** What reads the time of a row; null for a row that nobody wants. */
  stampFor(cells: readonly string[], row: number): StampParser | null;
  /** The time of the row stands in `stamp`. False when a value turned out to be a time: two records were spliced. */
  take(cells: readonly string[], row: number, stamp: StampParser): boolean;
  takeOldest(keepOpen: number): DayOfColumn[];
  takeAll(): DayOfColumn[];
  readonly rowsRead: number;
  readonly samplesStored: number;
  readonly firstMs: number;
  readonly lastMs: number;
  disorder(): TrendProblem[];
}

/** A column a point: all readings of a row share its time. */
export class WideRows implements RowSink {
  private readonly timeline: Timeline;
  private valueReaders: ValueReader[] = [];
  /** Index of each value's cell in the row. */
  private cellOf: number[] = [];
  private status: StatusReader | null = null;
  private readonly stamp: StampParser;
  private isSpliced = false;

  constructor(
    private readonly plan: ReadPlan,
    private readonly problems: ProblemLog,
  ) {
    const columns = plan.columns.flatMap(({ column, role, unit }, i) =>
      role === 'ignore' ? [] : [{ plan: i, unit: unit!, name: column }],
    );
    this.timeline = new Timeline(plan, columns, problems);
    this.stamp = StampParser.of(plan.timestamp, plan.dialect.decimal);
  }

  place(heading: readonly string[]): ColumnPlaces {
    const places = placeColumns(heading, this.plan);
    const { shape } = this.plan;
    if (shape?.kind === 'wide' && shape.status)
      this.status = new StatusReader(
        shape.status,
        columnNames(heading).indexOf(plainName(shape.status)),
        this.problems,
      );
    this.cellOf = places.read.map(({ cell }) => cell);
    this.valueReaders = places.read.map(({ plan }) => {
      const { column, unit, sentinels } = this.plan.columns[plan]!;
      const onTime = () => (this.isSpliced = true);
      return new ValueReader(column, unit!, this.plan.dialect.decimal, this.problems, { sentinels, onTime });
    });
    return places;
  }

  stampFor(): StampParser {
    return this.stamp;
  }

  take(cells: readonly string[], row: number, stamp: StampParser): boolean {
    const { timeline, cellOf, valueReaders } = this;
    const values = timeline.addRow(stamp, row);
    const base = timeline.days.base;
    if (this.status && !this.status.accepts(cells, row)) {
      // Not BLANK: a missing reading also ends what a change-of-value point held.
      values.fill(Number.NaN, base, base + cellOf.length);
      return true;
    }
    for (let c = 0; c < cellOf.length; c++) values[base + c] = valueReaders[c]!.read(cells[cellOf[c]!] ?? '', row);
    if (!this.isSpliced) return true;
    // Its cells are shifted: none of them is the column's.
    this.isSpliced = false;
    values.fill(BLANK, base, base + cellOf.length);
    return false;
  }

  takeOldest(keepOpen: number): DayOfColumn[] {
    return this.timeline.takeOldest(keepOpen);
  }

  takeAll(): DayOfColumn[] {
    return this.timeline.days.takeAll();
  }

  get rowsRead(): number {
    return this.timeline.rowsRead;
  }

  get samplesStored(): number {
    return this.timeline.days.samplesStored;
  }

  get firstMs(): number {
    return this.timeline.firstMs;
  }

  get lastMs(): number {
    return this.timeline.lastMs;
  }

  disorder(): TrendProblem[] {
    return this.timeline.disorder();
  }
}
