import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** What the record of a calendar month (UTC days) says about its sensors; in force for all of that month's results. */
export const CalibrationEntity = defineEntity({
  name: 'Calibration',
  tableName: 'calibration',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    id: p.integer().primary(),
    /** First day of the month. */
    validFrom: p.type('string').columnType('date'),
    /** Last day of the month. */
    validTo: p.type('string').columnType('date'),
    inputHash: p.text(),
    settingsRevision: p.integer(),
    kernelVersion: p.text(),
    /** The kernel's Calibration; NaN is null here. */
    detail: p.json<Record<string, unknown>>(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Calibration = InferEntity<typeof CalibrationEntity>;
