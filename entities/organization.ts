import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A tenant: the owner of plants. */
export const OrganizationEntity = defineEntity({
  name: 'Organization',
  tableName: 'organization',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    name: p.text(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Organization = InferEntity<typeof OrganizationEntity>;
