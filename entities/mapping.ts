import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** The confirmed reading of a heading: the next file with the same heading maps itself. */
export const MappingEntity = defineEntity({
  name: 'Mapping',
  tableName: 'mapping',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    fingerprint: p.text().primary(),
    confirmed: p.json<Record<string, unknown>>(),
    createdBy: p.uuid().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Mapping = InferEntity<typeof MappingEntity>;
