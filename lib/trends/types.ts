import type { MappedRole } from '../point-roles';
import type { TrendUnitId } from '../units';

/** How the bytes of a file become rows of cells. Row numbers count from 1 as a text editor shows them. */
export interface Dialect {
  encoding: 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252';
  delimiter: ',' | ';' | '\t' | '|';
  decimal: '.' | ',';
  /** Row that holds the column names; the lower one of two; 0 when the file has none. */
  headerRow: number;
  /** Row above it that names groups of columns ("Chiller 1" over "Supply", "Return"), when there is one. */
  upperHeaderRow?: number | null;
  /** Row that holds units, when there is one before or after the header. */
  unitRow: number | null;
  firstDataRow: number;
}

/**
 * What the cells of a table are.
 *   wide  one column a point; with a single point perhaps a column with the status of each reading
 *   long  one row a reading: a column names the point, another holds the value, perhaps others a status and a unit
 */
export type TableShape =
  | { kind: 'wide'; status?: string | null }
  | { kind: 'long'; point: string; value: string; status: string | null; unit: string | null };

/** Where the time stands and in which form. `form` is one of TIMESTAMP_FORMS. */
export interface TimestampPlan {
  /** One column, or a date and a time column in this order. */
  columns: string[];
  form: TimestampForm;
  /** Year of the first row, for the forms that have none; the years after it follow from the months. */
  year?: number | null;
  /** Whether a time is the start of its interval (or the moment of a reading), or its end: then it belongs to the interval before. */
  stamps?: 'start' | 'end';
  /** Added to every time: for a source whose clock is known to be off. */
  shiftMinutes?: number;
}

export const TIMESTAMP_FORMS = [
  'iso',
  'month/day/year',
  'day/month/year',
  'year/month/day',
  'month/day',
  'day/month',
  'epoch-s',
  'epoch-ms',
  'spreadsheet-serial',
] as const;
export type TimestampForm = (typeof TIMESTAMP_FORMS)[number];

export interface ColumnMapping {
  column: string;
  role: MappedRole;
  /** null for `ignore`. */
  unit: TrendUnitId | null;
  /** From 1; for roles that belong to one of several units or branches. */
  unitIndex?: number | null;
  /** Numbers that stand in place of a reading in this column, in the file's unit. */
  sentinels?: number[];
  /** One more of its role beside those that other files bring; else it goes on with the one there. */
  further?: boolean;
}

export interface ColumnPreview extends ColumnMapping {
  unitIndex: number | null;
  /** 0 to 1; under 0.5 a person has to decide. */
  confidence: number;
  /** A sentence for a person: why this role and unit. */
  reason: string;
  /** Up to 96 evenly spaced values of the column as stored in the file (null = missing), for a sparkline. */
  samples: (number | null)[];
  low: number | null;
  high: number | null;
  /** Index into `tables` of the table that holds it (of the first that does). */
  table?: number;
  /** Read so in an earlier file of this plant. */
  known?: boolean;
}

export type ProblemSeverity = 'error' | 'warning';
/** One kind of trouble, counted; `row` is the first row it was met in. The message says what to do. */
export interface TrendProblem {
  code: string;
  severity: ProblemSeverity;
  message: string;
  row?: number;
  column?: string;
  count: number;
}

/** One heading of a drop: the files, archive members or sheets that share it. */
export interface TablePreview {
  /** Names of the files that have this heading, in the order they came. */
  files: string[];
  shape: TableShape;
  dialect: Dialect;
  timestamp: TimestampPlan;
  fingerprint: string;
  /** The heading's name of each column that is read, and the name it goes by in the drop. */
  names: { cell: string; column: string }[];
  stepMinutes: number | null;
  rows: string[][];
  firstRows: number;
}

export interface TrendPreview {
  /** One a heading. `dialect`, `timestamp`, `rows` and `firstRows` beside it are those of the first. */
  tables: TablePreview[];
  dialect: Dialect;
  timestamp: TimestampPlan;
  timeZone: string;
  columns: ColumnPreview[];
  /** Most common distance between rows. */
  stepMinutes: number | null;
  /** SHA-256 hex of the normalised header: equal headers share a remembered mapping. */
  fingerprint: string;
  /** The first data rows as read, for "as read" on the mapping page; at most 5. */
  rows: string[][];
  /** How many data rows the preview looked at. */
  firstRows: number;
  problems: TrendProblem[];
}

/** What a preview has to know of the plant besides the file. */
export interface PreviewOptions {
  /** Now: dates without a year are taken for the latest that are not in the future. Left out, they cannot be read. */
  nowMs?: number;
  /** Whether the head is the whole file; otherwise its last, cut row is left aside. */
  complete: boolean;
  timeZone: string;
  /** Number of production units. */
  unitCount: number;
  /** Design flow of one unit; steps of that size tell primary flow and its unit. */
  unitFlowGpm?: number;
  /** Design production supply temperature. */
  productionSupplyF?: number;
  plantStepMinutes: number;
}

/** All that reading one file needs; the confirmed shape of a preview. */
export interface ReadPlan {
  /** Wide when left out. */
  shape?: TableShape;
  dialect: Dialect;
  timestamp: TimestampPlan;
  timeZone: string;
  columns: ColumnMapping[];
  /** Usual distance of the file's rows, as its preview found it. */
  sourceStepMinutes?: number | null;
  /** The plant's step, which divides 1440. */
  stepMinutes: number;
}

/**
 * One mapped column's values for one UTC day (or a further part of it, when rows of that day came again after it had
 * been handed out: later values that are not NaN replace earlier ones), in the stored unit (lib/units), NaN where missing;
 * length 1440 / step. Days of which a column has no value at all are not handed out.
 */
export interface DayOfColumn {
  /** Index into ReadPlan.columns. */
  column: number;
  /** UTC day, YYYY-MM-DD. */
  day: string;
  values: Float32Array;
}

export interface ReadReport {
  /** Data rows whose time and number of cells could be read. */
  rowsRead: number;
  /** Slots handed out that hold a number. */
  samplesStored: number;
  /** First and last instant met, whatever the order in the file. */
  fromMs: number | null;
  toMs: number | null;
  /** Sorted by row; at most MOST_PROBLEM_KINDS kinds. */
  problems: TrendProblem[];
}

/** Turns the bytes of one file into days of columns; made by createTrendReader. */
export interface TrendReader {
  /** The next bytes, cut anywhere. */
  push(bytes: Uint8Array): void;
  /** Closes the least recently touched days beyond `keepOpen` and hands them out, oldest touched first. */
  takeOldestDays(keepOpen: number): DayOfColumn[];
  /** Ends the file and hands out all days that are still open. */
  finish(): DayOfColumn[];
  /** Data rows read so far. */
  readonly rowsRead: number;
  /** What was read so far; complete after finish. */
  report(): ReadReport;
}

export type TrendErrorCode =
  'empty' | 'not-text' | 'no-time-column' | 'no-header' | 'no-column' | 'no-rows' | 'truncated' | 'unsupported';

/** A file that cannot be read at all. `message` is a sentence for the person who dropped it. */
export class TrendError extends Error {
  override readonly name = 'TrendError';
  constructor(
    readonly code: TrendErrorCode,
    message: string,
    readonly row?: number,
  ) {
    super(message);
  }
}
