/** A system of linear equations in the making: rows x columns, row-major, the last column the right-hand side. */
export interface LinearSystem {
  rows: number;
  columns: number;
  values: Float64Array;
}

/** Where an unknown was solved for: its row then reads `unknown + (the rest) = right-hand side`. */
export interface Pivot {
  row: number;
  column: number;
}

/** Entries below this, in rows scaled to a largest entry of 1, are rounding. */
const NEGLIGIBLE = 1e-9;

/** Scales each row to a largest coefficient of 1 (right-hand side not counted); rows without any become zero. */
export function scaleRows(system: LinearSystem): void {
  const { rows, columns, values } = system;
  for (let row = 0; row < rows; row += 1) {
    let largest = 0;
    for (let column = 0; column < columns - 1; column += 1) {
      largest = Math.max(largest, Math.abs(values[row * columns + column] as number));
    }
    for (let column = 0; column < columns; column += 1) {
      const at = row * columns + column;
      values[at] = largest > 0 ? (values[at] as number) / largest : 0;
    }
  }
}

/** The largest entry among the rows and columns still open; null when all are negligible. */
function largestOpen(system: LinearSystem, rows: Set<number>, columns: Set<number>): Pivot | null {
  let best: Pivot | null = null;
  let largest = NEGLIGIBLE;
  for (const row of rows) {
    for (const column of columns) {
      const size = Math.abs(system.values[row * system.columns + column] as number);
      if (size > largest) {
        largest = size;
        best = { row, column };
      }
    }
  }
  return best;
}

/** Divides the pivot's row by the pivot and takes multiples of it from all other rows. */
function clearColumn({ rows, columns, values }: LinearSystem, pivot: Pivot): void {
  const divisor = values[pivot.row * columns + pivot.column] as number;
  for (let column = 0; column < columns; column += 1) {
    values[pivot.row * columns + column] = (values[pivot.row * columns + column] as number) / divisor;
  }
  for (let row = 0; row < rows; row += 1) {
    const factor = values[row * columns + pivot.column] as number;
    if (row === pivot.row || factor === 0) continue;
    for (let column = 0; column < columns; column += 1) {
      const at = row * columns + column;
      values[at] = (values[at] as number) - factor * (values[pivot.row * columns + column] as number);
    }
    values[row * columns + pivot.column] = 0;
  }
}

/**
 * Gauss-Jordan elimination with complete pivoting over the columns and rows given, in place. Rows that carry no pivot
 * afterwards hold nothing of these columns: they are the projection of the system that is free of those unknowns.
 *
 * Returns the pivots; columns without one are not determined. Gaps: NaN entries are never pivots.
 * Source  G. H. Golub, C. F. Van Loan, Matrix Computations, 4th ed. 2013, section 3.4.
 */
export function eliminate(system: LinearSystem, rows: Iterable<number>, columns: Iterable<number>): Pivot[] {
  const openRows = new Set(rows);
  const openColumns = new Set(columns);
  const pivots: Pivot[] = [];
  for (;;) {
    const pivot = largestOpen(system, openRows, openColumns);
    if (!pivot) return pivots;
    clearColumn(system, pivot);
    openRows.delete(pivot.row);
    openColumns.delete(pivot.column);
    pivots.push(pivot);
  }
}

/** Whether an entry of an eliminated system is there at all. */
export const isNegligible = (entry: number): boolean => Math.abs(entry) <= NEGLIGIBLE;
