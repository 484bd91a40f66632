import { recogniseTable, type NumberedRow, type RecognisedTable } from './dialect';
import { detectEncoding, type Encoding } from './encoding';
import { columnNames, headingFingerprint } from './headings';
import { createTrendReader } from './reader';
import { sentenceOf, suggestRoles } from './roles/suggest';
import { columnStatistics, evenSamples } from './roles/statistics';
import { StepCounter } from './step';
import { findTime, type FoundTime } from './time-column';
import { MINUTE_MS, StampParser } from './timestamps';
import { unitOfCell, unitOfHeading } from './unit-text';
import {
  TrendError,
  type ColumnPreview,
  type PreviewOptions,
  type TablePreview,
  type TrendPreview,
  type TrendProblem,
} from './types';

const MOST_SAMPLES = 96;
const SHOWN_ROWS = 5;

/**
 * What the first megabyte of a file shows: how it is written, where its time stands, what each column probably is and
 * why, and what went wrong in those rows. The file must be unpacked already.
 *
 * `columns` holds every column but those of the time. A column under confidence 0.5 needs a person.
 * Throws  TrendError, in words, for a file that cannot be read at all.
 */
export function previewTrend(head: Uint8Array, options: PreviewOptions): TrendPreview {
  const encoding = detectEncoding(head);
  const table = recogniseTable(new TextDecoder(encoding).decode(head, { stream: !options.complete }), options.complete);
  const names = columnNames(table.heading);
  const time = findTime(names, table.data, options.timeZone, table.dialect.decimal);
  const columns = suggestColumns(names, table, time, options);
  const dialect = { encoding, ...table.dialect };
  const stepMinutes = usualStep(table.data, time, table.dialect.decimal);
  const fingerprint = headingFingerprint(names, table.units);
  const rows = table.data.slice(0, SHOWN_ROWS).map(({ cells }) => cells);
  const first: TablePreview = {
    files: [],
    shape: { kind: 'wide' },
    dialect,
    timestamp: time.plan,
    fingerprint,
    names: columns.map(({ column }) => ({ cell: column, column })),
    stepMinutes,
    rows,
    firstRows: table.data.length,
  };
  const preview: TrendPreview = {
    tables: [first],
    dialect,
    timestamp: time.plan,
    timeZone: options.timeZone,
    columns,
    stepMinutes,
    fingerprint,
    rows,
    firstRows: table.data.length,
    problems: [],
  };
  preview.problems = [...headProblems(head, encoding, preview, options), ...doubts(time, table)].sort(
    (a, b) => (a.row ?? 0) - (b.row ?? 0),
  );
  return preview;
}

function suggestColumns(
  names: readonly string[],
  table: RecognisedTable,
  time: FoundTime,
  options: PreviewOptions,
): ColumnPreview[] {
  const { decimal } = table.dialect;
  const places = names.map((_, cell) => cell).filter((cell) => !time.cells.includes(cell));
  const candidates = places.map((cell) => {
    const column = names[cell]!;
    const unitCell = table.units?.[cell] ?? '';
    const unit = unitOfHeading(column).unit ?? unitOfCell(unitCell);
    const cells = table.data.map((row) => row.cells[cell] ?? '');
    return { column, unitCell, statistics: columnStatistics(cells, decimal, unit) };
  });
  const roles = suggestRoles(candidates, options);
  return candidates.map(({ column, statistics }, i) => {
    const draft = roles[i]!;
    const shared = {
      column,
      samples: evenSamples(statistics.values, MOST_SAMPLES),
      low: statistics.count === 0 ? null : statistics.low,
      high: statistics.count === 0 ? null : statistics.high,
    };
    if (time.others.includes(places[i]!))
      return {
        ...shared,
        role: 'ignore',
        unit: null,
        unitIndex: null,
        confidence: 0.8,
        reason: 'A further column of times.',
      };
    const { role, unitIndex } = draft;
    const confidence = Math.round(Math.min(0.99, Math.max(0.05, draft.confidence)) * 100) / 100;
    return {
      ...shared,
      role,
      unit: role === 'ignore' ? null : draft.unit,
      unitIndex,
      confidence,
      reason: sentenceOf(draft),
    };
  });
}

function usualStep(data: readonly NumberedRow[], time: FoundTime, decimal: '.' | ','): number | null {
  const parser = new StampParser(time.plan.form, decimal);
  const step = new StepCounter();
  let previousMs = Number.NaN;
  for (const { cells } of data) {
    if (!parser.parse(time.cells.map((cell) => cells[cell] ?? '').join(' '))) continue;
    if (!Number.isNaN(previousMs)) step.add(parser.ms - previousMs);
    previousMs = parser.ms;
  }
  return step.usualMs === 0 ? null : step.usualMs / MINUTE_MS;
}

/** Reads the head as the suggestion says and takes over what the reader found wrong. */
function headProblems(
  head: Uint8Array,
  encoding: Encoding,
  preview: TrendPreview,
  options: PreviewOptions,
): TrendProblem[] {
  const { dialect, timestamp, timeZone, columns } = preview;
  const plan = { dialect, timestamp, timeZone, columns, stepMinutes: options.plantStepMinutes };
  const reader = createTrendReader(plan);
  reader.push(options.complete ? head : wholeLines(head, encoding));
  reader.finish();
  const report = reader.report();
  if (report.rowsRead === 0) {
    const first = report.problems[0];
    const why = first ? ` ${first.message}` : '';
    throw new TrendError('no-rows', `No row of readings could be read.${why}`, first?.row ?? dialect.firstDataRow);
  }
  return report.problems;
}

/** The head up to its last line end: the row behind it is cut. */
function wholeLines(head: Uint8Array, encoding: Encoding): Uint8Array {
  const wide = encoding.startsWith('utf-16');
  const end = Math.max(head.lastIndexOf(10), head.lastIndexOf(13));
  if (end === -1) return head;
  return head.subarray(0, wide ? end + (encoding === 'utf-16le' ? 2 : 1) : end + 1);
}

function doubts(time: FoundTime, table: RecognisedTable): TrendProblem[] {
  const row = table.dialect.firstDataRow;
  const column = time.plan.columns[0];
  return time.doubts.map(({ code, message }) => ({ code, severity: 'warning', message, row, column, count: 1 }));
}
