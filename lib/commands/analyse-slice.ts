import { createHash } from 'node:crypto';
import type { EntityManager } from '@mikro-orm/postgresql';
import { PlantEntity, PlantSettingsEntity } from '@/entities';
import { readBlocks, writeResults, type PointDay, type ResultDayToWrite } from '../db/blocks';
import { addDays, dayOf, daysBetween, dayStartMs } from '../db/days';
import { query } from '../db/sql';
import { withTenant } from '../db/tenant';
import { estimateIntervals } from '../hydronics/estimate';
import { summariseHours } from '../hydronics/hours';
import { plantModelFromSettings } from '../hydronics/plant-model';
import {
  KERNEL_VERSION,
  RESULT_CHANNELS,
  type Arrangement,
  type HourResult,
  type PlantModel,
} from '../hydronics/types';
import { assembleMeasurements, type PointPlace } from '../queries/assemble-measurements';
import { localHours, type LocalHour } from '../queries/local-hours';
import { pointsInService } from '../queries/points-in-service';
import { PlantSettings } from '../schemas/plant';
import { lockPlant } from './lock-plant';
import { writeHours } from './write-hours';

/** Most UTC days one slice computes: short enough to be fair between tenants and cheap to do again. */
const SLICE_DAYS = 31;
const DAY_MS = 86_400_000;

interface Owner {
  organizationId: string;
  plantId: string;
}

/** What a slice read: everything its result is a function of, and the marks that say whether it still is the latest. */
interface SliceInput extends Owner {
  timeZone: string;
  stepMinutes: number;
  settingsRevision: number;
  model: PlantModel;
  points: PointPlace[];
  blocks: PointDay[];
  days: string[];
  marks: Map<string, string>;
}

export interface SliceResult {
  days: ResultDayToWrite[];
  emptyDays: string[];
  hours: { hour: HourResult; localDay: string }[];
  /** The stretch whose hours are replaced. */
  fromMs: number;
  toMs: number;
}

/** Reads the next run of a plant's stale days, at most a month, with a day of record on either side; null when none is left. */
export async function readSlice(owner: Owner): Promise<SliceInput | null> {
  return withTenant({ organizationIds: [owner.organizationId] }, async (em) => {
    // Marks first: settings that change after this line come with newer marks, and what was read before them is not stored.
    const stale = await query<{ day: string; mark: string }>(
      em,
      `select day, mark::text from stale_day where organization_id = $1 and plant_id = $2 order by day limit $3`,
      [owner.organizationId, owner.plantId, SLICE_DAYS],
    );
    const plant = await em.findOne(PlantEntity, {
      id: owner.plantId,
      organizationId: owner.organizationId,
      deletedAt: null,
    });
    if (!plant) return null;
    const first = stale[0];
    if (!first) return null;
    // Only neighbouring days: a gap of weeks between two marks is not read for nothing.
    const run = stale.filter(
      (each, index) => each.day <= addDays(first.day, SLICE_DAYS - 1) && contiguous(stale, index),
    );
    const days = run.map((each) => each.day);
    const settings = await em.findOneOrFail(PlantSettingsEntity, { ...owner, revision: plant.settingsRevision });
    const { model } = plantModelFromSettings(PlantSettings.parse(settings.settings), plant.arrangement as Arrangement);
    const points = await pointsInService(em, owner);
    const blocks = await readBlocks(em, owner, addDays(first.day, -1), addDays(days.at(-1) ?? first.day, 1));
    return {
      ...owner,
      timeZone: plant.timeZone,
      stepMinutes: plant.stepMinutes,
      settingsRevision: plant.settingsRevision,
      model,
      points,
      blocks,
      days,
      marks: new Map(run.map((each) => [each.day, each.mark])),
    };
  });
}

function contiguous(stale: readonly { day: string }[], index: number): boolean {
  for (let i = 1; i <= index; i++) if (stale[i]?.day !== addDays(stale[i - 1]?.day ?? '', 1)) return false;
  return true;
}

/** The slice's results: a pure function of what was read. */
export function computeSlice(input: SliceInput): SliceResult {
  const firstDay = input.days[0] ?? '';
  const lastDay = input.days.at(-1) ?? firstDay;
  const stretch = {
    fromDay: addDays(firstDay, -1),
    toDay: addDays(lastDay, 1),
    stepMinutes: input.stepMinutes,
    unitCount: input.model.units.length,
  };
  const measurements = assembleMeasurements(input.points, input.blocks, stretch);
  const estimates = estimateIntervals(measurements, input.model);
  const slotsPerDay = 1440 / input.stepMinutes;
  const withData = new Set(input.blocks.map((block) => block.day));

  const days: ResultDayToWrite[] = [];
  for (const [index, day] of daysBetween(stretch.fromDay, stretch.toDay).entries()) {
    if (!input.marks.has(day) || !withData.has(day)) continue;
    const from = index * slotsPerDay;
    days.push({
      day,
      inputHash: hashOf(input, day),
      channels: Object.fromEntries(
        RESULT_CHANNELS.map((channel) => [
          channel,
          Float32Array.from(estimates[channel].subarray(from, from + slotsPerDay)),
        ]),
      ) as ResultDayToWrite['channels'],
    });
  }

  const hours = localHours(input.timeZone, dayStartMs(firstDay), dayStartMs(lastDay) + DAY_MS);
  const starts = hours.map((hour) => hour.startMs);
  const startMs = dayStartMs(stretch.fromDay);
  const results = summariseHours(
    estimates,
    measurements,
    input.model,
    { startMs, stepMinutes: input.stepMinutes },
    starts,
  );
  return {
    days,
    emptyDays: input.days.filter((day) => !withData.has(day)),
    hours: results.flatMap((hour, index) => withDay(hour, hours[index])),
    fromMs: starts[0] ?? startMs,
    toMs: dayStartMs(lastDay) + DAY_MS,
  };
}

/** An hour of which nothing at all was measured is no row: it would only say that there is nothing to say. */
function withDay(hour: HourResult, local: LocalHour | undefined): { hour: HourResult; localDay: string }[] {
  return local && hour.quality > 0 ? [{ hour, localDay: local.day }] : [];
}

function hashOf(input: SliceInput, day: string): string {
  const near = new Set([addDays(day, -1), day, addDays(day, 1)]);
  const hash = createHash('sha256').update(JSON.stringify(input.points));
  for (const block of input.blocks) {
    if (!near.has(block.day)) continue;
    hash
      .update(`${block.day}/${block.pointId}/`)
      .update(new Uint8Array(block.values.buffer, block.values.byteOffset, block.values.byteLength));
  }
  return hash.digest('hex').slice(0, 32);
}

/**
 * Stores a slice in the transaction of `em`, unless a day has been marked again since it was read: then nothing is written and
 * false is returned, because the record has moved on and the later reading must win.
 */
export async function writeSlice(em: EntityManager, input: SliceInput, result: SliceResult): Promise<boolean> {
  const { organizationId, plantId } = input;
  if (!(await lockPlant(em, input))) return false;
  const now = await query<{ day: string; mark: string }>(
    em,
    `select day, mark::text from stale_day where organization_id = $1 and plant_id = $2 and day = any ($3::date[]) order by day for update`,
    [organizationId, plantId, input.days],
  );
  if (now.length !== input.days.length || now.some((each) => input.marks.get(each.day) !== each.mark)) return false;
  await writeResults(em, { ...input, kernelVersion: KERNEL_VERSION }, result.days);
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
  await query(em, `update plant set results_revision = results_revision + 1 where id = $1 and organization_id = $2`, [
    plantId,
    organizationId,
  ]);
  return true;
}

/** The local days whose sums a slice changes. */
export const localDaysOf = (result: SliceResult): string[] => [
  ...new Set([...result.hours.map((each) => each.localDay), dayOf(result.fromMs), dayOf(result.toMs)]),
];
