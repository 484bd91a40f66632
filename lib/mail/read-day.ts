import type { EntityManager } from '@mikro-orm/postgresql';
import { OrganizationEntity, PlantSettingsEntity, type Plant } from '@/entities';
import { addLocalDays, startOfLocalDay } from '../client/format-time';
import { readResults, type ResultDay } from '../db/blocks';
import { dayOf, dayStartMs } from '../db/days';
import { DIRECTIONS, STATES, type ResultChannel } from '../hydronics/types';
import { localHours } from '../queries/local-hours';
import { PlantSettings } from '../schemas/plant';
import type { DayFacts } from './daily-mail-model';
import { dominantCause, hourBars, situationOf, type DayHour } from './day-facts';
import { readHours, type DaySums } from './day-rows';
import { isBridged, reverseStretches, shortlist, type DaySlot } from './reverse-stretches';

const CHANNELS = [
  'direction',
  'state',
  'bypass_flow_gpm',
  'bypass_flow_lo_gpm',
  'bypass_flow_hi_gpm',
  'blended_supply_f',
  'primary_supply_f',
  'primary_flow_gpm',
  'secondary_flow_gpm',
] as const satisfies readonly ResultChannel[];
const REVERSE = DIRECTIONS.indexOf('reverse');
const RUNNING = STATES.indexOf('running');

/** Everything the mail tells of a local day, from its sums, its hours and its intervals. */
export async function readDayFacts(em: EntityManager, plant: Plant, sums: DaySums): Promise<DayFacts> {
  const { organizationId, timeZone } = plant;
  const organization = await em.findOneOrFail(OrganizationEntity, { id: organizationId });
  const revision = await em.findOne(PlantSettingsEntity, {
    plantId: plant.id,
    organizationId,
    revision: plant.settingsRevision,
  });
  const settings = PlantSettings.safeParse(revision?.settings).data ?? null;
  const fromMs = startOfLocalDay(sums.day, timeZone);
  const toMs = startOfLocalDay(addLocalDays(sums.day, 1), timeZone);
  const hours = await readHours(em, plant, sums.day);
  const results = await readResults(
    em,
    { organizationId, plantId: plant.id },
    dayOf(fromMs),
    dayOf(toMs - 1),
    CHANNELS,
  );
  const slots = daySlots(results, plant.stepMinutes, fromMs, toMs);
  const reverse = slots.filter((slot) => slot.reverse);
  const largest = extreme(reverse, (slot) => -slot.bypassFlowGpm);
  const warmest = extreme(reverse, (slot) => slot.blendedSupplyF);
  const stretches = reverseStretches(slots, plant.stepMinutes);
  const { shown, further } = shortlist(stretches);
  const clockHours = localHours(timeZone, fromMs, toMs);
  const hourOf = (ms: number) => clockHours.findLast((hour) => hour.startMs <= ms)?.startMs ?? null;
  return {
    plantName: plant.name,
    organizationName: organization.name,
    timeZone,
    day: sums.day,
    reverseMinutes: sums.reverseMinutes,
    stretches: shown,
    further,
    bridged: isBridged(shown),
    largest: largest && {
      atMs: largest.startMs,
      flowGpm: -largest.bypassFlowGpm,
      loGpm: -largest.bypassFlowHiGpm,
      hiGpm: -largest.bypassFlowLoGpm,
    },
    warmest: warmest && {
      atMs: warmest.startMs,
      supplyF: warmest.blendedSupplyF,
      productionF: warmest.primarySupplyF,
    },
    hours: hourBars(
      hours,
      clockHours.map((hour) => hour.startMs),
    ),
    lowHours: sums.lowHours,
    hoursInDay: clockHours.length,
    excessCost: sums.excessCost,
    currency: settings?.tariff?.currency ?? null,
    excessEnergyKwh: sums.excessEnergyKwh,
    cause: dominantCause(hours),
    coverage: dataShare(hours, clockHours.length),
    situation: largest && situationOf(largest, hours, settings?.design.productionUnits.length ?? 0),
    // The mail is about reverse flow: its worst hour is that of most flow backwards, not that of most excess flow.
    worstHourMs: (largest && hourOf(largest.startMs)) ?? sums.worstHourMs,
  };
}

/** Share of the day's data that came: an hour without a row has none of it. */
function dataShare(hours: readonly DayHour[], hoursInDay: number): number {
  const known = hours.map((hour) => (Number.isFinite(hour.quality) ? hour.quality : 0));
  return known.reduce((sum, share) => sum + share, 0) / hoursInDay;
}

/** The intervals that start within [fromMs, toMs), from the UTC days they are stored in; days of another step are left out. */
export function daySlots(results: readonly ResultDay[], stepMinutes: number, fromMs: number, toMs: number): DaySlot[] {
  const slots: DaySlot[] = [];
  for (const { day, stepMinutes: step, channels } of results) {
    if (step !== stepMinutes) continue;
    const value = (channel: (typeof CHANNELS)[number], slot: number) => channels[channel]?.[slot] ?? NaN;
    for (let slot = 0; slot < 1440 / step; slot++) {
      const startMs = dayStartMs(day) + slot * step * 60_000;
      if (startMs < fromMs || startMs >= toMs) continue;
      slots.push({
        startMs,
        reverse: value('direction', slot) === REVERSE && value('state', slot) === RUNNING,
        bypassFlowGpm: value('bypass_flow_gpm', slot),
        bypassFlowLoGpm: value('bypass_flow_lo_gpm', slot),
        bypassFlowHiGpm: value('bypass_flow_hi_gpm', slot),
        blendedSupplyF: value('blended_supply_f', slot),
        primarySupplyF: value('primary_supply_f', slot),
        primaryFlowGpm: value('primary_flow_gpm', slot),
        secondaryFlowGpm: value('secondary_flow_gpm', slot),
      });
    }
  }
  return slots;
}

/** The slot with the greatest known value; null when none is known. */
function extreme(slots: readonly DaySlot[], value: (slot: DaySlot) => number): DaySlot | null {
  return slots.reduce<DaySlot | null>((best, slot) => {
    if (!Number.isFinite(value(slot))) return best;
    return best === null || value(slot) > value(best) ? slot : best;
  }, null);
}
