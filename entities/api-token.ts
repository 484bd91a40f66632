import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A script's key; only its SHA-256 is kept. */
export const ApiTokenEntity = defineEntity({
  name: 'ApiToken',
  tableName: 'api_token',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid().nullable(),
    name: p.text(),
    scope: p.text(),
    tokenHash: p.blob().lazy(true, false).hidden(),
    createdBy: p.uuid().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
    expiresAt: p.datetime().nullable(),
    revokedAt: p.datetime().nullable(),
    lastUsedAt: p.datetime().nullable(),
  },
});
export type ApiToken = InferEntity<typeof ApiTokenEntity>;
