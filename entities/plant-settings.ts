import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** One revision of a plant's design data, tariff and sensor uncertainties; never changed, only followed by the next. */
export const PlantSettingsEntity = defineEntity({
  name: 'PlantSettingsRevision',
  tableName: 'plant_settings',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    revision: p.integer().primary(),
    settings: p.json<Record<string, unknown>>(),
    createdBy: p.uuid().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type PlantSettingsRevision = InferEntity<typeof PlantSettingsEntity>;
