import type { EntityManager } from '@mikro-orm/postgresql';
import type { Access } from '../auth/access';
import { enqueue } from '../db/enqueue';
import { query, queryOne } from '../db/sql';
import { problem, type FieldError } from '../http/problem';
import { IGNORE_ROLE, pointRole, type MappedRole } from '../point-roles';
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
 * Confirms how an upload's columns are read and lets its import go on. With `remember`, the next file of the same heading
 * maps itself.
 *
 * Throws  409 when the upload is not waiting for a mapping; 400 with paths for columns it does not have, units that do not fit
 *         or a column named twice; 422 when no temperature is mapped.
 */
export async function confirmMapping(
  em: EntityManager,
  access: Access,
  upload: { id: string; organizationId: string; plantId: string; status: string },
  mapping: ConfirmMapping,
): Promise<void> {
  const { organizationId, plantId } = upload;
  if (upload.status !== 'needs-mapping') throw notWaiting(upload.status as UploadStatus);
  const preview = await readPreview(em, { organizationId, uploadId: upload.id });
  const confirmed = withDefaults(mapping);
  const errors = mappingErrors(confirmed, preview);
  if (errors.length > 0) {
    throw problem(400, 'Invalid input', `The mapping does not fit the file: ${errors[0]?.message ?? ''}`, errors);
  }
  if (!confirmed.columns.some(({ role }) => isWaterTemperature(role))) throw noTemperature();

  const waiting = await queryOne(
    em,
    `update upload set confirmed = $3, status = 'received', progress = 0
     where id = $1 and organization_id = $2 and status = 'needs-mapping' and removed_at is null returning 1`,
    [upload.id, organizationId, JSON.stringify(confirmed)],
  );
  if (!waiting) throw notWaiting('received');
  if (confirmed.remember) {
    await query(
      em,
      `insert into mapping (organization_id, plant_id, fingerprint, confirmed, created_by) values ($1, $2, $3, $4, $5)
       on conflict (plant_id, fingerprint) do update
         set confirmed = excluded.confirmed, created_by = excluded.created_by, created_at = now()`,
      [organizationId, plantId, preview.fingerprint, JSON.stringify(confirmed), access.userId],
    );
  }
  await enqueue(em, 'import-upload', { organizationId, uploadId: upload.id });
  await recordAudit(em, access, {
    organizationId,
    action: 'upload.mapped',
    subjectKind: 'upload',
    subjectId: upload.id,
    detail: { columns: confirmed.columns.filter(({ role }) => role !== IGNORE_ROLE).length },
  });
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
  const times = new Set([...known, ...preview.timestamp.columns]);
  const errors: FieldError[] = [];
  const seen = new Set<string>();
  mapping.timestamp.columns.forEach((column, index) => {
    if (!times.has(column)) {
      errors.push({ path: `timestamp.columns.${index}`, message: `The file has no column "${column}".` });
    }
  });
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
    analysing: 'The file has been read already. To read it another way, remove it and send it again.',
    done: 'The file has been read already. To read it another way, remove it and send it again.',
    failed: 'The file could not be read, so there is nothing to map. Its problems say why; mend it and send it again.',
  };
  return problem(409, 'Not waiting for a mapping', words[status]);
}
