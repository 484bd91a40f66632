import { formatHoursMinutes, formatTemperature, withUnit, type UnitSystem, unitLabel } from '@/lib/client/format';
import { formatDay, startOfLocalDay } from '@/lib/client/format-time';
import type { Plant } from '@/lib/schemas/plant';
import type { PlantDay } from '@/lib/schemas/results';

/** A day with this much reverse flow ran backwards; less is a ripple about balance. */
const COUNTS_MINUTES = 30;

/** The period's finding in a sentence or two: how long, on how many days, how warm. */
export function plantLead(plant: Plant, days: readonly PlantDay[], units: UnitSystem): string {
  const known = days.filter((day) => day.runningMinutes > 0);
  if (known.length === 0)
    return 'No data in this period. Drop a trend export on the uploads page, or look at another period.';
  const reverse = known.reduce((sum, day) => sum + day.reverseMinutes, 0);
  const unknown = known.reduce((sum, day) => sum + day.unknownMinutes, 0);
  const running = known.reduce((sum, day) => sum + day.runningMinutes, 0);
  const backwards = known.filter((day) => day.reverseMinutes >= COUNTS_MINUTES);
  const doubt = unknown / running > 0.1 ? ` The direction is unknown for ${formatHoursMinutes(unknown)} hours.` : '';
  if (backwards.length === 0) {
    const low = known.reduce((sum, day) => sum + day.lowHours, 0);
    return low === 0
      ? `At slack: no return water came back, and no hour was low.${doubt}`
      : `No return water came back through the common pipe; ${low} ${low === 1 ? 'hour' : 'hours'} of low delta-T have another cause.${doubt}`;
  }
  const warmest = backwards.reduce((worst, day) =>
    (day.warmestSupplyF ?? -Infinity) > (worst.warmestSupplyF ?? -Infinity) ? day : worst,
  );
  const target = plant.design.blendedSupplyF ?? plant.design.productionSupplyF;
  const on = known.length === 1 ? '' : ` on ${backwards.length} of ${known.length} days`;
  const supply =
    warmest.warmestSupplyF === null
      ? ''
      : ` Supply to the buildings reached ${withUnit(formatTemperature(warmest.warmestSupplyF, units), unitLabel('temperature', units))}${
          known.length === 1 ? '' : ` on ${formatDay(startOfLocalDay(warmest.day, plant.timeZone), plant.timeZone)}`
        } against a design of ${formatTemperature(target, units)}.`;
  return `Return water ran backwards through the common pipe for ${formatHoursMinutes(reverse)} hours${on}.${supply}${doubt}`;
}

/** Share of the period's days for which anything was measured, weighted by how much. */
export function coverageShare(days: readonly PlantDay[], periodDays: number): number | null {
  return days.length === 0 ? null : days.reduce((sum, day) => sum + (day.coverage ?? 0), 0) / periodDays;
}
