import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** Sums of a plant's local day. */
export const PlantDayEntity = defineEntity({
  name: 'PlantDay',
  tableName: 'plant_day',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    day: p.type('string').columnType('date').primary(),
    reverseMinutes: p.type('float').columnType('real'),
    unknownMinutes: p.type('float').columnType('real'),
    runningMinutes: p.type('float').columnType('real'),
    largestReverseFlowGpm: p.double().nullable(),
    warmestSupplyF: p.double().nullable(),
    lowHours: p.integer(),
    excessCost: p.double().nullable(),
    excessEnergyKwh: p.double().nullable(),
    loadTonHours: p.double().nullable(),
    coverage: p.type('float').columnType('real').nullable(),
    worstHour: p.datetime().nullable(),
  },
});
export type PlantDay = InferEntity<typeof PlantDayEntity>;
