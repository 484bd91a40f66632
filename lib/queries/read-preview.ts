import type { EntityManager } from '@mikro-orm/postgresql';
import { query, queryOne } from '../db/sql';
import { notFound, problem } from '../http/problem';
import { ConfirmMapping, type Preview, type UploadStatus } from '../schemas/upload';

/** A preview as the import job leaves it: what the API shows, and the heading's fingerprint. */
export type StoredPreview = Preview & { fingerprint: string };

/**
 * What was recognised in an upload, the suggestion for each of its columns and, once it has been read, how that was done.
 *
 * Throws  a 409 problem in words while there is none: the file is still on its way, or could not be read.
 */
export async function readPreview(
  em: EntityManager,
  input: { organizationId: string; uploadId: string },
): Promise<StoredPreview> {
  const row = await queryOne<{
    plant_id: string;
    status: UploadStatus;
    preview: StoredPreview | null;
    confirmed: unknown;
  }>(
    em,
    `select plant_id, status, preview, confirmed from upload where id = $1 and organization_id = $2 and removed_at is null`,
    [input.uploadId, input.organizationId],
  );
  if (!row) throw notFound('upload');
  if (row.preview) {
    const { success, data: confirmed } = ConfirmMapping.safeParse(row.confirmed);
    const preview = withTables(row.preview);
    const names = preview.columns.map(({ column }) => column);
    const carried = await carriedBy(em, { organizationId: input.organizationId, plantId: row.plant_id }, names);
    return { ...preview, carried, ...(success ? { confirmed } : {}) };
  }
  throw problem(409, 'Not there yet', WHY_NOT[row.status]);
}

/** Which roles points of the plant carry under names that are not among those given. */
async function carriedBy(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  names: readonly string[],
): Promise<NonNullable<Preview['carried']>> {
  return query(
    em,
    `select role, unit_index as "unitIndex", array_agg(source_name order by ordinal) as names from point
     where organization_id = $1 and plant_id = $2 and source_name <> all ($3::text[]) group by role, unit_index order by 1, 2`,
    [owner.organizationId, owner.plantId, names],
  );
}

/** A preview from before drops had tables is one of a single wide table. */
function withTables(preview: Omit<StoredPreview, 'tables'> & Partial<Pick<StoredPreview, 'tables'>>): StoredPreview {
  if (preview.tables) return { ...preview, tables: preview.tables };
  const { dialect, timestamp, fingerprint, stepMinutes, rows, firstRows, columns } = preview;
  const names = columns.map(({ column }) => ({ cell: column, column }));
  const shape = { kind: 'wide' as const };
  const table = { files: [], shape, dialect, timestamp, fingerprint, names, stepMinutes, rows, firstRows };
  return { ...preview, tables: [table] };
}

const STILL_READ = 'The file is still being looked at. Ask again in a moment.';
const WHY_NOT: Readonly<Record<UploadStatus, string>> = {
  receiving: 'The file is still being received. There is a preview once it has arrived.',
  received: STILL_READ,
  'needs-mapping': STILL_READ,
  importing: STILL_READ,
  analysing: 'The file was read without a preview being kept.',
  done: 'The file was read without a preview being kept.',
  failed: 'The file could not be read, so there is nothing to map. Its problems say why.',
};
