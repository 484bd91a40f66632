import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A reading of a reference instrument, entered by a person: evidence for the calibration. */
export const SpotCheckEntity = defineEntity({
  name: 'SpotCheck',
  tableName: 'spot_check',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    at: p.datetime(),
    role: p.text(),
    unitIndex: p.smallint().default(0),
    /** deg F or gpm. */
    reading: p.double(),
    /** What the plant's own sensor showed beside it; null: what the record holds at that time. */
    shown: p.double().nullable(),
    /** The latter, as the last analysis found it. */
    recorded: p.double().nullable(),
    /** Standard uncertainty of the reference (k = 1): deg F, or percent of reading for a flow. */
    sigma: p.double(),
    instrument: p.text().default(''),
    note: p.text().default(''),
    createdBy: p.uuid().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type SpotCheck = InferEntity<typeof SpotCheckEntity>;
