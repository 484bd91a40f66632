import { defineEntity, p, type InferEntity } from '@mikro-orm/core';

/** One MiB of a file as received, compressed by itself; read and written by lib/db/chunks. */
export const UploadChunkEntity = defineEntity({
  name: 'UploadChunk',
  tableName: 'upload_chunk',
  properties: {
    organizationId: p.uuid(),
    uploadId: p.uuid().primary(),
    fileIndex: p.smallint().primary(),
    seq: p.integer().primary(),
    rawBytes: p.integer(),
    data: p.blob().lazy(true, false),
  },
});
export type UploadChunk = InferEntity<typeof UploadChunkEntity>;
