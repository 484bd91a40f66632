import { plural, type ProblemLog } from './problems';

/** The usual number of cells is the most common one in this many first data rows. */
export const SHAPE_ROWS = 64;

/** Which rows have the right number of cells. */
export class RowShape {
  private readonly usualWidth: number;

  constructor(
    private readonly firstRows: readonly (readonly string[])[],
    private readonly headingWidth: number,
    private readonly problems: ProblemLog,
  ) {
    const counts = new Map<number, number>();
    for (const cells of firstRows) counts.set(cells.length, (counts.get(cells.length) ?? 0) + 1);
    this.usualWidth = [...counts].reduce((best, each) => (each[1] > best[1] ? each : best), [headingWidth, 0])[0];
  }

  /** Whether to read a row. A row of another width is left out: nobody knows which of its cells are shifted. */
  accepts(cells: readonly string[], row: number): boolean {
    const width = cells.length;
    if (width === this.usualWidth || width === this.headingWidth) {
      if (width > this.headingWidth) this.noteUnnamed(cells, row);
      return true;
    }
    const known = Math.max(this.usualWidth, this.headingWidth);
    if (width > known && cells.slice(known).every((cell) => cell.trim() === '')) return true;
    const expected =
      this.usualWidth === this.headingWidth
        ? `the heading has ${this.headingWidth}`
        : `other rows have ${this.usualWidth}`;
    const message = () => `The row has ${plural(width, 'cell')} where ${expected}. Left out.`;
    const code = width < known ? 'short-row' : 'long-row';
    this.problems.add({ code, severity: 'error', row, message });
    return false;
  }

  /**
   * Takes apart a row in which the end of a line was lost (splitSplicedRow), and counts it. Null when it is none; else the
   * records to read in its place, perhaps none. To be asked before `accepts`, for a row of another width and for one in
   * which a value turned out to be a time.
   */
  unsplice(
    cells: readonly string[],
    row: number,
    looksLikeTime: (cell: string) => boolean,
    timeCell = 0,
  ): string[][] | null {
    const others = this.timesIn(timeCell);
    const records = others ? null : splitSplicedRow(cells, this.usualWidth, looksLikeTime, timeCell);
    if (records === null) return null;
    const what = 'Two records stand on one line: the end of the line between them was lost.';
    const outcome = [
      'Neither is whole, so both were left out.',
      'The whole one was read; what is left of the other was left out.',
      'Both were read.',
    ] as const;
    const message = () => `${what} ${outcome[records.length === 0 ? 0 : records.length === 1 ? 1 : 2]}`;
    const severity = records.length === 0 ? 'error' : 'warning';
    this.problems.add({ code: 'spliced-row', severity, row, detail: `${Math.min(records.length, 2)}`, message });
    return records;
  }

  /** Whether usual rows hold another cell that is written like their time: then a second time tells nothing. */
  private timesIn(timeCell: number): boolean {
    return this.firstRows.some((cells) => {
      if (cells.length !== this.usualWidth) return false;
      const mask = maskOf((cells[timeCell] ?? '').trim());
      return cells.some((cell, at) => at !== timeCell && timeAtEnd(cell, mask) !== null);
    });
  }

  /** Whether a row has a width that `accepts` takes. */
  fits(cells: readonly string[]): boolean {
    return cells.length === this.usualWidth || cells.length === this.headingWidth;
  }

  /** Cells beyond the heading, in all rows alike. */
  private noteUnnamed(cells: readonly string[], row: number): void {
    if (cells.slice(this.headingWidth).every((cell) => cell.trim() === '')) return;
    const message = () =>
      `The rows have ${plural(cells.length, 'cell')} where the heading has ${this.headingWidth}. The cells without a heading were not read.`;
    this.problems.add({ code: 'unnamed-cells', severity: 'warning', row, message });
  }
}

/** The shape of a text: every digit is alike. */
const maskOf = (text: string): string => text.replace(/\d/g, '0');

/**
 * The whole records of a row in which the end of a line was lost, as when a logger is reset while it writes.
 *
 * A record begins at a cell that is a time written just like the row's first one, or that ends with such a time behind
 * something that is no digit (what is left of a torn cell). Records are told apart by that alone; one that does not have
 * exactly `width` cells is torn and left out, so that nothing is guessed. Where every row ends with a delimiter, the
 * empty last cell and the next time are one cell. Where the time is not the first cell (`timeCell`), only a row of exactly
 * two records can be told. No other cell of a record may hold a time written like it.
 *
 * Answers null for a row in which no second time stands: it is not spliced, or not so that it could be told.
 */
export function splitSplicedRow(
  cells: readonly string[],
  width: number,
  looksLikeTime: (cell: string) => boolean,
  timeCell = 0,
): string[][] | null {
  const first = (cells[timeCell] ?? '').trim();
  if (!looksLikeTime(first)) return null;
  const mask = maskOf(first);
  if (timeCell > 0) {
    const second = (cells[width + timeCell] ?? '').trim();
    const isTwo = cells.length === 2 * width && maskOf(second) === mask && looksLikeTime(second);
    return isTwo ? [cells.slice(0, width), cells.slice(width)] : null;
  }
  const starts: { at: number; time: string; isWhole: boolean }[] = [{ at: 0, time: cells[0]!, isWhole: true }];
  for (let at = 1; at < cells.length; at++) {
    const time = timeAtEnd(cells[at]!, mask);
    if (time === null || !looksLikeTime(time)) continue;
    starts.push({ at, time, isWhole: time === cells[at]!.trim() });
  }
  if (starts.length === 1) return null;
  const endsEmpty = cells.at(-1) === '';
  return starts.flatMap(({ at, time }, i): string[][] => {
    const next = starts[i + 1];
    const end = next?.at ?? cells.length;
    const record = [time, ...cells.slice(at + 1, end)];
    // The cell in which the next time stands is this record's empty last one, too.
    if (endsEmpty && next?.isWhole && record.length === width - 1) record.push('');
    return record.length === width && (next === undefined || next.isWhole) ? [record] : [];
  });
}

/** The end of a cell when it is written like a mask and no digit stands before it; null otherwise. */
function timeAtEnd(cell: string, mask: string): string | null {
  const text = cell.trim();
  const end = text.slice(-mask.length);
  if (mask.length === 0 || maskOf(end) !== mask) return null;
  const before = text.charCodeAt(text.length - mask.length - 1);
  return before >= 48 && before <= 57 ? null : end;
}
