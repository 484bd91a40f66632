import { TextStream } from './encoding';
import { joinedHeading, type ColumnPlaces } from './headings';
import { LongRows } from './long-rows';
import { ProblemLog, quoted } from './problems';
import { RowShape, SHAPE_ROWS } from './row-shape';
import { BLOCK_CHARACTERS, isBlankRow, linesOfRow, parseRows, RowCutter, type Newline } from './rows';
import { DayMonthWitness } from './time-witness';
import { StampParser } from './timestamps';
import {
  TrendError,
  type DayOfColumn,
  type ReadPlan,
  type ReadReport,
  type TimestampForm,
  type TrendProblem,
  type TrendReader,
} from './types';
import { WideRows, type RowSink } from './wide-rows';

const MINUTES_OF_DAY = 1440;
/** What a line below the readings is met as, and how many of them still are a footer. */
const NO_READING: ReadonlySet<string> = new Set(['short-row', 'long-row', 'bad-time', 'no-point']);
const MOST_FOOTER_ROWS = 20;

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
  private readonly text: TextStream;
  private readonly cutter: RowCutter;
  private readonly rows: RowSink;
  private readonly witness: DayMonthWitness;
  /** Asked whether a cell is a time, apart from the rows' own: times may lean on the row before. */
  private readonly probe: StampParser;
  /** Row number of the next block's first line. */
  private nextRow = 1;
  private upperHeading: readonly string[] = [];
  private places: ColumnPlaces | null = null;
  private shape: RowShape | null = null;
  private firstRows: { cells: string[]; row: number }[] = [];
  /** The time last read, and by which parser. */
  private lastTime = '';
  private lastStamp: StampParser | null = null;
  private lastGoodRow = 0;
  private finished = false;

  constructor(
    private readonly plan: ReadPlan,
    blockCharacters: number,
  ) {
    const { stepMinutes, dialect, timestamp, shape } = plan;
    if (!(stepMinutes > 0) || MINUTES_OF_DAY % stepMinutes !== 0)
      throw new RangeError(`createTrendReader: a step of ${stepMinutes} minutes does not divide a day`);
    for (const { column, role, unit } of plan.columns) {
      if (role !== 'ignore' && unit === null)
        throw new RangeError(`createTrendReader: column "${column}" is to be read but has no unit`);
    }
    this.text = new TextStream(dialect.encoding);
    this.probe = StampParser.of(timestamp, dialect.decimal);
    this.witness = new DayMonthWitness(timestamp.form, dialect.decimal);
    this.rows = shape?.kind === 'long' ? new LongRows(plan, shape, this.problems) : new WideRows(plan, this.problems);
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
    return this.rows.takeOldest(keepOpen);
  }

  finish(): DayOfColumn[] {
    if (this.finished) return [];
    this.finished = true;
    this.cutter.push(this.text.end());
    this.cutter.end();
    this.learnShape();
    this.requirePlaces(this.nextRow);
    if (this.witness.isMisreadAtEnd) throw this.witness.error();
    this.noteDayOrMonth();
    this.noteZeroBytes();
    return this.rows.takeAll();
  }

  get rowsRead(): number {
    return this.rows.rowsRead;
  }

  report(): ReadReport {
    const { rowsRead, samplesStored, firstMs, lastMs } = this.rows;
    const problems = [...this.problems.list().map(this.asFooter), ...this.rows.disorder()].sort(
      (a, b) => (a.row ?? 0) - (b.row ?? 0),
    );
    return {
      rowsRead,
      samplesStored,
      fromMs: Number.isFinite(firstMs) ? firstMs : null,
      toMs: Number.isFinite(lastMs) ? lastMs : null,
      problems,
    };
  }

  /** Lines below the last row of readings that are none themselves: totals, "end of report". */
  private readonly asFooter = (problem: TrendProblem): TrendProblem => {
    const below = this.finished && this.lastGoodRow > 0 && (problem.row ?? 0) > this.lastGoodRow;
    if (!below || !NO_READING.has(problem.code) || problem.count > MOST_FOOTER_ROWS) return problem;
    const lines = problem.count === 1 ? 'A line' : `${problem.count} lines`;
    const message = `${lines} below the last row of readings, from row ${problem.row} on. Left out.`;
    return { code: 'footer', severity: 'warning', message, row: problem.row, count: problem.count };
  };

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
    const { headerRow, firstDataRow, upperHeaderRow } = this.plan.dialect;
    if (row === upperHeaderRow) this.upperHeading = cells;
    if (row === headerRow) this.places = this.rows.place(joinedHeading(this.upperHeading, cells));
    if (row < firstDataRow || row === headerRow) return;
    if (cells[0] === '' && isBlankRow(cells)) return;
    if (this.shape) return this.readRow(cells, row, this.requirePlaces(row), this.shape);
    this.firstRows.push({ cells, row });
    if (this.firstRows.length >= SHAPE_ROWS) this.learnShape();
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
    const waiting = this.firstRows;
    // A file without a heading: its columns go by their number.
    if (this.plan.dialect.headerRow === 0) this.places ??= this.rows.place(waiting[0]!.cells.map(() => ''));
    const places = this.requirePlaces(waiting[0]!.row);
    const allCells = waiting.map(({ cells }) => cells);
    this.shape = new RowShape(allCells, places.width, this.problems);
    this.firstRows = [];
    for (const { cells, row } of waiting) this.readRow(cells, row, places, this.shape);
  }

  private readRow(cells: readonly string[], row: number, places: ColumnPlaces, shape: RowShape): void {
    const records = shape.fits(cells) ? null : shape.unsplice(cells, row, this.isTime, places.time[0]);
    if (records) for (const record of records) this.readRecord(record, row, places);
    else if (shape.accepts(cells, row) && !this.readRecord(cells, row, places)) {
      for (const record of shape.unsplice(cells, row, this.isTime, places.time[0]) ?? [])
        this.readRecord(record, row, places);
    }
  }

  private readonly isTime = (cell: string): boolean => this.probe.parse(cell);

  /** False when the row turned out to hold more than one record. */
  private readRecord(cells: readonly string[], row: number, places: ColumnPlaces): boolean {
    const stamp = this.rows.stampFor(cells, row);
    if (!stamp) return true;
    const [first, second] = places.time;
    const date = cells[first!] ?? '';
    const time = second === undefined ? date : `${date} ${cells[second] ?? ''}`;
    // Rows of one time follow each other where each holds one reading.
    const again = time === this.lastTime && stamp === this.lastStamp;
    if (again || stamp.parse(time)) {
      this.lastTime = time;
      this.lastStamp = stamp;
      this.lastGoodRow = row;
      this.witness.accept(stamp);
      return this.rows.take(cells, row, stamp);
    }
    this.lastStamp = null;
    this.witness.refuse(time, row);
    if (this.witness.isMisread) throw this.witness.error();
    this.noteBadTime(time, date, row, places);
    return true;
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

  private noteDayOrMonth(): void {
    const warning = this.witness.warning();
    if (warning === null) return;
    const row = this.witness.firstRow ?? this.plan.dialect.firstDataRow;
    const column = this.plan.timestamp.columns[0];
    this.problems.add({ code: 'day-or-month', severity: 'warning', row, column, message: () => warning });
  }

  private noteZeroBytes(): void {
    const count = this.cutter.zeroBytes;
    if (count === 0) return;
    const message = () =>
      'The file holds zero bytes, as when a logger loses its power while it writes. They were dropped.';
    this.problems.add({ code: 'zero-bytes', severity: 'warning', row: this.plan.dialect.firstDataRow, count, message });
  }

  private noteStrayQuote(row: number): void {
    const message = () => 'A quotation mark is opened and never closed. Read as if it were not there.';
    this.problems.add({ code: 'stray-quote', severity: 'warning', row, message });
  }
}
