import type { HourResult } from './types';

/** One local day of a plant, as the list, the calendar and the alert need it. NaN where nothing is known. */
export interface DaySummary {
  reverseMinutes: number;
  unknownMinutes: number;
  runningMinutes: number;
  largestReverseFlowGpm: number;
  /** Warmest blended supply while running. */
  warmestSupplyF: number;
  lowHours: number;
  excessCost: number;
  excessEnergyKwh: number;
  loadTonHours: number;
  /** Mean share of inputs measured over the day's hours, 0 to 1. */
  coverage: number;
}

/** Largest of what is known; NaN when nothing is. */
export function largest(values: readonly number[]): number {
  let most = Number.NaN;
  for (const value of values) if (!Number.isNaN(value) && !(value <= most)) most = value;
  return most;
}

/** Sum of what is known; NaN when nothing is. */
export function total(values: readonly number[]): number {
  let sum = Number.NaN;
  for (const value of values) if (!Number.isNaN(value)) sum = (Number.isNaN(sum) ? 0 : sum) + value;
  return sum;
}

/**
 * Sums a local day's hours.
 *
 * Units   as named; ton-hours are each hour's mean load over its running minutes.
 * Gaps    hours that do not know a figure are left out of its sum; a sum nobody knows is NaN. No hours: coverage 0.
 */
export function summariseDay(hours: readonly HourResult[]): DaySummary {
  const sum = (pick: (hour: HourResult) => number) => total(hours.map(pick));
  const minutes = (pick: (hour: HourResult) => number) => hours.reduce((all, hour) => all + pick(hour), 0);
  return {
    reverseMinutes: minutes((hour) => hour.reverseMinutes),
    unknownMinutes: minutes((hour) => hour.unknownMinutes),
    runningMinutes: minutes((hour) => hour.runningMinutes),
    largestReverseFlowGpm: largest(hours.map((hour) => hour.reverseFlowMaxGpm)),
    warmestSupplyF: largest(hours.map((hour) => hour.blendedSupplyMaxF)),
    lowHours: hours.filter((hour) => hour.low).length,
    excessCost: sum((hour) => hour.excessCost),
    excessEnergyKwh: sum((hour) => hour.excessEnergyKwh),
    loadTonHours: sum((hour) => (hour.loadTons * hour.runningMinutes) / 60),
    coverage: hours.length > 0 ? minutes((hour) => hour.quality) / hours.length : 0,
  };
}
