import type { EntityManager } from '@mikro-orm/postgresql';
import type { z } from 'zod';
import { isoInstant, queryOne } from '../db/sql';
import type { Analysis } from '../schemas/alert';

/** One run of the analysis as people see it, or null. `from` and `to` are the first and last UTC day it works out. */
export async function readAnalysis(
  em: EntityManager,
  input: { organizationId: string; plantId: string; analysisId: string },
): Promise<z.infer<typeof Analysis> | null> {
  const row = await queryOne<{
    id: string;
    status: z.infer<typeof Analysis>['status'];
    progress: number;
    day_from: string | null;
    day_to: string | null;
    kernel_version: string;
    settings_revision: number;
    failure: string | null;
    created_at: string;
    finished_at: string | null;
  }>(
    em,
    `select id, status, progress, day_from, day_to, kernel_version, settings_revision, failure, created_at, finished_at
     from analysis where id = $1 and plant_id = $2 and organization_id = $3`,
    [input.analysisId, input.plantId, input.organizationId],
  );
  return (
    row && {
      id: row.id,
      status: row.status,
      progress: row.progress,
      from: row.day_from,
      to: row.day_to,
      kernelVersion: row.kernel_version,
      settingsRevision: row.settings_revision,
      failure: row.failure,
      createdAt: isoInstant(row.created_at),
      finishedAt: isoInstant(row.finished_at),
    }
  );
}
