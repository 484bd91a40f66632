import { createHash } from 'node:crypto';
import type { ResultDayToWrite } from '../db/blocks';
import { addDays, daysBetween, dayStartMs } from '../db/days';
import { calibrateRecord } from '../hydronics/calibrate';
import type { Calibration } from '../hydronics/calibration-types';
import { estimateIntervals } from '../hydronics/estimate';
import { summariseHours } from '../hydronics/hours';
import { inspectSensors, withoutStretches } from '../hydronics/sensor-stretches';
import { RESULT_CHANNELS, type HourResult, type Measurements, type PlantModel } from '../hydronics/types';
import { assembleMeasurements, servingWithin } from '../queries/assemble-measurements';
import { localHours, type LocalHour } from '../queries/local-hours';
import { checksFrom } from '../queries/spot-check-values';
import { asStored } from '../queries/stored-calibration';
import type { SliceInput } from './read-slice';

const DAY_MS = 86_400_000;

export interface SliceResult {
  /** Fitted for this slice's month; null where the one in force is used, or none is. */
  fitted: Calibration | null;
  days: ResultDayToWrite[];
  emptyDays: string[];
  hours: { hour: HourResult; localDay: string }[];
  /** The stretch whose hours are replaced. */
  fromMs: number;
  toMs: number;
}

/**
 * The slice's results: a pure function of what was read. Sensors' bad stretches are left out, the lasting errors of the sensors
 * are those of the month's calibration, and each interval is estimated with them.
 */
export function computeSlice(input: SliceInput): SliceResult {
  const firstDay = input.days[0] ?? '';
  const lastDay = input.days.at(-1) ?? firstDay;
  const stretch = { fromDay: addDays(firstDay, -1), toDay: addDays(lastDay, 1) };
  const near = new Set(input.days.flatMap((day) => [addDays(day, -1), day, addDays(day, 1)]));
  const measurements = withoutBadStretches(assemble(input, stretch, near), input.model);
  const fitted = fitCalibration(input);
  const calibration = input.calibration.kind === 'in-force' ? input.calibration.calibration : (fitted ?? undefined);
  const estimates = estimateIntervals(measurements, input.model, calibration);
  const slotsPerDay = 1440 / input.stepMinutes;
  const withData = new Set(input.blocks.map((block) => block.day));
  const wanted = new Set(input.days);

  const days: ResultDayToWrite[] = [];
  for (const [index, day] of daysBetween(stretch.fromDay, stretch.toDay).entries()) {
    if (!wanted.has(day) || !withData.has(day)) continue;
    const from = index * slotsPerDay;
    days.push({
      day,
      inputHash: hashOf(input, day),
      channels: Object.fromEntries(
        RESULT_CHANNELS.map((channel) => [
          channel,
          new Float32Array(estimates[channel].subarray(from, from + slotsPerDay)),
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
    fitted,
    days,
    emptyDays: input.days.filter((day) => !withData.has(day)),
    hours: results.flatMap((hour, index) => withDay(hour, hours[index])),
    fromMs: starts[0] ?? startMs,
    toMs: dayStartMs(lastDay) + DAY_MS,
  };
}

/** The record as the estimate takes it: what did not pass the checks is missing. A slot's verdict needs no more than the day on either side. */
const withoutBadStretches = (measurements: Measurements, model: PlantModel): Measurements =>
  withoutStretches(measurements, inspectSensors(measurements, model).stretches);

/** Fits the month's calibration on the days of its plan and on nothing else. */
function fitCalibration(input: SliceInput): Calibration | null {
  if (input.calibration.kind !== 'to-fit') return null;
  const { days } = input.calibration.plan;
  const fromDay = days[0] ?? '';
  const record = assemble(input, { fromDay, toDay: days.at(-1) ?? fromDay }, new Set(days));
  const checks = checksFrom(input.checks, fromDay, input.stepMinutes);
  return asStored(calibrateRecord(withoutBadStretches(record, input.model), input.model, checks));
}

function assemble(
  input: SliceInput,
  stretch: { fromDay: string; toDay: string },
  days: ReadonlySet<string>,
): Measurements {
  return assembleMeasurements(
    input.points,
    input.blocks.filter((block) => days.has(block.day)),
    { ...stretch, stepMinutes: input.stepMinutes, unitCount: input.model.units.length },
  );
}

/** An hour of which nothing at all was measured is no row: it would only say that there is nothing to say. */
function withDay(hour: HourResult, local: LocalHour | undefined): { hour: HourResult; localDay: string }[] {
  return local && hour.quality > 0 ? [{ hour, localDay: local.day }] : [];
}

/** What of the samples a day's result rests on: its own and those of the day on either side. */
function hashOf(input: SliceInput, day: string): string {
  const [before, after] = [addDays(day, -1), addDays(day, 1)];
  const hash = createHash('sha256').update(JSON.stringify(servingWithin(input.points, before, after)));
  for (const block of input.blocks) {
    if (block.day < before || block.day > after) continue;
    hash
      .update(`${block.day}/${block.pointId}/`)
      .update(new Uint8Array(block.values.buffer, block.values.byteOffset, block.values.byteLength));
  }
  return hash.digest('hex').slice(0, 32);
}
