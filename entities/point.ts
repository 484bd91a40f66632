import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A trend point of a plant: its role, its unit, and which of several feeders of the role it is. */
export const PointEntity = defineEntity({
  name: 'Point',
  tableName: 'point',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    role: p.text(),
    unitIndex: p.smallint().default(0),
    ordinal: p.smallint().default(0),
    sourceName: p.text(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Point = InferEntity<typeof PointEntity>;
