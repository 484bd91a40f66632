import type { EntityManager } from '@mikro-orm/postgresql';
import { dayStartMs } from '../db/days';
import type { Tide } from '../schemas/results';
import { barAtLeast, barEdges, defaultBarMinutes } from './bars';
import { apiInstant, type PeriodMs } from './period';
import { resultSlices, slotsInside } from './result-slices';
import { TIDE_CHANNELS, TideBarSums } from './tide-bar';

/**
 * The tide strip of a period: one bar a stretch of intervals, the means, the widest interval, the minutes of each direction.
 * Bars follow the plant's clock; one without data has nulls and no minutes. Bars asked for in a length that does not hold whole
 * intervals, or does not divide a day, come in the next longer one that does.
 */
export async function readTide(
  em: EntityManager,
  plant: { id: string; organizationId: string; timeZone: string; stepMinutes: number },
  period: PeriodMs,
  askedBarMinutes?: number,
): Promise<Tide> {
  const barMinutes =
    askedBarMinutes === undefined
      ? defaultBarMinutes(period, plant.stepMinutes)
      : barAtLeast(askedBarMinutes, plant.stepMinutes);
  const edges = barEdges(period, barMinutes, plant.timeZone);
  const sums = Array.from({ length: edges.length - 1 }, () => new TideBarSums());
  const owner = { organizationId: plant.organizationId, plantId: plant.id };
  let bar = 0;
  for await (const { day, stepMinutes, channels } of resultSlices(em, owner, period, TIDE_CHANNELS)) {
    const dayStart = dayStartMs(day);
    const { first, end } = slotsInside(dayStart, stepMinutes, channels.direction?.length ?? 0, period);
    for (let slot = first; slot < end; slot++) {
      const slotMs = dayStart + slot * stepMinutes * 60_000;
      while (slotMs >= (edges[bar + 1] ?? Infinity)) bar++;
      sums[bar]?.add(channels, slot, stepMinutes);
    }
  }
  return {
    from: apiInstant(period.fromMs),
    to: apiInstant(period.toMs),
    barMinutes,
    stepMinutes: plant.stepMinutes,
    bars: sums.map((each, index) => each.bar(edges[index] ?? 0)),
  };
}
