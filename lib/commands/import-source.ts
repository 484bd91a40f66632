import { promisify } from 'node:util';
import { gunzip } from 'node:zlib';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';

const unpack = promisify(gunzip);

/** One chunk of a stored file as plain bytes, or null after the last. A short transaction of its own. */
export async function readChunk(
  organizationId: string,
  uploadId: string,
  fileIndex: number,
  seq: number,
): Promise<Uint8Array | null> {
  const rows = await withTenant({ organizationIds: [organizationId] }, (em) =>
    query<{ data: Buffer }>(
      em,
      `select data from upload_chunk where organization_id = $1 and upload_id = $2 and file_index = $3 and seq = $4`,
      [organizationId, uploadId, fileIndex, seq],
    ),
  );
  const [row] = rows;
  return row ? unpack(row.data) : null;
}
