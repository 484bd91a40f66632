import { isDeepStrictEqual } from 'node:util';
import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { query, queryOne } from '../db/sql';
import { parsedInput } from '../http/parse';
import { problem } from '../http/problem';
import { CreatePlant, PlantSettings } from '../schemas/plant';
import { mergePatch } from './merge-patch';
import { recordAudit } from './record-audit';
import { startAnalysis } from './start-analysis';

interface Standing {
  name: string;
  timeZone: string;
  arrangement: string;
  stepMinutes: number;
  settings: unknown;
  revision: number;
  hasData: boolean;
}

/**
 * Merges a patch (RFC 7396: null takes a value back) into a plant. A change of anything that results depend on is a new settings
 * revision and has all stored days analysed again; a new name alone is neither. Returns the id of the analysis, if one began.
 */
export async function updatePlant(
  em: EntityManager,
  access: Access,
  plant: { id: string; organizationId: string },
  patch: Record<string, unknown>,
): Promise<{ analysisId: string | null }> {
  const before = await lockPlant(em, plant);
  const { settings: given, revision, hasData, ...identity } = before;
  const merged = mergePatch({ ...identity, ...PlantSettings.parse(given) }, patch);
  const after = parsedInput(CreatePlant, { ...merged, organizationId: plant.organizationId }, 'body');
  if (after.stepMinutes !== before.stepMinutes && hasData) {
    const message = `The plant holds data at a step of ${before.stepMinutes} min. Take its uploads out again before changing the step.`;
    throw problem(409, 'Conflict', message, [{ path: 'stepMinutes', message }]);
  }
  const settings = PlantSettings.parse(after);
  const judgedOtherwise =
    after.timeZone !== before.timeZone ||
    after.arrangement !== before.arrangement ||
    after.stepMinutes !== before.stepMinutes ||
    !isDeepStrictEqual(plain(settings), plain(PlantSettings.parse(given)));
  if (!judgedOtherwise && after.name === before.name) return { analysisId: null };

  const next = judgedOtherwise ? revision + 1 : revision;
  await query(
    em,
    `update plant set name = $3, time_zone = $4, arrangement = $5, step_minutes = $6, settings_revision = $7
     where id = $1 and organization_id = $2`,
    [plant.id, plant.organizationId, after.name, after.timeZone, after.arrangement, after.stepMinutes, next],
  );
  if (judgedOtherwise) {
    await query(
      em,
      `insert into plant_settings (organization_id, plant_id, revision, settings, created_by) values ($1, $2, $3, $4, $5)`,
      [plant.organizationId, plant.id, next, JSON.stringify(settings), access.userId],
    );
  }
  await recordAudit(em, access, {
    organizationId: plant.organizationId,
    action: 'plant.updated',
    subjectKind: 'plant',
    subjectId: plant.id,
    detail: { changed: Object.keys(patch), settingsRevision: next },
  });
  if (!judgedOtherwise || !hasData) return { analysisId: null };
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  return { analysisId: await startAnalysis(em, { ...owner, userId: access.userId }) };
}

/** As it would be stored: without keys that are undefined. */
const plain = (value: unknown): unknown => JSON.parse(JSON.stringify(value));

/** The plant as it stands, held until the transaction ends: two changes at once follow one another. */
async function lockPlant(em: EntityManager, plant: { id: string; organizationId: string }): Promise<Standing> {
  const row = await queryOne<{
    name: string;
    time_zone: string;
    arrangement: string;
    step_minutes: number;
    settings_revision: number;
    has_data: boolean;
  }>(
    em,
    `select name, time_zone, arrangement, step_minutes, settings_revision,
            exists (select from sample_layer l where l.plant_id = plant.id)
            or exists (select from upload u where u.plant_id = plant.id and u.removed_at is null
                         and u.status in ('receiving', 'received', 'importing', 'analysing')) as has_data
     from plant where id = $1 and organization_id = $2 for update`,
    [plant.id, plant.organizationId],
  );
  // Read after the lock is held: while waiting for it another change may have made a newer revision.
  const stored = await queryOne<{ settings: unknown }>(
    em,
    `select settings from plant_settings where plant_id = $1 and organization_id = $2 and revision = $3`,
    [plant.id, plant.organizationId, row?.settings_revision ?? 0],
  );
  if (!row || !stored) throw new Error(`updatePlant: plant ${plant.id} has no settings`);
  return {
    name: row.name,
    timeZone: row.time_zone,
    arrangement: row.arrangement,
    stepMinutes: row.step_minutes,
    settings: stored.settings,
    revision: row.settings_revision,
    hasData: row.has_data,
  };
}
