import { BLANK } from './values';

const FIRST_ROWS = 8;

/** Rows of one UTC day as they came: time from the day's start, row number in the file, one value a column. */
export class DayBuffer {
  count = 0;
  timesMs = new Float64Array(FIRST_ROWS);
  rows = new Uint32Array(FIRST_ROWS);
  /** Row by row: the value of column c in row i is at i * columns + c. */
  values: Float64Array;
  /** How regular the file's rows were by this day's last row; null while too few rows had come to say. */
  pace: { isRegular: boolean; holdMs: number } | null = null;
  private strictlyRising = true;

  constructor(readonly columns: number) {
    this.values = new Float64Array(FIRST_ROWS * columns);
  }

  /** Whether every row so far is later than the one before it. */
  get isInOrder(): boolean {
    return this.strictlyRising;
  }

  /** Adds a row and returns where its first value belongs in `values`. */
  addRow(timeMs: number, row: number): number {
    if (this.count === this.rows.length) this.grow();
    const i = this.count++;
    if (i > 0 && timeMs <= this.timesMs[i - 1]!) this.strictlyRising = false;
    this.timesMs[i] = timeMs;
    this.rows[i] = row;
    return i * this.columns;
  }

  private grow(): void {
    const size = this.count * 2;
    const timesMs = new Float64Array(size);
    timesMs.set(this.timesMs);
    const rows = new Uint32Array(size);
    rows.set(this.rows);
    const values = new Float64Array(size * this.columns);
    values.set(this.values);
    Object.assign(this, { timesMs, rows, values });
  }

  /**
   * Puts the rows in the order of time and joins rows of one instant: of each column the later row's cell is kept,
   * unless it is blank. `onTwice` hears of every later row and whether it disagrees with the earlier ones.
   */
  settle(onTwice: (timeMs: number, row: number, differs: boolean) => void): void {
    if (this.strictlyRising) return;
    const order = Uint32Array.from({ length: this.count }, (_, i) => i);
    order.sort((a, b) => this.timesMs[a]! - this.timesMs[b]! || a - b);
    const { timesMs, rows, values, columns } = this;
    const sorted = new DayBuffer(columns);
    for (const i of order) {
      const last = sorted.count - 1;
      if (last >= 0 && sorted.timesMs[last] === timesMs[i]) {
        let differs = false;
        for (let c = 0; c < columns; c++) {
          const value = values[i * columns + c]!;
          const before = sorted.values[last * columns + c]!;
          if (value === BLANK) continue;
          if (before !== BLANK && !Object.is(value, before)) differs = true;
          sorted.values[last * columns + c] = value;
        }
        onTwice(timesMs[i]!, rows[i]!, differs);
        continue;
      }
      const base = sorted.addRow(timesMs[i]!, rows[i]!);
      for (let c = 0; c < columns; c++) sorted.values[base + c] = values[i * columns + c]!;
    }
    Object.assign(this, { count: sorted.count, timesMs: sorted.timesMs, rows: sorted.rows, values: sorted.values });
    this.strictlyRising = true;
  }
}

/** The last reading of each column on a day, which may reach into the next day: time from the day's start, value, row. */
export interface DayTail {
  timesMs: Float64Array;
  values: Float64Array;
  rows: Uint32Array;
}

/** Works on a day that is not settled yet, too. Time is -Infinity where a column has no cell at all. */
export function tailOf(day: DayBuffer): DayTail {
  const { columns, count } = day;
  const timesMs = new Float64Array(columns).fill(Number.NEGATIVE_INFINITY);
  const values = new Float64Array(columns).fill(Number.NaN);
  const rows = new Uint32Array(columns);
  let missing = columns;
  // From the end, so that a day in order is done after a few rows.
  for (let i = count - 1; i >= 0 && (missing > 0 || !day.isInOrder); i--) {
    for (let c = 0; c < columns; c++) {
      const value = day.values[i * columns + c]!;
      // Of rows at one time the later one counts, which is met first.
      if (value === BLANK || day.timesMs[i]! <= timesMs[c]!) continue;
      if (timesMs[c] === Number.NEGATIVE_INFINITY) missing--;
      timesMs[c] = day.timesMs[i]!;
      values[c] = value;
      rows[c] = day.rows[i]!;
    }
  }
  return { timesMs, values, rows };
}
