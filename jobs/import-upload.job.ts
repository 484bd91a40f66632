import { UploadEntity, PlantEntity, type Plant, type Upload } from '@/entities';
import { applyUpload, resumeApplying, takeOutUpload } from '@/lib/commands/apply-upload';
import { planImport } from '@/lib/commands/import-plan';
import { importSamples, type ImportResult } from '@/lib/commands/import-samples';
import { enqueue } from '@/lib/db/enqueue';
import { query } from '@/lib/db/sql';
import { withTenant } from '@/lib/db/tenant';
import { TrendError } from '@/lib/trends/types';
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
  const { preview, plan } = await planImport(upload, plant);
  await withTenant(tenancy, async (em) => {
    await context.fence(em);
    await query(em, `update upload set preview = $2, status = $3, progress = 0, finished_at = null where id = $1`, [
      upload.id,
      JSON.stringify(preview),
      plan ? 'importing' : 'needs-mapping',
    ]);
    if (!plan) await context.complete(em);
  });
  if (!plan) return;
  const result = await importSamples(upload, plant, plan, context);
  if (result.samplesStored === 0) return askAgain(upload, result, context);
  await applyUpload(upload, plant, result, context);
}

/** The mapping made nothing of the file: it goes back to the person with what was found, and the file is kept. */
async function askAgain(upload: Upload, result: ImportResult, context: JobContext): Promise<void> {
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
    await context.complete(em);
  });
}
