import { TextStream } from './encoding';
import { columnNames, joinedHeading, plainName } from './headings';
import { detached } from './problems';
import { BLOCK_CHARACTERS, linesOfRow, parseRows, RowCutter, type Newline } from './rows';
import type { FileTable } from './table';
import { StampParser } from './timestamps';

/** One point of a long table: how often it comes, its unit cell, and readings spread over the whole file. */
export interface ScannedPoint {
  name: string;
  count: number;
  unitCell: string;
  /** Local wall time of each kept reading, counted as if it were UTC. */
  timesMs: number[];
  cells: string[];
}

/** Readings kept of a point: when full, every second one is let go and from then on only every second one is taken. */
const MOST_KEPT = 1024;
/** More points than this in one file: the column that names them is something else. */
const MOST_POINTS = 20_000;

interface Kept extends ScannedPoint {
  every: number;
  /** Of its own: times that lean on the row before lean on the point's last. */
  stamp: StampParser;
}

/**
 * Finds the points of a long table by going through the whole file: one that comes late, or a file sorted by point, shows in
 * no head. Bytes are pushed as they come; memory holds the points, not the file.
 */
export class PointScan {
  private readonly points = new Map<string, Kept>();
  private readonly text: TextStream;
  private readonly cutter: RowCutter;
  private nextRow = 1;
  private upper: readonly string[] = [];
  private readonly cell = { point: -1, value: -1, unit: -1, time: [] as number[] };

  constructor(private readonly table: FileTable) {
    const { dialect } = table;
    this.text = new TextStream(dialect.encoding);
    if (dialect.headerRow === 0) this.place(table.names);
    this.cutter = new RowCutter(
      dialect.delimiter,
      (block, newline) => this.readBlock(block, newline),
      () => undefined,
      BLOCK_CHARACTERS,
    );
  }

  push(bytes: Uint8Array): void {
    this.cutter.push(this.text.decode(bytes));
  }

  /** The points in the order they first came. */
  finish(): ScannedPoint[] {
    this.cutter.push(this.text.end());
    this.cutter.end();
    return [...this.points.values()];
  }

  private place(names: readonly string[]): void {
    const { shape, time } = this.table;
    if (shape.kind !== 'long') throw new RangeError('PointScan: the table has a column a point');
    this.cell.point = names.indexOf(shape.point);
    this.cell.value = names.indexOf(shape.value);
    this.cell.unit = shape.unit === null ? -1 : names.indexOf(shape.unit);
    this.cell.time = time.plan.columns.map((column) => names.indexOf(column));
  }

  private readBlock(block: string, newline: Newline): void {
    const mayHoldLines = block.includes('"');
    if (!mayHoldLines && this.nextRow > this.table.dialect.firstDataRow) return this.readPlainBlock(block, newline);
    const rows = parseRows(block, this.table.dialect.delimiter, newline);
    if (block.endsWith(newline)) rows.pop();
    const { headerRow, firstDataRow, upperHeaderRow } = this.table.dialect;
    for (const cells of rows) {
      const row = this.nextRow;
      this.nextRow += mayHoldLines ? linesOfRow(cells) : 1;
      if (row === upperHeaderRow) this.upper = cells;
      if (row === headerRow) this.place(columnNames(joinedHeading(this.upper, cells)));
      if (row >= firstDataRow && row !== headerRow) this.take(cells);
    }
  }

  /** Most lines only count: their point's name is all that is cut out of them. */
  private readPlainBlock(block: string, newline: Newline): void {
    const { delimiter } = this.table.dialect;
    const { point: place } = this.cell;
    for (let start = 0; start < block.length;) {
      const lineEnd = block.indexOf(newline, start);
      const end = lineEnd === -1 ? block.length : lineEnd;
      this.nextRow++;
      const name = cellOf(block, start, end, delimiter, place);
      const point = name === undefined ? undefined : this.points.get(name);
      if (point && point.count % point.every !== 0) point.count++;
      else if (name !== undefined) this.take(block.slice(start, end).split(delimiter));
      start = end + 1;
    }
  }

  private take(cells: readonly string[]): void {
    const name = cells[this.cell.point];
    if (name === undefined) return;
    let point = this.points.get(name);
    if (!point) {
      point = this.known(name, cells[this.cell.unit] ?? '');
      if (!point) return;
    }
    if (point.count++ % point.every !== 0) return;
    const [first, second] = this.cell.time;
    const time = second === undefined ? (cells[first!] ?? '') : `${cells[first!] ?? ''} ${cells[second] ?? ''}`;
    if (!point.stamp.parse(time)) return;
    point.timesMs.push(point.stamp.ms);
    point.cells.push(detached(cells[this.cell.value] ?? ''));
    if (point.cells.length >= MOST_KEPT) thin(point);
  }

  /** A new point, or one that was only spelled with other blanks. */
  private known(cell: string, unitCell: string): Kept | undefined {
    const name = plainName(cell);
    if (name === '' || this.points.size >= MOST_POINTS) return undefined;
    for (const point of name === cell ? [] : this.points.values()) {
      if (point.name === name) return point;
    }
    const stamp = StampParser.of(this.table.time.plan, this.table.dialect.decimal);
    const kept = { count: 0, timesMs: [], cells: [], every: 1, stamp };
    const point: Kept = { name: detached(name), unitCell: detached(unitCell), ...kept };
    this.points.set(detached(cell), point);
    return point;
  }
}

/** One cell of a line that holds no quotation mark; undefined when the line is shorter. */
function cellOf(text: string, start: number, end: number, delimiter: string, place: number): string | undefined {
  let from = start;
  for (let cell = 0; cell < place; cell++) {
    const at = text.indexOf(delimiter, from);
    if (at === -1 || at >= end) return undefined;
    from = at + 1;
  }
  const to = text.indexOf(delimiter, from);
  return text.slice(from, to === -1 || to > end ? end : to);
}

function thin(point: Kept): void {
  point.timesMs = point.timesMs.filter((_, i) => i % 2 === 0);
  point.cells = point.cells.filter((_, i) => i % 2 === 0);
  point.every *= 2;
}
