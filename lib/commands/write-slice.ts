import type { EntityManager } from '@mikro-orm/postgresql';
import { writeResults } from '../db/blocks';
import { query, queryOne } from '../db/sql';
import { KERNEL_VERSION } from '../hydronics/types';
import { LEAST_DAYS, monthOf } from '../queries/calibration-month';
import { calibrationJson } from '../queries/stored-calibration';
import type { SliceResult } from './compute-slice';
import { lockPlant } from './lock-plant';
import { markDaysStale, markStoredDays } from './mark-days-stale';
import { calibrationOfMonth, planCalibration, storedDays } from './plan-calibration';
import type { SliceInput } from './read-slice';
import { writeHours } from './write-hours';

/**
 * Stores a slice in the transaction of `em`, unless a day has been marked again since it was read: then nothing is written and
 * false is returned, because the record has moved on and the later reading must win.
 */
export async function writeSlice(em: EntityManager, input: SliceInput, result: SliceResult): Promise<boolean> {
  const { organizationId, plantId } = input;
  if (!(await lockPlant(em, input))) return false;
  if (!(await stillLatest(em, input))) return false;
  const calibrationId = await writeCalibration(em, input, result);
  if (calibrationId === null) return false;
  await writeResults(em, { ...input, calibrationId, kernelVersion: KERNEL_VERSION }, result.days);
  await query(em, `delete from result_block where organization_id = $1 and plant_id = $2 and day = any ($3::date[])`, [
    organizationId,
    plantId,
    result.emptyDays,
  ]);
  await writeHours(em, input, result);
  await query(em, `delete from stale_day where organization_id = $1 and plant_id = $2 and day = any ($3::date[])`, [
    organizationId,
    plantId,
    input.days,
  ]);
  await noteChecks(em, input);
  await callNeighbours(em, input);
  await query(em, `update plant set results_revision = results_revision + 1 where id = $1 and organization_id = $2`, [
    plantId,
    organizationId,
  ]);
  return true;
}

/** Whether the slice's days bear the very marks that were read, and those that bore none still do not. */
async function stillLatest(em: EntityManager, input: SliceInput): Promise<boolean> {
  const now = await query<{ day: string; mark: string }>(
    em,
    `select day, mark::text from stale_day where organization_id = $1 and plant_id = $2 and day = any ($3::date[]) order by day for update`,
    [input.organizationId, input.plantId, input.days],
  );
  const read = input.days.filter((day) => input.marks.has(day));
  return now.length === read.length && now.every((each) => input.marks.get(each.day) === each.mark);
}

/** Puts the month's calibration in force and returns its number (0: the month has none); null when another took its place meanwhile. */
async function writeCalibration(em: EntityManager, input: SliceInput, result: SliceResult): Promise<number | null> {
  const { organizationId, plantId, month, calibration } = input;
  if (calibration.kind === 'in-force') {
    const inForce = await calibrationOfMonth(em, input, month);
    return inForce?.id === calibration.id ? calibration.id : null;
  }
  await query(em, `delete from calibration where organization_id = $1 and plant_id = $2 and valid_from = $3`, [
    organizationId,
    plantId,
    month.firstDay,
  ]);
  if (calibration.kind === 'none' || !result.fitted) return 0;
  const row = await queryOne<{ id: number }>(
    em,
    `insert into calibration (organization_id, plant_id, id, valid_from, valid_to, input_hash, settings_revision, kernel_version, detail)
     values ($1, $2, nextval('calibration_id'), $3, $4, $5, $6, $7, $8) returning id`,
    [
      organizationId,
      plantId,
      month.firstDay,
      month.lastDay,
      calibration.plan.inputHash,
      input.settingsRevision,
      KERNEL_VERSION,
      calibrationJson(result.fitted),
    ],
  );
  return row?.id ?? null;
}

/**
 * Keeps what the record shows beside each spot check. When that has changed, by a file that came after the check, every
 * calibration of the plant rests on something older, and all other days are marked.
 */
async function noteChecks(em: EntityManager, input: SliceInput): Promise<void> {
  const changed = input.checks.filter((check) => check.recorded !== check.recordedBefore);
  if (changed.length === 0) return;
  await query(
    em,
    `update spot_check s set recorded = c.recorded from unnest($3::uuid[], $4::float8[]) c(id, recorded)
     where s.organization_id = $1 and s.plant_id = $2 and s.id = c.id`,
    [input.organizationId, input.plantId, changed.map((check) => check.id), changed.map((check) => check.recorded)],
  );
  await markDaysStale(em, { ...input, except: input.days });
}

/**
 * Marks the months beside this one whose calibration was filled up from days that have changed: only a month with fewer days of
 * its own than a fit asks for, and only when its calibration would come out of other inputs than it did. Each such month is
 * fitted once and then agrees with its inputs, so this ends.
 */
async function callNeighbours(em: EntityManager, input: SliceInput): Promise<void> {
  for (const step of [-1, 1]) {
    const month = monthOf(input.month.firstDay, step);
    const own = await storedDays(em, input, month);
    if (own.length === 0 || own.length >= LEAST_DAYS) continue;
    const plan = await planCalibration(em, input, input, month);
    const inForce = await calibrationOfMonth(em, input, month);
    if (plan?.inputHash !== inForce?.inputHash) await markStoredDays(em, input, own);
  }
}
