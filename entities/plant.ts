import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A chilled-water plant. */
export const PlantEntity = defineEntity({
  name: 'Plant',
  tableName: 'plant',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    name: p.text(),
    timeZone: p.text(),
    arrangement: p.text(),
    stepMinutes: p.smallint(),
    settingsRevision: p.integer().default(1),
    resultsRevision: p.bigint('number').default(0),
    nextUploadSeq: p.integer().default(1),
    dataFrom: p.datetime().nullable(),
    dataThrough: p.datetime().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
    deletedAt: p.datetime().nullable(),
  },
});
export type Plant = InferEntity<typeof PlantEntity>;
