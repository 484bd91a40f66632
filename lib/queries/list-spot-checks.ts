import type { EntityManager } from '@mikro-orm/postgresql';
import { z } from 'zod';
import { sensorName } from '../client/sensor-words';
import { isoInstant, query } from '../db/sql';
import { decodeCursor, pageOf } from '../http/cursor';
import type { SensorRole } from '../hydronics/calibration-types';
import type { SpotCheck } from '../schemas/sensors';
import { figure } from './figures';

export interface SpotCheckRow {
  id: string;
  at: string;
  role: SensorRole;
  unit_index: number;
  reading: number;
  shown: number | null;
  recorded: number | null;
  sigma: number;
  instrument: string;
  note: string;
  created_by: string | null;
  created_at: string;
}
export const SELECT_SPOT_CHECK = `
  select s.id, s.at, s.role, s.unit_index, s.reading, s.shown, s.recorded, s.sigma, s.instrument, s.note, u.name as created_by, s.created_at
  from spot_check s left join app_user u on u.id = s.created_by`;
const Key = z.tuple([z.string(), z.uuid()]);

/** A plant's spot checks, the latest reading first. */
export async function listSpotChecks(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  page: { limit: number; cursor?: string | undefined },
): Promise<{ items: SpotCheck[]; nextCursor: string | null }> {
  const after = decodeCursor(Key, page.cursor);
  const rows = await query<SpotCheckRow & Record<string, unknown>>(
    em,
    `${SELECT_SPOT_CHECK} where s.organization_id = $1 and s.plant_id = $2
       and ($3::timestamptz is null or (s.at, s.id) < ($3, $4::uuid))
     order by s.at desc, s.id desc limit $5`,
    [owner.organizationId, owner.plantId, after?.[0] ?? null, after?.[1] ?? null, page.limit + 1],
  );
  return pageOf(rows, page.limit, (row) => [row.at, row.id], spotCheckRecord);
}

/** A spot check as the API shows it. */
export function spotCheckRecord(row: SpotCheckRow): SpotCheck {
  const flow = row.role.endsWith('Flow');
  const shown = row.shown ?? row.recorded;
  const degrees = (value: number | null) => (flow ? null : figure(value));
  const gpm = (value: number | null) => (flow ? figure(value) : null);
  return {
    id: row.id,
    at: isoInstant(row.at).replace('.000Z', 'Z'),
    role: row.role,
    unitIndex: row.unit_index,
    label: sensorName(row.role, row.unit_index),
    readingF: degrees(row.reading),
    readingGpm: gpm(row.reading),
    shownF: degrees(shown),
    shownGpm: gpm(shown),
    shownFrom: row.shown !== null ? 'entered' : row.recorded !== null ? 'record' : 'nowhere',
    sigmaF: degrees(row.sigma),
    sigmaPercent: flow ? figure(row.sigma) : null,
    instrument: row.instrument,
    note: row.note,
    createdBy: row.created_by,
    createdAt: isoInstant(row.created_at),
  };
}
