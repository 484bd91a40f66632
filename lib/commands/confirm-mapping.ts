import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { enqueue } from '../db/enqueue';
import { query, queryOne } from '../db/sql';
import { problem, type FieldError } from '../http/problem';
import { IGNORE_ROLE, pointRole, type MappedRole } from '../point-roles';
import { timestampOf } from './import-plan';
import { rememberedName } from './recall-mappings';
import { readPreview, type StoredPreview } from '../queries/read-preview';
import type { ConfirmMapping, UploadStatus } from '../schemas/upload';
import { TREND_UNITS } from '../units';
import { recordAudit } from './record-audit';

/** Temperatures that say nothing about the water at the tees. */
const NOT_OF_THE_WATER: ReadonlySet<MappedRole> = new Set([
  'outdoorTemp',
  'outdoorWetBulb',
  'supplySetpoint',
  'unitSetpoint',
]);

/**
 * Confirms how an upload's columns are read and lets its import go on; on an upload that was read already, changes it and has the
 * stored file read again. With `remember`, the next file of the same heading maps itself.
 *
 * Throws  409 while the upload is being received, read or analysed; 400 with paths for columns it does not have, units that do not fit
 *         or a column named twice; 422 when no temperature is mapped.
 */
export async function confirmMapping(
  em: EntityManager,
  access: Access,
  upload: { id: string; organizationId: string; plantId: string; status: string },
  mapping: ConfirmMapping,
): Promise<void> {
  const { organizationId } = upload;
  if (!MAPPABLE.has(upload.status)) throw notWaiting(upload.status as UploadStatus);
  const preview = await readPreview(em, { organizationId, uploadId: upload.id });
  const confirmed = withDefaults(mapping);
  const errors = mappingErrors(confirmed, preview);
  if (errors.length > 0) {
    throw problem(400, 'Invalid input', `The mapping does not fit the file: ${errors[0]?.message ?? ''}`, errors);
  }
  if (!confirmed.columns.some(({ role }) => isWaterTemperature(role))) throw noTemperature();

  const waiting = await queryOne(
    em,
    `update upload set confirmed = $3, status = 'received', progress = 0, applied = false, finished_at = null, problems = '[]'
     where id = $1 and organization_id = $2 and status = any($4) and removed_at is null and upload_seq is not null returning 1`,
    [upload.id, organizationId, JSON.stringify(confirmed), [...MAPPABLE]],
  );
  if (!waiting) throw notWaiting('received');
  if (confirmed.remember) await rememberMapping(em, access, upload, preview, confirmed);
  await enqueue(em, 'import-upload', { organizationId, uploadId: upload.id });
  await recordAudit(em, access, {
    organizationId,
    action: 'upload.mapped',
    subjectKind: 'upload',
    subjectId: upload.id,
    detail: { columns: confirmed.columns.filter(({ role }) => role !== IGNORE_ROLE).length },
  });
}

/** In these an upload can be mapped: for the first time, or, once it was read, anew. */
const MAPPABLE: ReadonlySet<string> = new Set<UploadStatus>(['needs-mapping', 'done', 'failed']);

/** Keeps the answer for the next file of each heading. Points of a long table that this file does not hold stay remembered. */
async function rememberMapping(
  em: EntityManager,
  access: Access,
  upload: { organizationId: string; plantId: string },
  preview: StoredPreview,
  confirmed: ConfirmMapping,
): Promise<void> {
  const answers = new Map(confirmed.columns.map((column) => [column.column, column]));
  for (const [index, table] of preview.tables.entries()) {
    const columns = table.names.flatMap((name) => {
      const answer = answers.get(name.column);
      return answer ? [{ ...answer, column: rememberedName(table, name) }] : [];
    });
    const timestamp = timestampOf(preview, confirmed, table, index);
    const kept = { timestamp, timeZone: confirmed.timeZone, columns };
    await query(
      em,
      `insert into mapping (organization_id, plant_id, fingerprint, confirmed, created_by) values ($1, $2, $3, $4, $5)
       on conflict (plant_id, fingerprint) do update set created_by = excluded.created_by, created_at = now(),
         confirmed = jsonb_set(excluded.confirmed, '{columns}', excluded.confirmed -> 'columns' || coalesce((
           select jsonb_agg(old) from jsonb_array_elements(mapping.confirmed -> 'columns') old
           where not exists (select 1 from jsonb_array_elements(excluded.confirmed -> 'columns') new
                             where new ->> 'column' = old ->> 'column')), '[]'))`,
      [upload.organizationId, upload.plantId, table.fingerprint, JSON.stringify(kept), access.userId],
    );
  }
}

/** A state needs no unit said; a column left out has none. */
function withDefaults(mapping: ConfirmMapping): ConfirmMapping {
  return {
    ...mapping,
    columns: mapping.columns.map((column) => {
      if (column.role === IGNORE_ROLE) return { ...column, unit: null };
      const isState = pointRole(column.role).quantity === 'status';
      return { ...column, unit: column.unit ?? (isState ? 'on/off' : null) };
    }),
  };
}

/** Every way in which a mapping does not fit the file it is for. */
export function mappingErrors(mapping: ConfirmMapping, preview: StoredPreview): FieldError[] {
  const known = new Set(preview.columns.map(({ column }) => column));
  const errors: FieldError[] = [];
  const seen = new Set<string>();
  const checkTimes = (timestamp: ConfirmMapping['timestamp'], tables: StoredPreview['tables'], path: string) => {
    const times = new Set(tables.flatMap((table) => [...table.timestamp.columns, ...cellsOf(table)]));
    timestamp.columns.forEach((column, index) => {
      if (times.has(column)) return;
      errors.push({ path: `${path}.columns.${index}`, message: `The file has no column "${column}".` });
    });
  };
  checkTimes(mapping.timestamp, preview.tables.slice(0, 1), 'timestamp');
  mapping.tables?.forEach(({ timestamp }, index) =>
    checkTimes(timestamp, preview.tables.slice(index, index + 1), `tables.${index}.timestamp`),
  );
  mapping.columns.forEach(({ column, role, unit }, index) => {
    const at = `columns.${index}`;
    if (!known.has(column)) {
      errors.push({ path: `${at}.column`, message: `The file has no column "${column}".` });
      return;
    }
    if (seen.has(column)) errors.push({ path: `${at}.column`, message: `"${column}" is mapped twice.` });
    seen.add(column);
    if (role === IGNORE_ROLE) return;
    const { quantity, label } = pointRole(role);
    if (unit === null) {
      errors.push({ path: `${at}.unit`, message: `Give the unit of "${column}" (${label}).` });
    } else if (TREND_UNITS[unit].quantity !== quantity) {
      const message = `"${column}" cannot be ${label} in ${TREND_UNITS[unit].label}: that unit is of another quantity.`;
      errors.push({ path: `${at}.unit`, message });
    }
  });
  return errors;
}

/** Names in a table's own heading that may hold its time. */
const cellsOf = ({ names }: StoredPreview['tables'][number]): string[] => names.map(({ cell }) => cell);

const isWaterTemperature = (role: MappedRole): boolean =>
  role !== IGNORE_ROLE && pointRole(role).quantity === 'temperature' && !NOT_OF_THE_WATER.has(role);

const noTemperature = () => {
  const message =
    'No temperature of the water is mapped: without one, neither the direction at the tee nor a delta-T can be worked out. Map at least one of the supply and return temperatures.';
  return problem(422, 'No temperature mapped', message, [{ path: 'columns', message }]);
};

function notWaiting(status: UploadStatus) {
  const words: Readonly<Record<UploadStatus, string>> = {
    receiving: 'The file is still being received. Confirm its columns once it has arrived.',
    received: 'The file is being read already.',
    'needs-mapping': 'The file is being read already.',
    importing: 'The file is being read already.',
    analysing: 'The file is being analysed. Change how it is read once that is done.',
    done: 'The file was taken out or is being read again.',
    failed: 'The file could not be read, so there is nothing to map. Its problems say why; mend it and send it again.',
  };
  return problem(409, 'Not waiting for a mapping', words[status]);
}
