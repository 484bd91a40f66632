import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A run of hours with one cause, and what people said of it. */
export const EpisodeEntity = defineEntity({
  name: 'Episode',
  tableName: 'episode',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    cause: p.text(),
    startedAt: p.datetime(),
    endedAt: p.datetime(),
    hours: p.integer(),
    worstHour: p.datetime(),
    largestReverseFlowGpm: p.double().nullable(),
    warmestSupplyF: p.double().nullable(),
    excessEnergyKwh: p.double().nullable(),
    excessCost: p.double().nullable(),
    acknowledgedAt: p.datetime().nullable(),
    acknowledgedBy: p.uuid().nullable(),
    note: p.text().nullable(),
  },
});
export type Episode = InferEntity<typeof EpisodeEntity>;
