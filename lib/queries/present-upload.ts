import type { z } from 'zod';
import { isoInstant } from '../db/sql';
import type { Upload as UploadSchema } from '../schemas/upload';

export type UploadRecord = z.infer<typeof UploadSchema>;

/** An upload as SQL gives it. */
export interface UploadRow {
  id: string;
  plant_id: string;
  filename: string;
  /** One with a `fileIndex` came out of another by unpacking. */
  files: { receivedBytes?: number; sizeBytes: number; fileIndex?: number }[];
  size_bytes: string;
  sha256: string | null;
  status: UploadRecord['status'];
  progress: number;
  rows_read: string;
  samples_stored: string;
  data_from: string | null;
  data_to: string | null;
  problems: UploadRecord['problems'];
  created_at: string;
  finished_at: string | null;
}

/** The columns of UploadRow. */
export const UPLOAD_COLUMNS = `id, plant_id, filename, files, size_bytes, sha256, status, progress, rows_read, samples_stored,
  data_from, data_to, problems, created_at, finished_at`;

/** The upload as the API shows it; its size is the size as sent, packed where it came packed. */
export function presentUpload(row: UploadRow): UploadRecord {
  const sent = row.files.filter(({ fileIndex }) => fileIndex === undefined);
  const sizeBytes =
    sent.length > 0
      ? sent.reduce((sum, file) => sum + (file.receivedBytes ?? file.sizeBytes), 0)
      : Number(row.size_bytes);
  return {
    id: row.id,
    plantId: row.plant_id,
    filename: row.filename,
    sizeBytes,
    sha256: row.sha256,
    status: row.status,
    progress: row.progress,
    rowsRead: Number(row.rows_read),
    samplesStored: Number(row.samples_stored),
    from: isoInstant(row.data_from),
    to: isoInstant(row.data_to),
    problems: row.problems,
    createdAt: isoInstant(row.created_at),
    finishedAt: isoInstant(row.finished_at),
  };
}
