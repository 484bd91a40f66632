import { cellKind, dataShare, decimalOf } from './cells';
import { joinedHeading, plainName } from './headings';
import { isBlankRow, linesOfRow, newlineOf, wholeRows } from './rows';
import { TrendError, type Dialect } from './types';
import { unitOfCell } from './unit-text';

const DELIMITERS = [',', ';', '\t', '|'] as const;
/** Rows on which delimiter and heading are judged. */
const LOOKED_AT_ROWS = 400;
/** A row is data when at least this share of its filled cells is. */
const DATA_SHARE = 0.5;
/** A heading may be this much narrower than the data under it. */
const HEADING_WIDTH_SHARE = 0.5;

/** A row with its number as a text editor shows it. */
export interface NumberedRow {
  cells: string[];
  row: number;
}

export interface RecognisedTable {
  dialect: Omit<Dialect, 'encoding'>;
  /** Names of two heading rows are joined. */
  heading: readonly string[];
  /** Filled rows before the heading. */
  preamble: string[][];
  units: string[] | null;
  /** Whole data rows of the head that have the usual number of cells. */
  data: NumberedRow[];
}

/**
 * Finds delimiter, heading, unit row, first data row and decimal sign in the decoded head of a file.
 *
 * Throws  TrendError `empty`, `no-header`, `no-rows` or `unsupported`, each in a sentence.
 */
export function recogniseTable(head: string, complete: boolean): RecognisedTable {
  const text = head.replace(/^\ufeff/, '');
  refuseOtherText(text);
  const newline = newlineOf(text);
  const sample = text.slice(0, lastLineEnd(text, newline));
  const delimiter = chooseDelimiter((each) => wholeRows(sample, each, complete || sample.endsWith(newline)));
  const rows = numbered(wholeRows(text, delimiter, complete));
  const filled = rows.filter(({ cells }) => !isBlankRow(cells));
  if (filled.length === 0)
    throw new TrendError('empty', 'The file holds nothing but blank lines. Export the trend again.');

  const width = usualWidth(filled.slice(0, LOOKED_AT_ROWS).map(({ cells }) => cells));
  const first = firstDataIndex(filled, width);
  const { heading, upper, unitRow } = findHeading(filled, first, width);
  const below = filled.slice(first);
  const shaped = below.filter(({ cells }) => cells.length === width || cells.length === heading?.cells.length);
  const data = shaped.length > 0 ? shaped : below;
  return {
    dialect: {
      delimiter,
      decimal: decimalOf(data.slice(0, LOOKED_AT_ROWS).flatMap(({ cells }) => cells)),
      headerRow: heading?.row ?? 0,
      upperHeaderRow: upper?.row ?? null,
      unitRow: unitRow?.row ?? null,
      firstDataRow: below[0]!.row,
    },
    // A file without a heading has one of empty cells: its columns go by their numbers.
    heading: heading ? joinedHeading(upper?.cells ?? [], heading.cells) : Array<string>(width).fill(''),
    preamble: filled.filter(({ row }) => row < (upper ?? heading ?? filled[first]!).row).map(({ cells }) => cells),
    units: unitRow?.cells ?? null,
    data,
  };
}

/** Enough text for the rows looked at, cut at a line end where there is one. */
function lastLineEnd(text: string, newline: string): number {
  let at = 0;
  for (let line = 0; line < LOOKED_AT_ROWS; line++) {
    const end = text.indexOf(newline, at);
    if (end === -1) return text.length;
    at = end + 1;
  }
  return at;
}

function refuseOtherText(text: string): void {
  const start = text.trimStart().slice(0, 200).toLowerCase();
  if (start === '') throw new TrendError('empty', 'The file holds nothing but blanks. Export the trend again.');
  const kind =
    start.startsWith('<!doctype') || start.startsWith('<html')
      ? 'a web page'
      : start.startsWith('<?xml')
        ? 'an XML document'
        : /^[{[]\s*["{[]/.test(start)
          ? 'JSON'
          : null;
  if (kind)
    throw new TrendError(
      'unsupported',
      `This is ${kind}, not a table. Export the trend as CSV text and drop that file.`,
    );
}

function numbered(rows: string[][]): NumberedRow[] {
  let row = 1;
  return rows.map((cells) => {
    const here = { cells, row };
    row += linesOfRow(cells);
    return here;
  });
}

/** The delimiter under which most rows have the same number of cells and the cells are data. */
function chooseDelimiter(rowsWith: (delimiter: string) => string[][]): Dialect['delimiter'] {
  let best: { delimiter: Dialect['delimiter']; score: number } = { delimiter: ',', score: 0 };
  for (const delimiter of DELIMITERS) {
    const rows = rowsWith(delimiter).filter((cells) => !isBlankRow(cells));
    const width = usualWidth(rows);
    if (width < 2) continue;
    const alike = rows.filter((cells) => cells.length === width);
    const data = alike.reduce((sum, cells) => sum + dataShare(cells.map(uncut)), 0) / alike.length;
    const score = (alike.length / rows.length) * (0.1 + data) * (1 - 1 / (2 * width));
    if (score > best.score) best = { delimiter, score };
  }
  return best.delimiter;
}

/** A cell with another delimiter in it is not data: it is several cells. */
const uncut = (cell: string): string => (/[\t|;]/.test(cell) ? 'text' : cell);

/** The most common number of cells, among rows that have more than one if there are any. */
function usualWidth(rows: readonly (readonly string[])[]): number {
  const counts = new Map<number, number>();
  for (const { length } of rows) counts.set(length, (counts.get(length) ?? 0) + 1);
  const many = [...counts].filter(([width]) => width > 1);
  const [width] = (many.length > 0 ? many : [...counts]).reduce(
    (best, each) => (each[1] > best[1] ? each : best),
    [1, 0],
  );
  return width;
}

const looksLikeData = (cells: readonly string[], width: number): boolean =>
  cells.length >= Math.max(2, width * HEADING_WIDTH_SHARE) &&
  dataShare(cells) >= DATA_SHARE &&
  cells.some((cell) => ['number', 'time'].includes(cellKind(cell)));

function firstDataIndex(rows: readonly NumberedRow[], width: number): number {
  const first = rows.findIndex(({ cells }, i) => {
    const next = rows[i + 1];
    return looksLikeData(cells, width) && (!next || looksLikeData(next.cells, width) || i + 1 >= LOOKED_AT_ROWS);
  });
  if (first !== -1) return first;
  const heading = rows.find(({ cells }) => cells.filter((cell) => cell.trim() !== '').length >= 2);
  if (!heading)
    throw new TrendError(
      'no-header',
      'No row of column names was found: no row holds more than one cell. Export the trend as a table with a heading, one column a point.',
    );
  const what = `Row ${heading.row} holds words but no row of readings follows it.`;
  throw new TrendError('no-rows', `${what} Export a period that holds data.`, heading.row);
}

interface FoundHeading {
  /** Null when the first row already holds readings. */
  heading: NumberedRow | null;
  /** A row above it that names groups of columns. */
  upper: NumberedRow | null;
  unitRow: NumberedRow | null;
}

/** The heading is the last row of words before the data; rows of units and of group names may stand around it. */
function findHeading(rows: readonly NumberedRow[], first: number, width: number): FoundHeading {
  const wordy = ({ cells }: NumberedRow) => {
    const filled = cells.filter((cell) => cell.trim() !== '');
    const readings = filled.filter((cell) => ['number', 'time'].includes(cellKind(cell)));
    return (
      cells.length >= Math.max(2, width * HEADING_WIDTH_SHARE) &&
      filled.length >= 2 &&
      readings.length * 2 < filled.length
    );
  };
  let at = first - 1;
  while (at >= 0 && !wordy(rows[at]!)) at--;
  const last = rows[at];
  if (!last) return { heading: null, upper: null, unitRow: null };
  const before = (index: number): NumberedRow | null => {
    const row = rows[index];
    return row && wordy(row) ? row : null;
  };
  const above = before(at - 1);
  const [heading, unitBelow, next] =
    above && isUnitRow(last.cells) ? [above, last, before(at - 2)] : [last, null, above];
  // Units may stand above the names too; names of groups above either.
  const unitAbove = !unitBelow && next && isUnitRow(next.cells) ? next : null;
  const groups = unitAbove ? before(at - 2) : next;
  const upper = groups && isUpperHeading(groups.cells, heading.cells) ? groups : null;
  return { heading, upper, unitRow: unitBelow ?? unitAbove };
}

/**
 * Whether a row names groups of the columns below it: as wide as they are, filled beyond the first two cells (which a line
 * about the file fills), and needed: names below it come twice without it, or it has a cell over most of them.
 */
function isUpperHeading(upper: readonly string[], lower: readonly string[]): boolean {
  const filled = upper.flatMap((cell, i) => (cell.trim() === '' ? [] : [i]));
  if (upper.length < 2 || Math.abs(upper.length - lower.length) > 1) return false;
  if (!filled.some((i) => i >= 2) || upper.some((cell) => /:\s*\S/.test(cell))) return false;
  if (isUnitRow(upper)) return false;
  const names = lower.map((cell) => plainName(cell).toLowerCase()).filter((name) => name !== '');
  const repeats = new Set(names).size < names.length;
  const nameless = lower.some((cell, i) => cell.trim() === '' && (upper[i] ?? '').trim() !== '');
  return repeats || nameless || filled.length * 2 >= lower.length;
}

/** At least half of the filled cells, and two of them, are units. */
function isUnitRow(cells: readonly string[]): boolean {
  const filled = cells.filter((cell) => cell.trim() !== '');
  const units = filled.filter((cell) => unitOfCell(cell) !== null);
  return units.length >= Math.min(2, filled.length) && units.length * 2 >= filled.length;
}
