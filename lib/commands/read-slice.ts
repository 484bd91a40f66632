import type { EntityManager } from '@mikro-orm/postgresql';
import { PlantEntity, PlantSettingsEntity } from '@/entities';
import { readBlocksOfDays, type PointDay } from '../db/blocks';
import { addDays } from '../db/days';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import type { Calibration } from '../hydronics/calibration-types';
import { plantModelFromSettings } from '../hydronics/plant-model';
import type { Arrangement, PlantModel } from '../hydronics/types';
import type { PointPlace } from '../queries/assemble-measurements';
import { inMonth, monthOf, type Month } from '../queries/calibration-month';
import { pointsInService } from '../queries/points-in-service';
import { readChecks, type CheckInForce } from '../queries/spot-check-values';
import { calibrationOf } from '../queries/stored-calibration';
import { PlantSettings } from '../schemas/plant';
import { calibrationOfMonth, planCalibration, storedDays, type CalibrationPlan } from './plan-calibration';

/** No month has more days than this, and no slice leaves its month. */
const MOST_DAYS = 31;

interface Owner {
  organizationId: string;
  plantId: string;
}

/** The calibration a slice rests on: one in force whose inputs have not changed, one to be fitted now, or none at all. */
export type SliceCalibration =
  | { kind: 'in-force'; id: number; calibration: Calibration }
  | { kind: 'to-fit'; plan: CalibrationPlan }
  | { kind: 'none' };

/** What a slice read: everything its result is a function of, and the marks that say whether it still is the latest. */
export interface SliceInput extends Owner {
  timeZone: string;
  stepMinutes: number;
  settingsRevision: number;
  model: PlantModel;
  points: PointPlace[];
  checks: CheckInForce[];
  month: Month;
  calibration: SliceCalibration;
  /** Those of the slice, of the day on either side, and of the days a calibration is to be fitted on. */
  blocks: PointDay[];
  /** Days to be worked out, ascending, of one month. */
  days: string[];
  /** The marks that those of them carried; a day taken in because its month is fitted again may have had none. */
  marks: Map<string, string>;
}

/**
 * Reads the next run of a plant's stale days with a day of record on either side, never beyond a calendar month; null when none
 * is left. When the month's calibration no longer fits its inputs, the run is the whole month.
 */
export async function readSlice(owner: Owner): Promise<SliceInput | null> {
  return withTenant({ organizationIds: [owner.organizationId] }, async (em) => {
    // Marks first: what changes after this line comes with newer marks, and what was read before them is not stored.
    const stale = await query<{ day: string; mark: string }>(
      em,
      `select day, mark::text from stale_day where organization_id = $1 and plant_id = $2 order by day limit $3`,
      [owner.organizationId, owner.plantId, MOST_DAYS],
    );
    const plant = await em.findOne(PlantEntity, {
      id: owner.plantId,
      organizationId: owner.organizationId,
      deletedAt: null,
    });
    const first = stale[0];
    if (!plant || !first) return null;
    const month = monthOf(first.day);
    const marked = stale.filter((each) => inMonth(each.day, month));
    const settings = await em.findOneOrFail(PlantSettingsEntity, { ...owner, revision: plant.settingsRevision });
    const { model } = plantModelFromSettings(PlantSettings.parse(settings.settings), plant.arrangement as Arrangement);
    const points = await pointsInService(em, owner);
    const { stepMinutes, settingsRevision } = plant;
    const checks = await readChecks(em, owner, { points, stepMinutes, model });
    const calibration = await chooseCalibration(em, owner, { settingsRevision, points, checks }, month);
    const days =
      calibration.kind === 'to-fit'
        ? [...new Set([...marked.map((each) => each.day), ...(await storedDays(em, owner, month))])].sort()
        : firstRun(marked.map((each) => each.day));
    const wanted = new Set(calibration.kind === 'to-fit' ? calibration.plan.days : []);
    for (const day of days) for (const near of [-1, 0, 1]) wanted.add(addDays(day, near));
    return {
      ...owner,
      timeZone: plant.timeZone,
      stepMinutes,
      settingsRevision,
      model,
      points,
      checks,
      month,
      calibration,
      blocks: await readBlocksOfDays(em, owner, [...wanted]),
      days,
      marks: new Map(marked.map((each) => [each.day, each.mark])),
    };
  });
}

async function chooseCalibration(
  em: EntityManager,
  owner: Owner,
  plant: { settingsRevision: number; points: readonly PointPlace[]; checks: readonly CheckInForce[] },
  month: Month,
): Promise<SliceCalibration> {
  const plan = await planCalibration(em, owner, plant, month);
  if (!plan) return { kind: 'none' };
  const inForce = await calibrationOfMonth(em, owner, month);
  if (inForce?.inputHash !== plan.inputHash) return { kind: 'to-fit', plan };
  return { kind: 'in-force', id: inForce.id, calibration: calibrationOf(inForce.detail) };
}

/** The days up to the first gap: what lies weeks apart is not read for nothing. */
function firstRun(days: readonly string[]): string[] {
  const gap = days.findIndex((day, index) => index > 0 && day !== addDays(days[index - 1] ?? '', 1));
  return gap < 0 ? [...days] : days.slice(0, gap);
}
