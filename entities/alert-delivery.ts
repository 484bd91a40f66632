import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** One mail to one person about one day. */
export const AlertDeliveryEntity = defineEntity({
  name: 'AlertDelivery',
  tableName: 'alert_delivery',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    day: p.type('string').columnType('date'),
    userId: p.uuid(),
    email: p.text(),
    status: p.text().default('pending'),
    subject: p.text().default(''),
    providerId: p.text().nullable(),
    failure: p.text().nullable(),
    sentAt: p.datetime().nullable(),
    acknowledgedAt: p.datetime().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type AlertDelivery = InferEntity<typeof AlertDeliveryEntity>;
