import { z } from 'zod';
import { IGNORE_ROLE, POINT_ROLE_NAMES } from '../point-roles';
import { TREND_UNIT_IDS } from '../units';
import { TIMESTAMP_FORMS } from '../trends/types';
import { TimeZone } from './common';

export const UPLOAD_STATUSES = [
  'receiving',
  'received',
  'needs-mapping',
  'importing',
  'analysing',
  'done',
  'failed',
] as const;
export type UploadStatus = (typeof UPLOAD_STATUSES)[number];
export const FINAL_UPLOAD_STATUSES: readonly UploadStatus[] = ['done', 'failed', 'needs-mapping'];

export const UploadProblem = z.object({
  code: z.string(),
  severity: z.enum(['error', 'warning']),
  message: z.string(),
  row: z.number().int().optional(),
  column: z.string().optional(),
  count: z.number().int(),
});

export const Upload = z.object({
  id: z.uuid(),
  plantId: z.uuid(),
  filename: z.string(),
  sizeBytes: z.number().int(),
  sha256: z.string().nullable(),
  status: z.enum(UPLOAD_STATUSES),
  /** 0 to 1 within the present status. */
  progress: z.number(),
  rowsRead: z.number().int(),
  samplesStored: z.number().int(),
  from: z.string().nullable(),
  to: z.string().nullable(),
  problems: z.array(UploadProblem),
  createdAt: z.string(),
  finishedAt: z.string().nullable(),
});
export type Upload = z.infer<typeof Upload>;

const Role = z.enum([...POINT_ROLE_NAMES, IGNORE_ROLE] as const);
const TrendUnit = z.enum(TREND_UNIT_IDS).nullable();
export const TimestampPlan = z.object({
  columns: z.array(z.string()).min(1).max(2),
  form: z.enum(TIMESTAMP_FORMS),
  /** Year of the first row, for forms without one. */
  year: z.number().int().min(1970).max(2199).nullable().optional(),
  stamps: z.enum(['start', 'end']).optional(),
  /** Added to every time: at most two days. */
  shiftMinutes: z.number().min(-2880).max(2880).optional(),
});
const Dialect = z.object({
  encoding: z.string(),
  delimiter: z.string(),
  decimal: z.string(),
  headerRow: z.number().int(),
  upperHeaderRow: z.number().int().nullable().optional(),
  unitRow: z.number().int().nullable(),
  firstDataRow: z.number().int(),
});
const TableShape = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('wide'), status: z.string().nullable().optional() }),
  z.object({
    kind: z.literal('long'),
    point: z.string(),
    value: z.string(),
    status: z.string().nullable(),
    unit: z.string().nullable(),
  }),
]);
/** One heading of a drop: the files that share it, how they are written, and what its columns go by in the drop. */
export const PreviewTable = z.object({
  files: z.array(z.string()),
  shape: TableShape,
  dialect: Dialect,
  timestamp: TimestampPlan,
  fingerprint: z.string(),
  names: z.array(z.object({ cell: z.string(), column: z.string() })),
  stepMinutes: z.number().nullable(),
  rows: z.array(z.array(z.string())),
  firstRows: z.number().int(),
});

export const PreviewColumn = z.object({
  column: z.string(),
  role: Role,
  unit: TrendUnit,
  unitIndex: z.number().int().nullable(),
  confidence: z.number(),
  reason: z.string(),
  samples: z.array(z.number().nullable()),
  low: z.number().nullable(),
  high: z.number().nullable(),
  /** Index into tables. */
  table: z.number().int().optional(),
  /** Answered by an earlier file of this plant. */
  known: z.boolean().optional(),
  /** Numbers that stand in place of a reading. */
  sentinels: z.array(z.number()).optional(),
});
export type PreviewColumn = z.infer<typeof PreviewColumn>;
/** The shape of a preview: keys a mapping does not need are ignored. */
export const ConfirmMapping = z.object({
  timestamp: TimestampPlan,
  timeZone: TimeZone,
  columns: z
    .array(
      z.object({
        column: z.string(),
        role: Role,
        unit: TrendUnit,
        unitIndex: z.number().int().min(1).max(200).nullable().optional(),
        /** One more of its role beside those that other files bring; else it goes on with the one there. */
        further: z.boolean().optional(),
      }),
    )
    .min(1),
  /** How each table's times are read, in the preview's order; `timestamp` stands for those left out. */
  tables: z.array(z.object({ timestamp: TimestampPlan })).optional(),
  remember: z.boolean().default(true),
});
export type ConfirmMapping = z.infer<typeof ConfirmMapping>;

export const Preview = z.object({
  tables: z.array(PreviewTable),
  dialect: Dialect,
  timestamp: TimestampPlan,
  timeZone: z.string(),
  stepMinutes: z.number().nullable(),
  columns: z.array(PreviewColumn),
  rows: z.array(z.array(z.string())),
  firstRows: z.number().int(),
  problems: z.array(UploadProblem),
  /** How the upload was read: what a person confirmed, or an earlier file's answers; absent until there is one. */
  confirmed: ConfirmMapping.optional(),
  /** Roles that points of other files carry already, by names that this drop does not hold. */
  carried: z.array(z.object({ role: Role, unitIndex: z.number().int(), names: z.array(z.string()) })).optional(),
});
export type Preview = z.infer<typeof Preview>;
