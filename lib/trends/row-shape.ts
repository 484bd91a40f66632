import { plural, type ProblemLog } from './problems';

/** The usual number of cells is the most common one in this many first data rows. */
export const SHAPE_ROWS = 64;

/** Which rows have the right number of cells. */
export class RowShape {
  private readonly usualWidth: number;

  constructor(
    firstRows: readonly (readonly string[])[],
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

  /** Cells beyond the heading, in all rows alike. */
  private noteUnnamed(cells: readonly string[], row: number): void {
    if (cells.slice(this.headingWidth).every((cell) => cell.trim() === '')) return;
    const message = () =>
      `The rows have ${plural(cells.length, 'cell')} where the heading has ${this.headingWidth}. The cells without a heading were not read.`;
    this.problems.add({ code: 'unnamed-cells', severity: 'warning', row, message });
  }
}
