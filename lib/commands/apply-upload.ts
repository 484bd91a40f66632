import type { EntityManager } from '@mikro-orm/postgresql';
import { PlantEntity, type Plant, type Upload } from '@/entities';
import { deriveBlocks } from '../db/blocks';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import type { ImportResult } from './import-samples';
import { lockPlant } from './lock-plant';
import { markChangedDays } from './mark-days-stale';
import { refreshCoverage } from './refresh-coverage';
import { startAnalysis } from './start-analysis';

/** Days derived in one transaction. */
const DAYS_AT_ONCE = 31;

interface Hooks {
  signal: AbortSignal;
  fence: (em: EntityManager) => Promise<void>;
  complete: (em: EntityManager) => Promise<void>;
}

/** Makes an upload's layers count, derives the days they touch, and starts their analysis in the transaction that ends the job. */
export async function applyUpload(upload: Upload, plant: Plant, result: ImportResult, hooks: Hooks): Promise<void> {
  const tenancy = { organizationIds: [plant.organizationId] };
  const counts = await withTenant(tenancy, async (em) => {
    await hooks.fence(em);
    await lockPlant(em, { organizationId: plant.organizationId, plantId: plant.id });
    const now = await em.findOneOrFail(PlantEntity, { id: plant.id, organizationId: plant.organizationId });
    // Changed while the file was read: its values are on the old step, and the next attempt reads it on the new one.
    if (now.stepMinutes !== plant.stepMinutes) throw new Error(`the plant's step became ${now.stepMinutes} min`);
    const applied = await query(
      em,
      `update upload set applied = true, rows_read = $2, samples_stored = $3, data_from = $4, data_to = $5, problems = $6
       where id = $1 and removed_at is null returning id`,
      [
        upload.id,
        result.rowsRead,
        result.samplesStored,
        instant(result.fromMs),
        instant(result.toMs),
        JSON.stringify(result.problems),
      ],
    );
    if (applied.length > 0) return true;
    // Taken out while it was being read: what was written goes, and nothing of it ever counted.
    await dropLayers(em, upload, plant);
    await hooks.complete(em);
    return false;
  });
  if (counts) await finishApplying(upload, plant, result.days, hooks);
}

/** Goes on with an upload whose layers are complete and count already: an earlier attempt was cut off behind that point. */
export async function resumeApplying(upload: Upload, plant: Plant, hooks: Hooks): Promise<void> {
  await finishApplying(upload, plant, await layerDays(upload, plant, hooks), hooks);
}

async function finishApplying(upload: Upload, plant: Plant, days: readonly string[], hooks: Hooks): Promise<void> {
  await deriveDays(plant, days, hooks);
  await withTenant({ organizationIds: [plant.organizationId] }, async (em) => {
    await lockPlant(em, { organizationId: plant.organizationId, plantId: plant.id });
    await refreshCoverage(em, plant);
    await query(em, `update upload set status = 'analysing', progress = 0 where id = $1 and removed_at is null`, [
      upload.id,
    ]);
    await startAnalysisOfStale(em, plant, upload);
    await hooks.complete(em);
  });
}

/** Takes an upload's samples out again: its layers go, the days it touched are derived and analysed without it. */
export async function takeOutUpload(upload: Upload, plant: Plant, hooks: Hooks): Promise<void> {
  const tenancy = { organizationIds: [plant.organizationId] };
  const days = await layerDays(upload, plant, hooks);
  // The upload no longer counts (applied is false): derive first and drop the layers last, so that a crash leaves the list of days.
  await deriveDays(plant, days, hooks);
  await withTenant(tenancy, async (em) => {
    await lockPlant(em, { organizationId: plant.organizationId, plantId: plant.id });
    await dropLayers(em, upload, plant);
    if (upload.removedAt !== null) {
      await query(em, `delete from upload_chunk where organization_id = $1 and upload_id = $2`, [
        plant.organizationId,
        upload.id,
      ]);
    }
    await refreshCoverage(em, plant);
    await startAnalysisOfStale(em, plant, null);
    await hooks.complete(em);
  });
}

/**
 * Takes out what an upload has stored so far, so that it can be read anew: after an attempt that was cut off, or under another
 * mapping. Its layers go last: a crash leaves the list of days to derive. True when there was anything.
 */
export async function clearLayers(upload: Upload, plant: Plant, hooks: Hooks): Promise<boolean> {
  const days = await layerDays(upload, plant, hooks);
  if (days.length === 0) return false;
  await deriveDays(plant, days, hooks);
  await withTenant({ organizationIds: [plant.organizationId] }, async (em) => {
    await hooks.fence(em);
    await dropLayers(em, upload, plant);
  });
  return true;
}

async function layerDays(upload: Upload, plant: Plant, hooks: Hooks): Promise<string[]> {
  return withTenant({ organizationIds: [plant.organizationId] }, async (em) => {
    await hooks.fence(em);
    const rows = await query<{ day: string }>(
      em,
      `select distinct day from sample_layer where organization_id = $1 and plant_id = $2 and upload_seq = $3 order by day`,
      [plant.organizationId, plant.id, upload.uploadSeq],
    );
    return rows.map((row) => row.day);
  });
}

async function dropLayers(em: EntityManager, upload: Upload, plant: Plant): Promise<void> {
  await query(em, `delete from sample_layer where organization_id = $1 and plant_id = $2 and upload_seq = $3`, [
    plant.organizationId,
    plant.id,
    upload.uploadSeq,
  ]);
}

async function deriveDays(plant: Plant, days: readonly string[], hooks: Hooks): Promise<void> {
  const owner = { organizationId: plant.organizationId, plantId: plant.id, stepMinutes: plant.stepMinutes };
  for (let first = 0; first < days.length; first += DAYS_AT_ONCE) {
    hooks.signal.throwIfAborted();
    await withTenant({ organizationIds: [plant.organizationId] }, async (em) => {
      await hooks.fence(em);
      const changed = await deriveBlocks(em, owner, days.slice(first, first + DAYS_AT_ONCE));
      await markChangedDays(em, owner, changed);
    });
  }
}

/** Starts an analysis of the days that are stale already; marking by range would redo the whole record. */
export async function startAnalysisOfStale(em: EntityManager, plant: Plant, upload: Upload | null): Promise<void> {
  await startAnalysis(em, {
    organizationId: plant.organizationId,
    plantId: plant.id,
    uploadId: upload?.id ?? null,
    onlyStale: true,
  });
}

const instant = (epochMs: number | null): string | null => (epochMs === null ? null : new Date(epochMs).toISOString());
