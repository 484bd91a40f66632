import { createHash } from 'node:crypto';
import { clockDoubts, type ClockDoubt } from './clock-doubts';
import { dropTables, type DropFile, type DropTable } from './drop';
import type { NumberedRow } from './dialect';
import type { Encoding } from './encoding';
import { PointScan, type ScannedPoint } from './point-scan';
import { createTrendReader } from './reader';
import { sentenceOf, suggestRoles, type Candidate } from './roles/suggest';
import { columnStatistics, evenSamples } from './roles/statistics';
import { detectSentinels } from './sentinels';
import { recogniseFile, type FileTable } from './table';
import { StampParser } from './timestamps';
import {
  TrendError,
  type ColumnPreview,
  type PreviewOptions,
  type TablePreview,
  type TrendPreview,
  type TrendProblem,
} from './types';
import { unitOfCell, unitOfHeading } from './unit-text';

const MOST_SAMPLES = 96;
const SHOWN_ROWS = 5;
/** Rows of a heading's files that are looked at together. */
const MOST_ROWS = 20_000;

/** A file of a drop: its first bytes, and for a long table its points where the whole file was scanned for them. */
export interface FileHead {
  name: string;
  head: Uint8Array;
  complete: boolean;
  /** What was recognised of the head already. */
  table?: FileTable;
  points?: ScannedPoint[];
}

/** What the first megabyte of a single file shows; see previewDrop. */
export const previewTrend = (head: Uint8Array, options: PreviewOptions): TrendPreview =>
  previewDrop([{ name: '', head, complete: options.complete }], options);

/**
 * What the first megabyte of each file of a drop shows: how it is written, where its time stands, what each column or point
 * probably is and why, and what went wrong in those rows. The files must be unpacked already.
 *
 * `columns` holds every column but those of the time, or every point of a long table. A column under confidence 0.5 needs a
 * person. A file that cannot be read is left out with a problem that says so, unless none can.
 * Throws  TrendError, in words, when no file can be read at all.
 */
export function previewDrop(heads: readonly FileHead[], options: PreviewOptions): TrendPreview {
  const problems: TrendProblem[] = [];
  const files: DropFile[] = [];
  let refusal: TrendError | null = null;
  for (const file of heads) {
    try {
      files.push(dropFile(file, options));
    } catch (error) {
      if (!(error instanceof TrendError)) throw error;
      refusal ??= heads.length > 1 ? new TrendError(error.code, `"${file.name}": ${error.message}`, error.row) : error;
      const message = `"${file.name}" was left out. ${error.message}`;
      problems.push({ code: 'file-left-out', severity: 'error', message, count: 1 });
    }
  }
  if (files.length === 0)
    throw refusal ?? new TrendError('empty', 'The upload holds no file. Choose a file and send it again.');
  const tables = dropTables(files);
  const { columns, clocks } = suggestColumns(tables, options);
  for (const { message } of clocks) problems.push({ code: 'clock-offset', severity: 'warning', message, count: 1 });
  const shown = tables.map((table, index) => tablePreview(table, columns, index));
  const [first] = shown;
  for (const table of tables) problems.push(...tableProblems(table, columns, tables.indexOf(table), options));
  return {
    tables: shown,
    dialect: first!.dialect,
    timestamp: first!.timestamp,
    timeZone: options.timeZone,
    columns,
    stepMinutes: first!.stepMinutes,
    fingerprint: printOf(tables),
    rows: first!.rows,
    firstRows: first!.firstRows,
    problems: problems.sort((a, b) => (a.row ?? 0) - (b.row ?? 0)),
  };
}

function dropFile({ name, head, complete, table: seen, points }: FileHead, options: PreviewOptions): DropFile {
  const table = seen ?? recogniseFile(head, { ...options, complete });
  const found = table.shape.kind === 'wide' ? [] : (points ?? pointsOfHead(head, complete, table));
  return { name, head, complete, table, points: found };
}

function pointsOfHead(head: Uint8Array, complete: boolean, table: FileTable): ScannedPoint[] {
  const scan = new PointScan(table);
  scan.push(complete ? head : wholeLines(head, table.dialect.encoding));
  return scan.finish();
}

const printOf = (tables: readonly DropTable[]): string =>
  tables.length === 1
    ? tables[0]!.fingerprint
    : createHash('sha256')
        .update(
          tables
            .map(({ fingerprint }) => fingerprint)
            .sort()
            .join('\n'),
        )
        .digest('hex');

function tablePreview(table: DropTable, columns: readonly ColumnPreview[], index: number): TablePreview {
  const { table: first } = table.files[0]!;
  const own = new Set(columns.filter((each) => each.table === index).map(({ column }) => column));
  return {
    files: table.files.map(({ name }) => name),
    shape: first.shape,
    dialect: first.dialect,
    timestamp: first.time.plan,
    fingerprint: table.fingerprint,
    names: table.names.filter(({ column }) => own.has(column)),
    stepMinutes: first.stepMinutes,
    rows: first.data.slice(0, SHOWN_ROWS).map(({ cells }) => cells),
    firstRows: table.files.reduce((sum, file) => sum + file.table.data.length, 0),
  };
}

/** Role, unit and reason of every column of the drop, judged together. */
function suggestColumns(
  tables: readonly DropTable[],
  options: PreviewOptions,
): { columns: ColumnPreview[]; clocks: ClockDoubt[] } {
  const several = tables.length > 1;
  const found = tables.flatMap((table, index) => {
    const rows = table.files.flatMap((file) => file.table.data).slice(0, MOST_ROWS);
    // One array a table: columns of shared rows share their times.
    const times =
      several && table.files[0]!.table.shape.kind === 'wide' ? timesOf(table.files[0]!.table, rows) : undefined;
    return table.names.map((name) => ({
      ...candidateOf(table, name, index, rows, times),
      furtherTime: isTime(table, name.cell),
    }));
  });
  const roles = suggestRoles(found, options);
  const columns = found.map(({ column, statistics, sentinels, table, furtherTime }, i): ColumnPreview => {
    const shared = {
      column,
      samples: evenSamples(statistics.values, MOST_SAMPLES),
      low: statistics.count === 0 ? null : statistics.low,
      high: statistics.count === 0 ? null : statistics.high,
      table,
      ...(sentinels.length === 0 ? {} : { sentinels }),
    };
    if (furtherTime) {
      const reason = 'A further column of times.';
      return { ...shared, role: 'ignore', unit: null, unitIndex: null, confidence: 0.8, reason };
    }
    const draft = roles[i]!;
    const { role, unitIndex } = draft;
    const confidence = Math.round(Math.min(0.99, Math.max(0.05, draft.confidence)) * 100) / 100;
    const unit = role === 'ignore' ? null : draft.unit;
    return { ...shared, role, unit, unitIndex, confidence, reason: sentenceOf(draft) };
  });
  return { columns, clocks: several ? clockDoubts(roles) : [] };
}

const isTime = ({ files }: DropTable, cell: string): boolean =>
  files.some(({ table }) => table.shape.kind === 'wide' && table.time.others.includes(table.names.indexOf(cell)));

/** One column of a wide table, over the files that share its heading, or one point of a long one. */
function candidateOf(
  { files }: DropTable,
  { cell, column }: { cell: string; column: string },
  table: number,
  rows: readonly NumberedRow[],
  times: Float64Array | undefined,
): Candidate & { table: number; sentinels: number[] } {
  const first = files[0]!.table;
  const { decimal } = first.dialect;
  const long = first.shape.kind === 'long';
  const place = first.names.indexOf(cell);
  const scanned = files.flatMap(({ points }) => points.filter(({ name }) => name === cell));
  const unitCell = long ? (scanned[0]?.unitCell ?? '') : (first.units?.[place] ?? '');
  const unit = unitOfHeading(long ? column : cell).unit ?? unitOfCell(unitCell);
  const cells = long ? scanned.flatMap((point) => point.cells) : rows.map((row) => row.cells[place] ?? '');
  const timesMs = long ? Float64Array.from(scanned.flatMap((point) => point.timesMs)) : times;
  // A heading that does not name the point may still name its unit: "Value (°F)".
  const headed = !long && cell !== column && unit && unitCell === '' ? unit : unitCell;
  const all = columnStatistics(cells, decimal, unit);
  const sentinels = detectSentinels(all.values, unit);
  // What stands in place of a reading says nothing of the column.
  const real = cells.map((text, i) => (sentinels.includes(all.values[i] ?? Number.NaN) ? '' : text));
  const statistics = sentinels.length === 0 ? all : columnStatistics(real, decimal, unit);
  return { column, unitCell: headed, statistics, sentinels, timesMs, table };
}

function timesOf(table: FileTable, rows: readonly NumberedRow[]): Float64Array {
  const parser = StampParser.of(table.time.plan, table.dialect.decimal);
  return Float64Array.from(rows, ({ cells }) =>
    parser.parse(table.time.cells.map((cell) => cells[cell] ?? '').join(' ')) ? parser.ms : Number.NaN,
  );
}

/** Reads the first file's head of a table as the suggestion says and takes over what the reader found wrong. */
function tableProblems(
  table: DropTable,
  columns: readonly ColumnPreview[],
  index: number,
  options: PreviewOptions,
): TrendProblem[] {
  const { head, complete, table: first } = table.files[0]!;
  const cells = new Map(table.names.map(({ cell, column }) => [column, cell]));
  const own = columns.filter((each) => each.table === index);
  const reader = createTrendReader({
    shape: first.shape,
    dialect: first.dialect,
    timestamp: first.time.plan,
    timeZone: options.timeZone,
    columns: own.map((each) => ({ ...each, column: cells.get(each.column) ?? each.column })),
    sourceStepMinutes: first.stepMinutes,
    stepMinutes: options.plantStepMinutes,
  });
  reader.push(complete ? head : wholeLines(head, first.dialect.encoding));
  reader.finish();
  const report = reader.report();
  if (report.rowsRead === 0) {
    const [problem] = report.problems;
    const why = problem ? ` ${problem.message}` : '';
    const row = problem?.row ?? first.dialect.firstDataRow;
    throw new TrendError('no-rows', `No row of readings could be read.${why}`, row);
  }
  const row = first.dialect.firstDataRow;
  const column = first.time.plan.columns[0];
  const doubts = first.time.doubts.map(({ code, message }): TrendProblem => ({
    code,
    severity: 'warning',
    message,
    row,
    column,
    count: 1,
  }));
  return [...report.problems, ...doubts];
}

/** The head up to its last line end: the row behind it is cut. */
function wholeLines(head: Uint8Array, encoding: Encoding): Uint8Array {
  const wide = encoding.startsWith('utf-16');
  const end = Math.max(head.lastIndexOf(10), head.lastIndexOf(13));
  if (end === -1) return head;
  return head.subarray(0, wide ? end + (encoding === 'utf-16le' ? 2 : 1) : end + 1);
}
