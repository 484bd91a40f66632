import type { EntityManager } from '@mikro-orm/postgresql';
import { PlantSettingsEntity } from '@/entities';
import { readBlocks, readResults, type ResultDay } from '../db/blocks';
import { dayStartMs } from '../db/days';
import { queryOne } from '../db/sql';
import { notFound } from '../http/problem';
import { inUnits } from '../http/si-units';
import { plantModelFromSettings } from '../hydronics/plant-model';
import type { Arrangement, Measurements, ResultChannel } from '../hydronics/types';
import { PlantSettings } from '../schemas/plant';
import { assembleMeasurements } from './assemble-measurements';
import { pointsInService } from './points-in-service';
import { figure } from './figures';
import { hourEvidence } from './hour-evidence';
import { meanOver, slotsToldOf, workOutHour, type HourFacts, type MeasuredHour } from './hour-facts';
import { hourLedger, printedLedger } from './hour-ledger';
import { hourInstant, hourRecord, SELECT_HOUR, type HourSqlRow } from './hour-record';
import { hourStations } from './hour-stations';
import { HOUR_MS, MINUTE_MS } from './local-time';
import { apiInstant, blockDays, type PeriodMs } from './period';
import { calibrationOf } from './stored-calibration';

interface PlantOfHour {
  id: string;
  organizationId: string;
  arrangement: string;
  settingsRevision: number;
}
type FullHour = HourSqlRow & { units_running: number | null };

/**
 * One hour in full: the tee sheet's stations, the ledger, the evidence in sentences, its rank by excess flow among the low hours
 * of `among` (all by default), and its neighbours. In the units asked for; the ledger closes to the digit shown in either.
 *
 * Throws  a 404 problem when the plant has no such hour.
 */
export async function readHourDetail(
  em: EntityManager,
  plant: PlantOfHour,
  hourStart: string,
  units: 'ip' | 'si',
  among: PeriodMs | null,
): Promise<object> {
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  const startMs = Date.parse(hourStart);
  const row = await queryOne<FullHour & Record<string, unknown>>(
    em,
    `${SELECT_HOUR}, h.units_running from hour h where h.organization_id = $1 and h.plant_id = $2 and h.hour_start = $3`,
    [plant.organizationId, plant.id, apiInstant(startMs)],
  );
  if (!row) throw notFound('hour');
  const period = { fromMs: startMs, toMs: startMs + HOUR_MS };
  const { fromDay, toDay } = blockDays(period);
  const results = await readResults(em, owner, fromDay, toDay);
  const [first] = results;
  const settingsRevision = first?.settingsRevision ?? plant.settingsRevision;
  const { facts, measurementsOf } = await plantFacts(em, plant, settingsRevision);
  const calibrationId = first?.calibrationId ?? 0;
  const stepMinutes = first?.stepMinutes ?? 60;
  const measurements = await measurementsOf(fromDay, toDay, stepMinutes);
  const value = slotReader(results, startMs);
  const slots = slotsToldOf(HOUR_MS / MINUTE_MS / stepMinutes, value);
  const hour: HourFacts = {
    row: hourRecord(row),
    measured: measuredHour(measurements, slots, (startMs - dayStartMs(fromDay)) / MINUTE_MS / stepMinutes),
    workedOut: workOutHour(slots, stepMinutes, value),
    unitsRunning: row.units_running,
    corrected: await correctedSensors(em, owner, calibrationId),
    plant: facts,
  };
  const { workedOut } = hour;
  const answer = {
    hour: hour.row,
    direction: workedOut.direction,
    reverseProbability: figure(workedOut.reverseProbability),
    bypassFlowGpm: figure(workedOut.bypassFlowGpm.mean),
    bypassFlowLoGpm: figure(workedOut.bypassFlowGpm.lo),
    bypassFlowHiGpm: figure(workedOut.bypassFlowGpm.hi),
    steadyIntervals: workedOut.steadyIntervals,
    intervals: workedOut.intervals,
    unitsRunning: figure(row.units_running),
    stations: hourStations(hour),
    evidence: hourEvidence(hour, units),
    ...(await readRank(em, owner, row, among)),
    ...(await readNeighbours(em, owner, startMs)),
    settingsRevision,
    calibrationId,
    kernelVersion: first?.kernelVersion ?? '',
  };
  return { ...inUnits(answer, units), ledger: ledgerIn(hour, units) };
}

function ledgerIn(hour: HourFacts, units: 'ip' | 'si'): Record<string, number | null> {
  const suffix = units === 'si' ? 'C' : 'F';
  return Object.fromEntries(
    Object.entries(printedLedger(hourLedger(hour), units)).map(([line, amount]: [string, number]) => [
      `${line}${suffix}`,
      figure(amount),
    ]),
  );
}

/** Estimates by slot counted from `startMs`; an hour of a half-hour zone may lie in two days. */
function slotReader(days: readonly ResultDay[], startMs: number): (name: ResultChannel, slot: number) => number {
  return (name, slot) => {
    for (const { day, stepMinutes, channels } of days) {
      const index = Math.ceil((startMs - dayStartMs(day)) / MINUTE_MS / stepMinutes) + slot;
      const column = channels[name];
      if (column && index >= 0 && index < column.length) return column[index] ?? NaN;
    }
    return NaN;
  };
}

function measuredHour(measurements: Measurements, slots: readonly number[], firstSlot: number): MeasuredHour {
  const offset = Math.ceil(firstSlot);
  const mean = (column: Float64Array | undefined) => meanOver(slots, (slot) => column?.[offset + slot] ?? NaN);
  const signed = mean(measurements.bypassFlowGpm);
  return {
    primarySupplyF: mean(measurements.primarySupplyF),
    primaryReturnF: mean(measurements.primaryReturnF),
    secondarySupplyF: mean(measurements.secondarySupplyF),
    secondaryReturnF: mean(measurements.secondaryReturnF),
    bypassF: mean(measurements.bypassF),
    primaryFlowGpm: mean(measurements.primaryFlowGpm),
    secondaryFlowGpm: mean(measurements.secondaryFlowGpm),
    bypassFlowGpm: Number.isNaN(signed) ? mean(measurements.bypassFlowUnsignedGpm) : signed,
    bypassMeterSigned: !Number.isNaN(signed),
  };
}

/** What the calibration behind the hour's results took out; nothing where another has taken its place since. */
async function correctedSensors(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  calibrationId: number,
): Promise<HourFacts['corrected']> {
  const stored = await queryOne<{ detail: unknown }>(
    em,
    `select detail from calibration where organization_id = $1 and plant_id = $2 and id = $3`,
    [owner.organizationId, owner.plantId, calibrationId],
  );
  return stored ? calibrationOf(stored.detail).findings.filter(({ lo, hi }) => lo > 0 || hi < 0) : [];
}

/** The plant as the hour was judged by: the settings revision its results name. */
async function plantFacts(em: EntityManager, plant: PlantOfHour, revision: number) {
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  const stored = await em.findOneOrFail(PlantSettingsEntity, { ...owner, revision });
  const settings = PlantSettings.parse(stored.settings);
  const { model } = plantModelFromSettings(settings, plant.arrangement as Arrangement);
  const places = await pointsInService(em, owner);
  const { temperatureSigmaF, flowSigmaPercent } = model.sensors;
  const facts: HourFacts['plant'] = {
    arrangement: model.arrangement,
    unitCount: model.units.length,
    loadTons: model.loadTons,
    blendedSupplyF: model.blendedSupplyF,
    currency: settings.tariff?.currency ?? null,
    sigma: {
      primarySupplyF: temperatureSigmaF.primarySupplyTemp,
      primaryReturnF: temperatureSigmaF.primaryReturnTemp,
      secondarySupplyF: temperatureSigmaF.secondarySupplyTemp,
      secondaryReturnF: temperatureSigmaF.secondaryReturnTemp,
      bypassF: temperatureSigmaF.bypassTemp,
      primaryFlowPercent: flowSigmaPercent.primaryFlow,
      secondaryFlowPercent: flowSigmaPercent.secondaryFlow,
    },
  };
  return {
    facts,
    measurementsOf: async (fromDay: string, toDay: string, stepMinutes: number) =>
      assembleMeasurements(places, await readBlocks(em, owner, fromDay, toDay), {
        fromDay,
        toDay,
        stepMinutes,
        unitCount: model.units.length,
      }),
  };
}

/** Place by excess flow among the low hours; null for an hour that is not one of them. */
async function readRank(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  row: FullHour,
  among: PeriodMs | null,
): Promise<{ rank: number | null; rankOf: number }> {
  const found = await queryOne<{ ahead: number; low_hours: number }>(
    em,
    `select count(*)::int as low_hours, (count(*) filter (where
         (excess_flow_gpm is not null and ($5::float8 is null or excess_flow_gpm > $5))
         or (excess_flow_gpm is not distinct from $5 and hour_start < $6)))::int as ahead
     from hour where organization_id = $1 and plant_id = $2 and low
       and hour_start >= coalesce($3::timestamptz, '-infinity') and hour_start < coalesce($4::timestamptz, 'infinity')`,
    [
      owner.organizationId,
      owner.plantId,
      among && apiInstant(among.fromMs),
      among && apiInstant(among.toMs),
      row.excess_flow_gpm,
      row.hour_start,
    ],
  );
  return { rank: row.low ? (found?.ahead ?? 0) + 1 : null, rankOf: found?.low_hours ?? 0 };
}

async function readNeighbours(
  em: EntityManager,
  owner: { organizationId: string; plantId: string },
  startMs: number,
): Promise<{ before: string | null; after: string | null }> {
  const found = await queryOne<{ before: string | null; after: string | null }>(
    em,
    `select (select max(hour_start) from hour where organization_id = $1 and plant_id = $2 and hour_start < $3) as before,
            (select min(hour_start) from hour where organization_id = $1 and plant_id = $2 and hour_start > $3) as after`,
    [owner.organizationId, owner.plantId, apiInstant(startMs)],
  );
  const instant = (text: string | null | undefined) => (text ? hourInstant(text) : null);
  return { before: instant(found?.before), after: instant(found?.after) };
}
