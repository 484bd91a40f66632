import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A signed-in browser; read and written through the sign-in functions only. */
export const SessionEntity = defineEntity({
  name: 'Session',
  tableName: 'session',
  properties: {
    id: p.text().primary(),
    userId: p.uuid(),
    expiresAt: p.datetime(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Session = InferEntity<typeof SessionEntity>;
