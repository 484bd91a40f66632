import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** One run of the analysis over a plant's stale days, as people see it. */
export const AnalysisEntity = defineEntity({
  name: 'Analysis',
  tableName: 'analysis',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    uploadId: p.uuid().nullable(),
    status: p.text().default('queued'),
    progress: p.type('float').columnType('real').default(0),
    dayFrom: p.type('string').columnType('date').nullable(),
    dayTo: p.type('string').columnType('date').nullable(),
    daysTotal: p.integer().default(0),
    kernelVersion: p.text(),
    settingsRevision: p.integer(),
    failure: p.text().nullable(),
    createdBy: p.uuid().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
    finishedAt: p.datetime().nullable(),
  },
});
export type Analysis = InferEntity<typeof AnalysisEntity>;
