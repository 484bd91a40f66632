import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** One upload's own values of a point and UTC day. The array is read and written by lib/db/blocks only. */
export const SampleLayerEntity = defineEntity({
  name: 'SampleLayer',
  tableName: 'sample_layer',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    day: p.type('string').columnType('date').primary(),
    pointId: p.uuid().primary(),
    uploadSeq: p.integer().primary(),
    step: p.smallint(),
    firstSlot: p.smallint().default(0),
    v: p.type('string').columnType('real[]').lazy(true, false),
  },
});
export type SampleLayer = InferEntity<typeof SampleLayerEntity>;
