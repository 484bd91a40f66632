import { createHash } from 'node:crypto';
import type { EntityManager } from '@mikro-orm/postgresql';
import { digestDays } from '../db/blocks';
import { query, queryOne } from '../db/sql';
import { KERNEL_VERSION } from '../hydronics/types';
import { servingWithin, type PointPlace } from '../queries/assemble-measurements';
import { fitDays, monthsAround, type Month } from '../queries/calibration-month';
import type { CheckInForce } from '../queries/spot-check-values';

interface Owner {
  organizationId: string;
  plantId: string;
}

/** All that a month's calibration is a function of, beside the blocks of its days. */
export interface CalibrationPlan {
  month: Month;
  /** Days it is fitted on; ascending, not empty. */
  days: string[];
  inputHash: string;
}

/**
 * What a month's calibration would be fitted on, as the record stands now; null where the month holds no samples. Two plans
 * with one hash are one calibration.
 */
export async function planCalibration(
  em: EntityManager,
  owner: Owner,
  plant: { settingsRevision: number; points: readonly PointPlace[]; checks: readonly CheckInForce[] },
  month: Month,
): Promise<CalibrationPlan | null> {
  const days = fitDays(month, await storedDays(em, owner, monthsAround(month)));
  const first = days[0];
  if (first === undefined) return null;
  const hash = createHash('sha256').update(
    JSON.stringify({
      kernelVersion: KERNEL_VERSION,
      settingsRevision: plant.settingsRevision,
      points: servingWithin(plant.points, first, days.at(-1) ?? first),
      days: await digestDays(em, owner, days),
      checks: plant.checks.map(({ atMs, role, unitIndex, reading, sigma, shown }) => [
        atMs,
        role,
        unitIndex,
        reading,
        sigma,
        shown, // NaN is null in JSON
      ]),
    }),
  );
  return { month, days, inputHash: hash.digest('hex').slice(0, 32) };
}

/** The UTC days of a stretch (both ends included) that hold samples, ascending. */
export async function storedDays(em: EntityManager, owner: Owner, stretch: Month): Promise<string[]> {
  const rows = await query<{ day: string }>(
    em,
    `select distinct day from sample_block
     where organization_id = $1 and plant_id = $2 and day between $3 and $4 order by day`,
    [owner.organizationId, owner.plantId, stretch.firstDay, stretch.lastDay],
  );
  return rows.map((row) => row.day);
}

/** The calibration in force in a month. */
export async function calibrationOfMonth(
  em: EntityManager,
  owner: Owner,
  month: Month,
): Promise<{ id: number; inputHash: string; detail: unknown } | null> {
  const row = await queryOne<{ id: number; input_hash: string; detail: unknown }>(
    em,
    `select id, input_hash, detail from calibration where organization_id = $1 and plant_id = $2 and valid_from = $3`,
    [owner.organizationId, owner.plantId, month.firstDay],
  );
  return row && { id: row.id, inputHash: row.input_hash, detail: row.detail };
}
