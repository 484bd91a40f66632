import type { SimulatedDesign } from './design';
import { wanted } from './load';

/** Minutes over which the controller averages the load. */
const LOAD_FILTER_MINUTES = 8;
/** Supply this far above set-point asks for another unit. */
const WARM_SUPPLY_F = 2;

export interface Staging {
  /** 1 for each unit that is on. */
  on: Uint8Array;
  count: number;
  /** Rated flow of the units that are on. */
  ratedGpm: number;
}

/**
 * Which units run: one more when the load nears what the running ones make, one fewer when the rest could carry it,
 * with a dead band between and a least time between changes. Each call moves on by one step.
 */
export function stagingController(design: SimulatedDesign, stepMinutes: number) {
  const { units } = design;
  const keep = Math.exp(-stepMinutes / LOAD_FILTER_MINUTES);
  const staging: Staging = { on: new Uint8Array(units.length), count: 0, ratedGpm: 0 };
  let filtered = Number.NaN;
  let sinceChange = Number.POSITIVE_INFINITY;
  let lead = 0;

  /** Tons of the first `count` units in today's order. */
  function capacity(count: number): number {
    let tons = 0;
    for (let place = 0; place < count; place += 1) tons += units[(lead + place) % units.length]!.tons;
    return tons;
  }

  /** How many to run: the present count unless it is time to change. */
  function next(minute: number, warmF: number): number {
    const { count } = staging;
    if (!wanted(design, minute)) return 0;
    if (count === 0) {
      let first = 1;
      while (first < units.length && filtered > design.stageUp * capacity(first)) first += 1;
      return first;
    }
    if (sinceChange < design.minRunMinutes) return count;
    const more = filtered > design.stageUp * capacity(count) || warmF > WARM_SUPPLY_F;
    if (more && count < units.length) return count + 1;
    return count > 1 && filtered < design.stageDown * capacity(count - 1) ? count - 1 : count;
  }

  return (minute: number, loadTons: number, warmF: number): Staging => {
    filtered = Number.isNaN(filtered) ? loadTons : keep * filtered + (1 - keep) * loadTons;
    sinceChange += stepMinutes;
    lead = design.rotates ? Math.floor(minute / 1440) % units.length : 0;
    const count = next(minute, warmF);
    if (count !== staging.count) sinceChange = 0;
    staging.count = count;
    staging.ratedGpm = 0;
    staging.on.fill(0);
    for (let place = 0; place < count; place += 1) {
      const unit = (lead + place) % units.length;
      staging.on[unit] = 1;
      staging.ratedGpm += units[unit]!.ratedGpm;
    }
    return staging;
  };
}
