import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { query, queryOne } from '../db/sql';
import { plantModelFromSettings } from '../hydronics/plant-model';
import { PlantSettings, type CreatePlant } from '../schemas/plant';
import { recordAudit } from './record-audit';

/** A plant with its first settings revision and the default alert rule. Returns its id. */
export async function createPlant(
  em: EntityManager,
  access: Access,
  organizationId: string,
  plant: CreatePlant,
): Promise<string> {
  const settings = PlantSettings.parse(plant);
  // Refuses here, before anything is stored, what the kernel could not work with.
  plantModelFromSettings(settings, plant.arrangement);
  const row = await queryOne<{ id: string }>(
    em,
    `insert into plant (organization_id, name, time_zone, arrangement, step_minutes) values ($1, $2, $3, $4, $5) returning id`,
    [organizationId, plant.name, plant.timeZone, plant.arrangement, plant.stepMinutes],
  );
  if (!row) throw new Error('createPlant: the insert returned no row');
  await query(
    em,
    `insert into plant_settings (organization_id, plant_id, revision, settings, created_by) values ($1, $2, 1, $3, $4)`,
    [organizationId, row.id, JSON.stringify(settings), access.userId],
  );
  await query(em, `insert into alert_rule (organization_id, plant_id) values ($1, $2)`, [organizationId, row.id]);
  await recordAudit(em, access, {
    organizationId,
    action: 'plant.created',
    subjectKind: 'plant',
    subjectId: row.id,
    detail: { name: plant.name },
  });
  return row.id;
}
