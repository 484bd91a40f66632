import type { EntityManager } from '@mikro-orm/postgresql';
import { PlantSettingsEntity } from '@/entities';
import {
  furtherName,
  furtherWords,
  headerSentence,
  limitSentence,
  sensorName,
  suspicionSentence,
} from '../client/sensor-words';
import type { UnitSystem } from '../client/format';
import { readBlocks, type PointDay } from '../db/blocks';
import { addDays, daysBetween, dayStartMs } from '../db/days';
import { isoInstant, query, queryOne } from '../db/sql';
import { problem } from '../http/problem';
import type { Calibration, FurtherSensor as Further } from '../hydronics/calibration-types';
import { plantModelFromSettings } from '../hydronics/plant-model';
import { inspectSensors, withoutStretches } from '../hydronics/sensor-stretches';
import { KERNEL_VERSION, type Arrangement } from '../hydronics/types';
import { furtherSensors } from '../hydronics/value-of-information';
import { type PointRoleName } from '../point-roles';
import { PlantSettings } from '../schemas/plant';
import type { FurtherSensor, Sensors } from '../schemas/sensors';
import { assembleMeasurements, measurementsBetween } from './assemble-measurements';
import { figure } from './figures';
import { DAY_MS } from './local-time';
import { apiInstant, blockDays, type PeriodMs } from './period';
import { pointsInService } from './points-in-service';
import { roleOfChannel } from './sensor-channels';
import { sensorRows, type SensorPoint } from './sensor-rows';
import { calibrationOf } from './stored-calibration';

/** A quarter: every value of the period is looked at. */
const LONGEST_PERIOD_MS = 93 * DAY_MS;
/** What a further point would do is worked out on the last of the period: the same intervals are estimated many times over. */
const FURTHER_DAYS = 14;
const MINUTE_MS = 60_000;

interface PlantOfSensors {
  id: string;
  organizationId: string;
  arrangement: string;
  stepMinutes: number;
  settingsRevision: number;
  dataFrom?: Date | null | undefined;
  dataThrough?: Date | null | undefined;
}

/**
 * What a period's record says about its sensors: likely lasting errors with their evidence, bad stretches and coverage, what
 * speaks against the mapping, what cannot be told, and which further point would help most.
 *
 * Throws  a 400 problem when the period is longer than a quarter.
 */
export async function readSensors(
  em: EntityManager,
  plant: PlantOfSensors,
  asked: PeriodMs,
  units: UnitSystem,
): Promise<Sensors> {
  if (asked.toMs - asked.fromMs > LONGEST_PERIOD_MS) {
    const message = 'Ask for three months of sensors at the most.';
    throw problem(400, 'Invalid input', message, [{ path: 'to', message }]);
  }
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  const stored = await em.findOneOrFail(PlantSettingsEntity, { ...owner, revision: plant.settingsRevision });
  const arrangement = plant.arrangement as Arrangement;
  const { model } = plantModelFromSettings(PlantSettings.parse(stored.settings), arrangement);
  const period = recorded(plant, asked);
  const { fromDay, toDay } = blockDays(period);
  // A day on either side, as the analysis judges it.
  const stretch = { fromDay: addDays(fromDay, -1), toDay: addDays(toDay, 1) };
  const blocks = await readBlocks(em, owner, stretch.fromDay, stretch.toDay);
  const measurements = assembleMeasurements(await pointsInService(em, owner), blocks, {
    ...stretch,
    stepMinutes: plant.stepMinutes,
    unitCount: model.units.length,
  });
  const startMs = dayStartMs(stretch.fromDay);
  const slotAt = (epochMs: number) => Math.ceil((epochMs - startMs) / MINUTE_MS / plant.stepMinutes);
  const [firstSlot, endSlot] = [slotAt(period.fromMs), slotAt(period.toMs)];
  const points = await pointValues(em, owner, blocks, stretch, plant.stepMinutes);
  const { stretches, suspicions } = inspectSensors(measurements, model);
  const inForce = await calibrationInForce(em, owner, fromDay, toDay);
  const calibration = inForce && calibrationOf(inForce.detail);
  const passed = measurementsBetween(
    withoutStretches(measurements, stretches),
    Math.max(firstSlot, endSlot - (FURTHER_DAYS * 1440) / plant.stepMinutes),
    endSlot,
  );
  return {
    from: apiInstant(asked.fromMs),
    to: apiInstant(asked.toMs),
    stepMinutes: plant.stepMinutes,
    calibration:
      inForce && calibration
        ? {
            id: inForce.id,
            firstDay: inForce.valid_from,
            lastDay: inForce.valid_to,
            intervals: calibration.intervals,
            createdAt: isoInstant(inForce.created_at),
          }
        : null,
    sensors: sensorRows({
      arrangement,
      points,
      measurements,
      stretches,
      calibration,
      startMs,
      firstSlot,
      endSlot,
      units,
    }),
    chiSquare: {
      median: figure(calibration?.chiSquare.median),
      limit: figure(calibration?.chiSquare.limit),
      shareWithin: figure(calibration?.chiSquare.shareWithin),
    },
    header: headerOf(calibration),
    limits: (calibration?.limits ?? []).map((limit) => ({
      limit,
      sentence: limitSentence(limit),
    })),
    suspicions: suspicions.map((suspicion) => {
      const names = suspicion.channels.map((channel) => sensorName(roleOfChannel(channel)));
      const { kind, looksLike, share } = suspicion;
      return { kind, sensors: names, looksLike, share, sentence: suspicionSentence(suspicion, names) };
    }),
    furtherSensors:
      // One of another kernel is shown, and worked out again when its month is; this kernel cannot reckon with it.
      calibration && inForce.kernel_version === KERNEL_VERSION && passed.n > 0
        ? furtherSensors(passed, model, calibration).map((each) => furtherRecord(each, points))
        : [],
    settingsRevision: inForce?.settings_revision ?? plant.settingsRevision,
    kernelVersion: inForce?.kernel_version ?? KERNEL_VERSION,
  };
}

/** The part of a period that lies within the record: what has not come yet is not missing. */
function recorded({ dataFrom, dataThrough, stepMinutes }: PlantOfSensors, period: PeriodMs): PeriodMs {
  const first = dataFrom?.getTime() ?? period.fromMs;
  const end = dataThrough ? dataThrough.getTime() + stepMinutes * MINUTE_MS : period.toMs;
  const fromMs = Math.min(Math.max(period.fromMs, first), period.toMs - 1);
  return { fromMs, toMs: Math.max(fromMs + 1, Math.min(period.toMs, end)) };
}

/** Of the calibrations in force within a stretch of days that of most of them; the later one of equals. */
async function calibrationInForce(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  fromDay: string,
  toDay: string,
) {
  return queryOne<{
    id: number;
    valid_from: string;
    valid_to: string;
    settings_revision: number;
    kernel_version: string;
    created_at: string;
    detail: unknown;
  }>(
    em,
    `select id, valid_from, valid_to, settings_revision, kernel_version, created_at, detail from calibration
     where organization_id = $1 and plant_id = $2 and valid_to >= $3 and valid_from <= $4
     order by least(valid_to, $4::date) - greatest(valid_from, $3::date) desc, valid_from desc limit 1`,
    [owner.organizationId, owner.plantId, fromDay, toDay],
  );
}

/** Every point of the plant with its own values over the stretch. */
async function pointValues(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  blocks: readonly PointDay[],
  stretch: { fromDay: string; toDay: string },
  stepMinutes: number,
): Promise<SensorPoint[]> {
  const rows = await query<{ id: string; role: PointRoleName; unit_index: number; source_name: string }>(
    em,
    `select id, role, unit_index, source_name from point where organization_id = $1 and plant_id = $2
     order by role, unit_index, ordinal`,
    [owner.organizationId, owner.plantId],
  );
  const slotsPerDay = 1440 / stepMinutes;
  const days = daysBetween(stretch.fromDay, stretch.toDay);
  const firstSlot = new Map(days.map((day, index) => [day, index * slotsPerDay]));
  const columns = new Map(rows.map((row) => [row.id, new Float64Array(days.length * slotsPerDay).fill(Number.NaN)]));
  for (const { pointId, day, values } of blocks) {
    if (values.length === slotsPerDay) columns.get(pointId)?.set(values, firstSlot.get(day) ?? 0);
  }
  return rows.map((row) => ({
    role: row.role,
    unitIndex: row.unit_index,
    sourceName: row.source_name,
    values: columns.get(row.id) ?? new Float64Array(0),
  }));
}

function headerOf(calibration: Calibration | null): Sensors['header'] {
  const side = calibration?.header.side ?? 'absent';
  const primaryProbability = side === 'absent' ? null : figure(calibration?.header.primaryProbability);
  return { side, primaryProbability, sentence: headerSentence({ side, primaryProbability }) };
}

function furtherRecord(further: Further, points: readonly SensorPoint[]): FurtherSensor {
  const { role, sigma, unit, nowHalfWidth, withHalfWidth, nowUnknownHours, withUnknownHours } = further;
  // A meter that is there and silent for a while is not one to be bought: it is one to be looked after.
  const kind = points.some((point) => point.role === role) ? 'better' : further.kind;
  const temperature = role.endsWith('Temp');
  const gpm = (value: number) => (unit === 'gpm' ? figure(value) : null);
  const share = (value: number) => (unit === 'share' ? figure(value) : null);
  return {
    role,
    label: furtherName(role, kind),
    kind,
    ...furtherWords(role, kind),
    sigmaF: temperature ? figure(sigma) : null,
    sigmaPercent: temperature ? null : figure(sigma),
    nowHalfWidthGpm: gpm(nowHalfWidth),
    withHalfWidthGpm: gpm(withHalfWidth),
    nowHalfWidthShare: share(nowHalfWidth),
    withHalfWidthShare: share(withHalfWidth),
    nowUnknownHours: figure(nowUnknownHours) ?? 0,
    withUnknownHours: figure(withUnknownHours) ?? 0,
  };
}
