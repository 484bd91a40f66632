import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A UTC day whose results are older than what they are computed from. */
export const StaleDayEntity = defineEntity({
  name: 'StaleDay',
  tableName: 'stale_day',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    day: p.type('string').columnType('date').primary(),
    mark: p.bigint('string').defaultRaw("nextval('stale_day_mark')"),
  },
});
export type StaleDay = InferEntity<typeof StaleDayEntity>;
