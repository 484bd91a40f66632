import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** When the daily mail goes out, and over what. */
export const AlertRuleEntity = defineEntity({
  name: 'AlertRule',
  tableName: 'alert_rule',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    enabled: p.boolean().default(true),
    minReverseMinutes: p.integer().default(30),
    minReverseFlowGpm: p.double().default(0),
    sendAt: p.type('string').columnType('time').default('06:30'),
    updatedBy: p.uuid().nullable(),
    updatedAt: p.datetime().defaultRaw('now()'),
  },
});
export type AlertRule = InferEntity<typeof AlertRuleEntity>;
