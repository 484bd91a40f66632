import { DayStore } from './day-store';
import { TextStream } from './encoding';
import { StampWriter } from './gaps';
import { placeColumns, type ColumnPlaces } from './headings';
import { ProblemLog, quoted } from './problems';
import { RowShape, SHAPE_ROWS } from './row-shape';
import { BLOCK_CHARACTERS, isBlankRow, linesOfRow, parseRows, RowCutter, type Newline } from './rows';
import { StepCounter } from './step';
import { stampText } from './stamp-text';
import { StampParser } from './timestamps';
import {
  TrendError,
  type DayOfColumn,
  type ReadPlan,
  type ReadReport,
  type TimestampForm,
  type TrendReader,
} from './types';
import { ValueReader } from './values';
import { LocalClock } from './zone-offsets';

const MINUTES_OF_DAY = 1440;

const FORM_WORDS: Readonly<Record<TimestampForm, string>> = {
  iso: 'an ISO 8601 time',
  'month/day/year': 'a time in the form month/day/year',
  'day/month/year': 'a time in the form day/month/year',
  'year/month/day': 'a time in the form year/month/day',
  'month/day': 'a time in the form month/day, without a year',
  'day/month': 'a time in the form day/month, without a year',
  'epoch-s': 'a time in seconds since 1970',
  'epoch-ms': 'a time in milliseconds since 1970',
  'spreadsheet-serial': 'a spreadsheet time (days since 1899-12-30)',
};

/**
 * A reader for one file, to which bytes are pushed as they come and from which aligned days are taken. Memory holds a
 * block of text and the open days, whatever the size of the file: take days after every push.
 *
 * The result does not depend on where the bytes are cut. Times are turned to UTC in the order of the file (LocalClock),
 * readings are put on the plant's step (DayAligner) and converted to the stored unit.
 *
 * Throws  RangeError for a plan that cannot be: a step that does not divide 1440, a column read without a unit, an
 *         unknown time zone. TrendError from `push` and `finish` when the file is not as the plan says (`no-header`,
 *         `no-column`) or cannot be a trend (`unsupported`). A file with a heading and no readable row does not throw: its
 *         report says `rowsRead` 0 and why.
 */
export function createTrendReader(plan: ReadPlan, options: { blockCharacters?: number } = {}): TrendReader {
  return new PlanReader(plan, options.blockCharacters ?? BLOCK_CHARACTERS);
}

class PlanReader implements TrendReader {
  private readonly problems = new ProblemLog();
  private readonly step = new StepCounter();
  private readonly text: TextStream;
  private readonly cutter: RowCutter;
  private readonly clock: LocalClock;
  private readonly stamp: StampParser;
  private readonly days: DayStore;
  /** Row number of the next block's first line. */
  private nextRow = 1;
  private places: ColumnPlaces | null = null;
  private valueReaders: ValueReader[] = [];
  /** Index of each value's cell in the row. */
  private cellOf: number[] = [];
  private shape: RowShape | null = null;
  private firstRows: { cells: string[]; row: number }[] = [];
  private finished = false;

  private rowsRead = 0;
  private firstMs = Number.POSITIVE_INFINITY;
  private lastMs = Number.NEGATIVE_INFINITY;
  private previousMs = Number.NaN;
  private readonly against = { forward: { row: 0, count: 0 }, backward: { row: 0, count: 0 } };

  constructor(
    private readonly plan: ReadPlan,
    blockCharacters: number,
  ) {
    const { stepMinutes, dialect, timestamp, timeZone } = plan;
    if (!(stepMinutes > 0) || MINUTES_OF_DAY % stepMinutes !== 0)
      throw new RangeError(`createTrendReader: a step of ${stepMinutes} minutes does not divide a day`);
    const columns = plan.columns.flatMap(({ column, role, unit }, i) => {
      if (role === 'ignore') return [];
      if (unit === null) throw new RangeError(`createTrendReader: column "${column}" is to be read but has no unit`);
      return [{ plan: i, unit }];
    });
    this.text = new TextStream(dialect.encoding);
    this.clock = new LocalClock(timeZone);
    this.stamp = new StampParser(timestamp.form, dialect.decimal);
    const stamps = new StampWriter(this.clock, timestamp);
    this.days = new DayStore(columns, stepMinutes, this.step, this.problems, stamps);
    this.cutter = new RowCutter(
      dialect.delimiter,
      (block, newline) => this.readBlock(block, newline),
      (lineEndsBefore) => this.noteStrayQuote(this.nextRow + lineEndsBefore),
      blockCharacters,
    );
  }

  push(bytes: Uint8Array): void {
    if (this.finished) throw new Error('TrendReader.push: the file is finished');
    this.cutter.push(this.text.decode(bytes));
  }

  takeOldestDays(keepOpen: number): DayOfColumn[] {
    return this.days.takeOldest(keepOpen);
  }

  finish(): DayOfColumn[] {
    if (this.finished) return [];
    this.finished = true;
    this.cutter.push(this.text.end());
    this.cutter.end();
    this.learnShape();
    this.requirePlaces(this.nextRow);
    return this.days.takeAll();
  }

  report(): ReadReport {
    const problems = this.problems.list();
    const disorder = this.step.newestFirst ? this.against.forward : this.against.backward;
    if (disorder.count > 0) {
      const message = 'The time goes back here and there. The rows were put in order.';
      const column = this.plan.timestamp.columns[0];
      problems.push({
        code: 'out-of-order',
        severity: 'warning',
        message,
        row: disorder.row,
        column,
        count: disorder.count,
      });
      problems.sort((a, b) => (a.row ?? 0) - (b.row ?? 0));
    }
    return {
      rowsRead: this.rowsRead,
      samplesStored: this.days.samplesStored,
      fromMs: this.rowsRead > 0 ? this.firstMs : null,
      toMs: this.rowsRead > 0 ? this.lastMs : null,
      problems,
    };
  }

  private readBlock(block: string, newline: Newline): void {
    const rows = parseRows(block, this.plan.dialect.delimiter, newline);
    // A block ends with a row end, behind which the parser sees one more, empty row.
    if (block.endsWith(newline)) rows.pop();
    const mayHoldLines = block.includes('"');
    for (const cells of rows) {
      const row = this.nextRow;
      this.nextRow += mayHoldLines ? linesOfRow(cells) : 1;
      this.takeRow(cells, row);
    }
  }

  private takeRow(cells: string[], row: number): void {
    const { headerRow, firstDataRow } = this.plan.dialect;
    if (row === headerRow) this.takeHeading(cells);
    if (row < firstDataRow || row === headerRow) return;
    if (cells[0] === '' && isBlankRow(cells)) return;
    if (this.shape) return this.readRow(cells, row, this.requirePlaces(row), this.shape);
    this.firstRows.push({ cells, row });
    if (this.firstRows.length >= SHAPE_ROWS) this.learnShape();
  }

  private takeHeading(cells: readonly string[]): void {
    const places = placeColumns(cells, this.plan);
    this.places = places;
    this.cellOf = places.read.map(({ cell }) => cell);
    this.valueReaders = places.read.map(({ plan }) => {
      const { column, unit } = this.plan.columns[plan]!;
      return new ValueReader(column, unit!, this.plan.dialect.decimal, this.problems);
    });
  }

  private requirePlaces(row: number): ColumnPlaces {
    if (this.places) return this.places;
    const { headerRow } = this.plan.dialect;
    throw new TrendError(
      'no-header',
      `Row ${headerRow} should hold the column names but the file has none there.`,
      row,
    );
  }

  /** The first rows wait until the usual number of cells is known, so that blocks of any size give the same result. */
  private learnShape(): void {
    if (this.shape || this.firstRows.length === 0) return;
    const places = this.requirePlaces(this.firstRows[0]!.row);
    this.shape = new RowShape(
      this.firstRows.map(({ cells }) => cells),
      places.width,
      this.problems,
    );
    const waiting = this.firstRows;
    this.firstRows = [];
    for (const { cells, row } of waiting) this.readRow(cells, row, places, this.shape);
  }

  private readRow(cells: readonly string[], row: number, places: ColumnPlaces, shape: RowShape): void {
    if (!shape.accepts(cells, row)) return;
    const [first, second] = places.time;
    const date = cells[first!] ?? '';
    const time = second === undefined ? date : `${date} ${cells[second] ?? ''}`;
    if (!this.stamp.parse(time)) {
      this.noteBadTime(time, date, row, places);
      return;
    }
    const utcMs = this.stamp.hasOffset ? this.stamp.ms : this.utcOfLocal(this.stamp.ms, row);
    this.follow(utcMs, row);
    const values = this.days.addRow(utcMs, row);
    const base = this.days.base;
    const { cellOf, valueReaders } = this;
    for (let c = 0; c < cellOf.length; c++) values[base + c] = valueReaders[c]!.read(cells[cellOf[c]!] ?? '', row);
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

  private noteBadTime(time: string, date: string, row: number, places: ColumnPlaces): void {
    const column = this.plan.timestamp.columns[0];
    if (date.trim() === places.timeHeading && date.trim() !== '') {
      const message = () => 'The heading comes again. Left out.';
      this.problems.add({ code: 'heading-again', severity: 'warning', row, message });
      return;
    }
    const message = () =>
      time.trim() === ''
        ? 'The time is empty. The row was left out.'
        : `${quoted(time)} is not ${FORM_WORDS[this.plan.timestamp.form]}. The row was left out.`;
    this.problems.add({ code: 'bad-time', severity: 'error', row, column, message });
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

  private noteStrayQuote(row: number): void {
    const message = () => 'A quotation mark is opened and never closed. Read as if it were not there.';
    this.problems.add({ code: 'stray-quote', severity: 'warning', row, message });
  }
}
