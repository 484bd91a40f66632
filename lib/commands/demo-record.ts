import { deriveBlocks, writeLayers, type PointDay } from '../db/blocks';
import { query, queryOne } from '../db/sql';
import { withTenant } from '../db/tenant';
import type { ColumnMapping } from '../trends/types';
import { computeSlice } from './compute-slice';
import { ensurePoints } from './ensure-points';
import { settleAnalyses } from './finish-analysis';
import { markChangedDays } from './mark-days-stale';
import { readSlice } from './read-slice';
import { refreshCoverage } from './refresh-coverage';
import { startAnalysis } from './start-analysis';
import { writeSlice } from './write-slice';

interface Owner {
  organizationId: string;
  plantId: string;
}
interface RecordPoint extends ColumnMapping {
  key: string;
}

/** Days written in one transaction. */
const DAYS_AT_ONCE = 14;

/**
 * Stores a generated record as one upload of a plant, by the same layers and blocks as a file, and starts its analysis. Does
 * nothing when the plant has its record already, and starts again when an earlier attempt was cut off.
 */
export async function storeRecord(
  owner: Owner & { stepMinutes: number },
  record: {
    filename: string;
    points: readonly RecordPoint[];
    fromMs: number;
    toMs: number;
    days: Iterable<{ day: string; values: Record<string, Float32Array> }>;
  },
  onProgress: (days: number) => void,
): Promise<'stored' | 'there-already'> {
  const tenancy = { organizationIds: [owner.organizationId] };
  const upload = await withTenant(tenancy, async (em) => {
    const found = await queryOne<{ id: string; upload_seq: number; applied: boolean }>(
      em,
      `select id, upload_seq, applied from upload where organization_id = $1 and plant_id = $2 and filename = $3 and removed_at is null`,
      [owner.organizationId, owner.plantId, record.filename],
    );
    if (found) return found;
    return queryOne<{ id: string; upload_seq: number; applied: boolean }>(
      em,
      `with next as (update plant set next_upload_seq = next_upload_seq + 1 where id = $2 and organization_id = $1 returning next_upload_seq - 1 as seq)
       insert into upload (organization_id, plant_id, upload_seq, filename, status) select $1, $2, seq, $3, 'importing' from next
       returning id, upload_seq, applied`,
      [owner.organizationId, owner.plantId, record.filename],
    );
  });
  if (!upload) throw new Error(`storeRecord: no plant ${owner.plantId}`);
  if (upload.applied) return 'there-already';

  const pointIds = await withTenant(tenancy, async (em) => {
    await query(em, `delete from sample_layer where plant_id = $1 and upload_seq = $2`, [
      owner.plantId,
      upload.upload_seq,
    ]);
    return ensurePoints(em, owner, record.points);
  });
  const allDays: string[] = [];
  let samples = 0;
  let batch: PointDay[] = [];
  const flush = async () => {
    const rows = batch;
    batch = [];
    await withTenant(tenancy, (em) => writeLayers(em, { ...owner, uploadSeq: upload.upload_seq }, rows));
    onProgress(allDays.length);
  };
  for (const { day, values } of record.days) {
    allDays.push(day);
    record.points.forEach((point, index) => {
      const pointId = pointIds[index];
      const column = values[point.key];
      if (!pointId || !column) return;
      samples += column.reduce((count, value) => count + (Number.isNaN(value) ? 0 : 1), 0);
      batch.push({ pointId, day, values: column });
    });
    if (allDays.length % DAYS_AT_ONCE === 0) await flush();
  }
  await flush();
  await withTenant(tenancy, async (em) => {
    await query(
      em,
      `update upload set applied = true, status = 'analysing', samples_stored = $2, rows_read = $3, data_from = $4, data_to = $5, progress = 0 where id = $1`,
      [
        upload.id,
        samples,
        (allDays.length * 1440) / owner.stepMinutes,
        new Date(record.fromMs).toISOString(),
        new Date(record.toMs).toISOString(),
      ],
    );
    await markChangedDays(em, owner, await deriveBlocks(em, owner, allDays));
    await refreshCoverage(em, { id: owner.plantId, organizationId: owner.organizationId });
    await startAnalysis(em, { ...owner, uploadId: upload.id, onlyStale: true });
  });
  return 'stored';
}

/** Analyses a plant's stale days here and now, slice by slice, as the worker would. */
export async function analyseNow(owner: Owner, onProgress: (daysLeft: number) => void): Promise<void> {
  for (;;) {
    const input = await readSlice(owner);
    const result = input && computeSlice(input);
    const state = await withTenant({ organizationIds: [owner.organizationId] }, async (em) => {
      if (input && result) await writeSlice(em, input, result);
      const left = await queryOne<{ days: number }>(
        em,
        `select count(*)::integer as days from stale_day where plant_id = $1`,
        [owner.plantId],
      );
      onProgress(left?.days ?? 0);
      return settleAnalyses(em, owner);
    });
    if (state === 'done') return;
  }
}
