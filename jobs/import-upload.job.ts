import { UploadEntity, PlantEntity, type Plant, type Upload } from '@/entities';
import {
  applyUpload,
  clearLayers,
  resumeApplying,
  startAnalysisOfStale,
  takeOutUpload,
} from '@/lib/commands/apply-upload';
import { planImport } from '@/lib/commands/import-plan';
import { importSamples, type ImportResult } from '@/lib/commands/import-samples';
import { unpackUpload } from '@/lib/commands/unpack-upload';
import { enqueue } from '@/lib/db/enqueue';
import { query, queryOne } from '@/lib/db/sql';
import { withTenant } from '@/lib/db/tenant';
import { TrendError, type TrendProblem } from '@/lib/trends/types';
import { defineJob, PermanentFailure, type JobContext } from './define-job';

/**
 * Safe to run twice, or twice at once: samples are layers keyed by (point, day, upload), and every write is fenced to the
 * attempt that owns the job.
 */
export const importUpload = defineJob({
  name: 'import-upload',
  async run(context, { organizationId, uploadId }) {
    const found = await load(organizationId, uploadId);
    if (!found) return; // the plant or the upload is gone: nothing is left to do
    const { upload, plant } = found;
    if (upload.removedAt !== null || (upload.status === 'failed' && !upload.applied))
      return takeOutUpload(upload, plant, context);
    if (upload.status !== 'received' && upload.status !== 'importing') return; // an earlier delivery of this job has done it
    if (upload.applied) return resumeApplying(upload, plant, context);
    try {
      await importFile(upload, plant, context);
    } catch (error) {
      if (error instanceof TrendError) throw new PermanentFailure(error.message);
      throw error;
    }
  },
  async giveUp(em, { organizationId, uploadId }, message) {
    const failed = await query(
      em,
      `update upload set status = 'failed', applied = false, finished_at = now(), problems = $3::jsonb || problems
       where id = $1 and organization_id = $2 and status in ('received', 'importing') returning id`,
      [uploadId, organizationId, JSON.stringify([{ code: 'unreadable', severity: 'error', message, count: 1 }])],
    );
    // Whatever it had stored is taken out by one more job: a failed upload leaves no values behind.
    if (failed.length > 0) await enqueue(em, 'import-upload', { organizationId, uploadId });
  },
});

async function load(organizationId: string, uploadId: string): Promise<{ upload: Upload; plant: Plant } | null> {
  return withTenant({ organizationIds: [organizationId] }, async (em) => {
    const upload = await em.findOne(
      UploadEntity,
      { id: uploadId, organizationId },
      { populate: ['preview', 'confirmed'] },
    );
    const plant = upload && (await em.findOne(PlantEntity, { id: upload.plantId, organizationId, deletedAt: null }));
    return upload && plant ? { upload, plant } : null;
  });
}

async function importFile(upload: Upload, plant: Plant, context: JobContext): Promise<void> {
  const tenancy = { organizationIds: [plant.organizationId] };
  const unpacked = await unpackUpload(upload, context);
  const { preview, confirmed, plan } = await planImport(upload, plant, context.signal);
  await withTenant(tenancy, async (em) => {
    await context.fence(em);
    await query(
      em,
      `update upload set preview = $2, confirmed = $3, status = $4, progress = 0, finished_at = null where id = $1`,
      [
        upload.id,
        JSON.stringify(preview),
        confirmed && JSON.stringify(confirmed),
        plan ? 'importing' : 'needs-mapping',
      ],
    );
    if (!plan) await context.complete(em);
  });
  if (!plan) return;
  // What an earlier attempt or an earlier mapping stored goes first; the days it touched are derived without it.
  const cleared = await clearLayers(upload, plant, context);
  const read = await importSamples(upload, plant, plan, context);
  const aside = preview.problems.filter(({ code }) => ABOUT_FILES.has(code));
  const twins = await sameFile(upload, plant);
  const result = { ...read, problems: [...twins, ...unpacked.problems, ...aside, ...read.problems] };
  if (result.samplesStored === 0) return askAgain(upload, plant, result, cleared, context);
  await applyUpload(upload, plant, result, context);
}

/** Problems that only the preview of a drop knows, and the reading of its files does not meet again. */
const ABOUT_FILES: ReadonlySet<string> = new Set(['file-left-out', 'column-gone', 'clock-offset']);

/** Says so when the same bytes came before: an overlap changes nothing, and a person may have meant another file. */
async function sameFile(upload: Upload, plant: Plant): Promise<TrendProblem[]> {
  const twin = await withTenant({ organizationIds: [plant.organizationId] }, (em) =>
    queryOne<{ filename: string; day: string }>(
      em,
      `select filename, to_char(created_at at time zone $5, 'FMDD Mon YYYY') as day from upload
       where organization_id = $1 and plant_id = $2 and sha256 = $3 and id <> $4 and applied and removed_at is null
         and upload_seq < $6 order by upload_seq desc limit 1`,
      [plant.organizationId, plant.id, upload.sha256, upload.id, plant.timeZone, upload.uploadSeq],
    ),
  );
  if (!twin) return [];
  const message = `Byte for byte the same as "${twin.filename}", received on ${twin.day}. Its values were stored already; nothing is counted twice.`;
  return [{ code: 'same-file', severity: 'warning', message, count: 1 }];
}

/** The mapping made nothing of the file: it goes back to the person with what was found, and the file is kept. */
async function askAgain(
  upload: Upload,
  plant: Plant,
  result: ImportResult,
  cleared: boolean,
  context: JobContext,
): Promise<void> {
  const problem = {
    code: 'no-values',
    severity: 'error',
    message: `${result.rowsRead.toLocaleString('en-US')} rows were read, but none gave a value to keep. Check the form of the time and the units, then confirm again.`,
    count: 1,
  };
  await withTenant({ organizationIds: [upload.organizationId] }, async (em) => {
    await query(
      em,
      `update upload set status = 'needs-mapping', confirmed = null, progress = 0, rows_read = $2, problems = $3 where id = $1`,
      [upload.id, result.rowsRead, JSON.stringify([problem, ...result.problems])],
    );
    // What an earlier mapping had given is gone: the days it served are analysed without it.
    if (cleared) await startAnalysisOfStale(em, plant, null);
    await context.complete(em);
  });
}
