import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** Who did what to which object, and when. */
export const AuditEventEntity = defineEntity({
  name: 'AuditEvent',
  tableName: 'audit_event',
  properties: {
    id: p.bigint('string').primary().autoincrement(),
    organizationId: p.uuid(),
    at: p.datetime().defaultRaw('now()'),
    actorUserId: p.uuid().nullable(),
    actorTokenId: p.uuid().nullable(),
    action: p.text(),
    subjectKind: p.text(),
    subjectId: p.text(),
    detail: p.json<Record<string, unknown>>(),
  },
});
export type AuditEvent = InferEntity<typeof AuditEventEntity>;
