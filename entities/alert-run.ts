import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** The evaluation of one local day: there is never a second row for the same plant and day. */
export const AlertRunEntity = defineEntity({
  name: 'AlertRun',
  tableName: 'alert_run',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    day: p.type('string').columnType('date'),
    outcome: p.text().default('pending'),
    detail: p.text().default(''),
    createdAt: p.datetime().defaultRaw('now()'),
    finishedAt: p.datetime().nullable(),
  },
});
export type AlertRun = InferEntity<typeof AlertRunEntity>;
