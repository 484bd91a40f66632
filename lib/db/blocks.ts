/**
 * The one module that reads and writes the arrays of sample_layer, sample_block and result_block. Values never pass through
 * the entity manager: binary COPY in, array_send out.
 */
import type { EntityManager } from '@mikro-orm/postgresql';
import { RESULT_CHANNELS, type ResultChannel } from '../hydronics/types';
import { hourlyBands } from './bands';
import { copyIntoTemporary } from './copy-rows';
import { readRealArray } from './real-array';
import { query } from './sql';

interface Owner {
  organizationId: string;
  plantId: string;
}

/** A day of one point: length 1440 / stepMinutes, NaN where missing. */
export interface PointDay {
  pointId: string;
  day: string;
  values: Float32Array;
}

/** Writes one upload's own values. The last write of the same (point, day, upload) wins; other uploads are not touched. */
export async function writeLayers(
  em: EntityManager,
  owner: Owner & { uploadSeq: number; stepMinutes: number },
  days: readonly PointDay[],
): Promise<void> {
  if (days.length === 0) return;
  await copyIntoTemporary(
    em,
    'incoming_layer',
    { day: 'date', point_id: 'uuid', v: 'real[]' },
    days.map((each) => [each.day, each.pointId, each.values]),
  );
  await query(
    em,
    `insert into sample_layer (organization_id, plant_id, day, point_id, upload_seq, step, v)
     select $1, $2, day, point_id, $3, $4, v from incoming_layer
     on conflict (plant_id, day, point_id, upload_seq) do update set v = excluded.v, step = excluded.step`,
    [owner.organizationId, owner.plantId, owner.uploadSeq, owner.stepMinutes],
  );
}

/** One upload's stored layer days, for reading back a day that comes in two parts. */
export async function readLayers(
  em: EntityManager,
  owner: Owner & { uploadSeq: number },
  days: readonly string[],
): Promise<PointDay[]> {
  const rows = await query<{ point_id: string; day: string; v: Buffer }>(
    em,
    `select point_id, day, array_send(v) as v from sample_layer
     where organization_id = $1 and plant_id = $2 and upload_seq = $3 and day = any ($4::date[])`,
    [owner.organizationId, owner.plantId, owner.uploadSeq, days],
  );
  return rows.map((row) => ({ pointId: row.point_id, day: row.day, values: readRealArray(row.v) }));
}

/**
 * Derives the day blocks of `days` again from the layers of applied uploads, the later upload winning slot by slot. Takes the
 * plant's row first, so that two uploads deriving the same day do it one after the other. Returns the days that changed.
 */
export async function deriveBlocks(
  em: EntityManager,
  owner: Owner & { stepMinutes: number },
  days: readonly string[],
): Promise<string[]> {
  await query(em, `select 1 from plant where id = $1 and organization_id = $2 for update`, [
    owner.plantId,
    owner.organizationId,
  ]);
  const rows = await query<{ point_id: string; day: string; step: number; v: Buffer }>(
    em,
    `select l.point_id, l.day, l.step, array_send(l.v) as v
     from sample_layer l join upload u on u.plant_id = l.plant_id and u.upload_seq = l.upload_seq
     where l.organization_id = $1 and l.plant_id = $2 and l.day = any ($3::date[]) and u.applied
     order by l.day, l.point_id, l.upload_seq`,
    [owner.organizationId, owner.plantId, days],
  );
  const merged = new Map<string, PointDay>();
  for (const row of rows) {
    if (row.step !== owner.stepMinutes) continue; // of a step the plant no longer has
    const values = readRealArray(row.v);
    const key = `${row.day}/${row.point_id}`;
    const block = merged.get(key);
    if (!block) {
      merged.set(key, { pointId: row.point_id, day: row.day, values });
      continue;
    }
    for (let slot = 0; slot < values.length; slot++) {
      const value = values[slot] ?? NaN;
      if (!Number.isNaN(value)) block.values[slot] = value;
    }
  }
  await copyIntoTemporary(
    em,
    'incoming_block',
    { day: 'date', point_id: 'uuid', v: 'real[]', lo: 'real[]', mean: 'real[]', hi: 'real[]' },
    [...merged.values()].map(({ day, pointId, values }) => {
      const { lo, mean, hi } = hourlyBands(values, owner.stepMinutes);
      return [day, pointId, values, lo, mean, hi];
    }),
  );
  const changed = await query<{ day: string }>(
    em,
    `with gone as (
       delete from sample_block b where b.organization_id = $1 and b.plant_id = $2 and b.day = any ($4::date[])
         and not exists (select from incoming_block i where i.day = b.day and i.point_id = b.point_id) returning b.day),
     kept as (
       insert into sample_block as t (organization_id, plant_id, day, point_id, step, v, lo, mean, hi)
       select $1, $2, day, point_id, $3, v, lo, mean, hi from incoming_block
       on conflict (plant_id, day, point_id) do update
         set v = excluded.v, lo = excluded.lo, mean = excluded.mean, hi = excluded.hi, step = excluded.step
         where t.v is distinct from excluded.v or t.step is distinct from excluded.step
       returning t.day)
     select distinct day from (select day from gone union all select day from kept) d order by day`,
    [owner.organizationId, owner.plantId, owner.stepMinutes, days],
  );
  return changed.map((row) => row.day);
}

/** The blocks of a stretch of UTC days, both ends included; `pointIds` absent = all points. */
export async function readBlocks(
  em: EntityManager,
  owner: Owner,
  fromDay: string,
  toDay: string,
  pointIds?: readonly string[],
): Promise<PointDay[]> {
  const rows = await query<{ point_id: string; day: string; v: Buffer }>(
    em,
    `select point_id, day, array_send(v) as v from sample_block
     where organization_id = $1 and plant_id = $2 and day between $3 and $4 and ($5::uuid[] is null or point_id = any ($5))
     order by day`,
    [owner.organizationId, owner.plantId, fromDay, toDay, pointIds ?? null],
  );
  return rows.map((row) => ({ pointId: row.point_id, day: row.day, values: readRealArray(row.v) }));
}

/** The blocks of single UTC days, in order of day. */
export async function readBlocksOfDays(em: EntityManager, owner: Owner, days: readonly string[]): Promise<PointDay[]> {
  const rows = await query<{ point_id: string; day: string; v: Buffer }>(
    em,
    `select point_id, day, array_send(v) as v from sample_block
     where organization_id = $1 and plant_id = $2 and day = any ($3::date[]) order by day`,
    [owner.organizationId, owner.plantId, days],
  );
  return rows.map((row) => ({ pointId: row.point_id, day: row.day, values: readRealArray(row.v) }));
}

/** A digest of all the values of each of the days, made where they lie: whether anything changed is known without reading it. */
export async function digestDays(
  em: EntityManager,
  owner: Owner,
  days: readonly string[],
): Promise<{ day: string; digest: string }[]> {
  return query(
    em,
    `select day, md5(string_agg(point_id || '/' || step || '/' || md5(array_send(v)), ',' order by point_id)) as digest
     from sample_block where organization_id = $1 and plant_id = $2 and day = any ($3::date[]) group by day order by day`,
    [owner.organizationId, owner.plantId, days],
  );
}

export interface PointDayBands {
  pointId: string;
  day: string;
  lo: Float32Array;
  mean: Float32Array;
  hi: Float32Array;
}

/** Hourly bands of a stretch of UTC days: 24 values a day, without opening the blocks. */
export async function readBands(
  em: EntityManager,
  owner: Owner,
  fromDay: string,
  toDay: string,
  pointIds: readonly string[],
): Promise<PointDayBands[]> {
  const rows = await query<{ point_id: string; day: string; lo: Buffer; mean: Buffer; hi: Buffer }>(
    em,
    `select point_id, day, array_send(lo) as lo, array_send(mean) as mean, array_send(hi) as hi from sample_block
     where organization_id = $1 and plant_id = $2 and day between $3 and $4 and point_id = any ($5) order by day`,
    [owner.organizationId, owner.plantId, fromDay, toDay, pointIds],
  );
  return rows.map((row) => ({
    pointId: row.point_id,
    day: row.day,
    lo: readRealArray(row.lo),
    mean: readRealArray(row.mean),
    hi: readRealArray(row.hi),
  }));
}

export interface ResultDay {
  day: string;
  stepMinutes: number;
  settingsRevision: number;
  calibrationId: number;
  kernelVersion: string;
  channels: Partial<Record<ResultChannel, Float32Array>>;
}

/** Estimates of a stretch of UTC days, both ends included, in order; only the channels asked for are read. */
export async function readResults(
  em: EntityManager,
  owner: Owner,
  fromDay: string,
  toDay: string,
  channels: readonly ResultChannel[] = RESULT_CHANNELS,
): Promise<ResultDay[]> {
  const columns = channels.map(
    (channel) => `array_send(${RESULT_CHANNELS[RESULT_CHANNELS.indexOf(channel)] ?? ''}) as ${channel}`,
  );
  const rows = await query<
    Record<string, unknown> & {
      day: string;
      step: number;
      settings_revision: number;
      calibration_id: number;
      kernel_version: string;
    }
  >(
    em,
    `select day, step, settings_revision, calibration_id, kernel_version, ${columns.join(', ')} from result_block
     where organization_id = $1 and plant_id = $2 and day between $3 and $4 order by day`,
    [owner.organizationId, owner.plantId, fromDay, toDay],
  );
  return rows.map((row) => ({
    day: row.day,
    stepMinutes: row.step,
    settingsRevision: row.settings_revision,
    calibrationId: row.calibration_id,
    kernelVersion: row.kernel_version,
    channels: Object.fromEntries(channels.map((channel) => [channel, readRealArray(row[channel] as Buffer)])),
  }));
}

export interface ResultDayToWrite {
  day: string;
  inputHash: string;
  channels: Record<ResultChannel, Float32Array>;
}

/** Writes days of estimates; unchanged rows are not rewritten. */
export async function writeResults(
  em: EntityManager,
  owner: Owner & { stepMinutes: number; settingsRevision: number; calibrationId?: number; kernelVersion: string },
  days: readonly ResultDayToWrite[],
): Promise<void> {
  if (days.length === 0) return;
  const arrays = Object.fromEntries(RESULT_CHANNELS.map((channel) => [channel, 'real[]' as const]));
  await copyIntoTemporary(
    em,
    'incoming_result',
    { day: 'date', input_hash: 'text', ...arrays },
    days.map((each) => [each.day, each.inputHash, ...RESULT_CHANNELS.map((channel) => each.channels[channel])]),
  );
  const list = RESULT_CHANNELS.join(', ');
  await query(
    em,
    `insert into result_block as t (organization_id, plant_id, day, step, settings_revision, calibration_id, kernel_version, input_hash, ${list})
     select $1, $2, day, $3, $4, $5, $6, input_hash, ${list} from incoming_result
     on conflict (plant_id, day) do update set step = excluded.step, settings_revision = excluded.settings_revision,
       calibration_id = excluded.calibration_id, kernel_version = excluded.kernel_version, input_hash = excluded.input_hash,
       ${RESULT_CHANNELS.map((channel) => `${channel} = excluded.${channel}`).join(', ')}
     where (t.input_hash, t.settings_revision, t.calibration_id, t.kernel_version, t.step)
       is distinct from (excluded.input_hash, excluded.settings_revision, excluded.calibration_id, excluded.kernel_version, excluded.step)`,
    [
      owner.organizationId,
      owner.plantId,
      owner.stepMinutes,
      owner.settingsRevision,
      owner.calibrationId ?? 0,
      owner.kernelVersion,
    ],
  );
}
