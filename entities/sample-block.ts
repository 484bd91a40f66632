import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** The layers of a day merged, the later upload winning, with hourly bands. Arrays are read and written by lib/db/blocks only. */
export const SampleBlockEntity = defineEntity({
  name: 'SampleBlock',
  tableName: 'sample_block',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    day: p.type('string').columnType('date').primary(),
    pointId: p.uuid().primary(),
    step: p.smallint(),
    firstSlot: p.smallint().default(0),
    v: p.type('string').columnType('real[]').lazy(true, false),
    lo: p.type('string').columnType('real[]').lazy(true, false),
    mean: p.type('string').columnType('real[]').lazy(true, false),
    hi: p.type('string').columnType('real[]').lazy(true, false),
  },
});
export type SampleBlock = InferEntity<typeof SampleBlockEntity>;
