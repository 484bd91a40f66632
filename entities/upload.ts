import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** A file (or several of one drop) as received, and how far its reading has come. */
export const UploadEntity = defineEntity({
  name: 'Upload',
  tableName: 'upload',
  properties: {
    id: p.uuid().primary().defaultRaw('gen_random_uuid()'),
    organizationId: p.uuid(),
    plantId: p.uuid(),
    uploadSeq: p.integer().nullable(),
    filename: p.text(),
    files: p.json<{ name: string; sizeBytes: number; sha256: string; gzip: boolean }[]>(),
    sizeBytes: p.bigint('number').default(0),
    sha256: p.text().nullable(),
    /** Length of the file that a resumable upload began with; null for every other. */
    announcedBytes: p.bigint('number').nullable(),
    /** Upload-Metadata as such an upload's sender gave it. */
    tusMetadata: p.text().nullable(),
    status: p.text().default('receiving'),
    progress: p.type('float').columnType('real').default(0),
    rowsRead: p.bigint('number').default(0),
    samplesStored: p.bigint('number').default(0),
    dataFrom: p.datetime().nullable(),
    dataTo: p.datetime().nullable(),
    problems:
      p.json<
        { code: string; severity: 'error' | 'warning'; message: string; row?: number; column?: string; count: number }[]
      >(),
    preview: p.json<Record<string, unknown>>().nullable().lazy(true, false),
    confirmed: p.json<Record<string, unknown>>().nullable().lazy(true, false),
    applied: p.boolean().default(false),
    createdBy: p.uuid().nullable(),
    createdByToken: p.uuid().nullable(),
    createdAt: p.datetime().defaultRaw('now()'),
    lastChunkAt: p.datetime().defaultRaw('now()'),
    finishedAt: p.datetime().nullable(),
    removedAt: p.datetime().nullable(),
  },
});
export type Upload = InferEntity<typeof UploadEntity>;
