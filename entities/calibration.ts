import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** Sensor offsets and meter gains in force over a stretch of the record. */
export const CalibrationEntity = defineEntity({
  name: 'Calibration',
  tableName: 'calibration',
  properties: {
    organizationId: p.uuid(),
    plantId: p.uuid().primary(),
    id: p.integer().primary(),
    validFrom: p.datetime(),
    validTo: p.datetime(),
    inputHash: p.text(),
    offsets: p.json<Record<string, number>>(),
    gains: p.json<Record<string, number>>(),
    covariance: p.json<number[][]>(),
    kernelVersion: p.text(),
    createdAt: p.datetime().defaultRaw('now()'),
  },
});
export type Calibration = InferEntity<typeof CalibrationEntity>;
