import type { EntityManager } from '@mikro-orm/postgresql';
import type { z } from 'zod';
import { isoInstant, queryOne } from '../db/sql';
import { plantModelFromSettings } from '../hydronics/plant-model';
import type { Arrangement } from '../hydronics/types';
import { PlantSettings, type Plant as PlantSchema } from '../schemas/plant';
import { fillAssumed } from './fill-assumed';

export type PlantRecord = z.infer<typeof PlantSchema>;

/** A plant with its organization's name and its present settings, as SQL gives it. */
export interface PlantRow {
  id: string;
  organization_id: string;
  organization_name: string;
  name: string;
  time_zone: string;
  arrangement: Arrangement;
  step_minutes: PlantRecord['stepMinutes'];
  settings_revision: number;
  settings: unknown;
  data_from: string | null;
  data_through: string | null;
  created_at: string;
}

/** Reads plants as PlantRow; a where clause follows. */
export const SELECT_PLANT = `
  select p.id, p.organization_id, o.name as organization_name, p.name, p.time_zone, p.arrangement, p.step_minutes,
         p.settings_revision, s.settings, p.data_from, p.data_through, p.created_at
  from plant p
  join organization o on o.id = p.organization_id
  join plant_settings s on s.plant_id = p.id and s.organization_id = p.organization_id and s.revision = p.settings_revision`;

/** The plant as the API shows it: design numbers nobody gave carry the product's default and are listed in `assumed`. */
export function plantRecord(row: PlantRow): PlantRecord {
  const given = PlantSettings.parse(row.settings);
  const { model, assumed } = plantModelFromSettings(given, row.arrangement);
  return {
    id: row.id,
    organizationId: row.organization_id,
    organizationName: row.organization_name,
    name: row.name,
    timeZone: row.time_zone,
    arrangement: row.arrangement,
    stepMinutes: row.step_minutes,
    settingsRevision: row.settings_revision,
    ...fillAssumed(given, model, assumed),
    assumed,
    dataFrom: isoInstant(row.data_from),
    dataThrough: isoInstant(row.data_through),
    createdAt: isoInstant(row.created_at),
  };
}

/** One plant of the organization, or null. */
export async function readPlant(
  em: EntityManager,
  { organizationId, plantId }: { organizationId: string; plantId: string },
): Promise<PlantRecord | null> {
  const row = await queryOne<PlantRow & Record<string, unknown>>(
    em,
    `${SELECT_PLANT} where p.id = $1 and p.organization_id = $2 and p.deleted_at is null`,
    [plantId, organizationId],
  );
  return row && plantRecord(row);
}
