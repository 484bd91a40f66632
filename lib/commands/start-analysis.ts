import type { EntityManager } from '@mikro-orm/postgresql';
import { KERNEL_VERSION } from '../hydronics/types';
import { enqueue } from '../db/enqueue';
import { queryOne } from '../db/sql';
import { lockPlant } from './lock-plant';
import { markDaysStale } from './mark-days-stale';

/**
 * Has a plant's stored samples analysed again with today's settings and kernel: marks the UTC days from..to (all by default)
 * stale (with `onlyStale`: takes those that are) and enqueues the work in this transaction. Returns the id of the analysis that people watch.
 */
export async function startAnalysis(
  em: EntityManager,
  input: {
    organizationId: string;
    plantId: string;
    from?: string;
    to?: string;
    uploadId?: string | null;
    userId?: string | null;
    onlyStale?: boolean;
  },
): Promise<string> {
  await lockPlant(em, input);
  if (!input.onlyStale) await markDaysStale(em, input);
  const row = await queryOne<{ id: string }>(
    em,
    `insert into analysis (organization_id, plant_id, upload_id, day_from, day_to, days_total, kernel_version, settings_revision, created_by)
     select p.organization_id, p.id, $3, s.first, s.last, s.days, $4, p.settings_revision, $5
     from plant p, (select min(day) as first, max(day) as last, count(*)::integer as days from stale_day where plant_id = $2) s
     where p.id = $2 and p.organization_id = $1 returning id`,
    [input.organizationId, input.plantId, input.uploadId ?? null, KERNEL_VERSION, input.userId ?? null],
  );
  if (!row) throw new Error(`startAnalysis: no plant ${input.plantId} in this organization`);
  await enqueue(em, 'analyse-plant', { organizationId: input.organizationId, plantId: input.plantId });
  return row.id;
}
