import type { SimulatedDesign } from './design';
import { wanted } from './load';

/** Minutes over which the controller averages the load. */
const LOAD_FILTER_MINUTES = 8;

/**
 * Which units run: one more when the load nears what the running ones make, one fewer when the rest could carry it,
 * with a dead band between and a least time between changes. `on` is overwritten at each call.
 */
export function stagingController(design: SimulatedDesign, stepMinutes: number, on: Uint8Array) {
  const keep = Math.exp(-stepMinutes / LOAD_FILTER_MINUTES);
  let filtered = Number.NaN;
  let sinceChange = Number.POSITIVE_INFINITY;
  let running = 0;
  return (minute: number, loadTons: number, warmF: number): void => {
    filtered = Number.isNaN(filtered) ? loadTons : keep * filtered + (1 - keep) * loadTons;
    sinceChange += stepMinutes;
    const lead = design.rotates ? Math.floor(minute / 1440) % design.units.length : 0;
    const unitAt = (place: number) => (lead + place) % design.units.length;
    const capacity = (count: number) => {
      let tons = 0;
      for (let place = 0; place < count; place += 1) tons += design.units[unitAt(place)]!.tons;
      return tons;
    };
    if (!wanted(design, minute)) {
      if (running > 0) sinceChange = 0;
      running = 0;
    } else if (running === 0) {
      running = 1;
      while (running < design.units.length && filtered > design.stageUp * capacity(running)) running += 1;
      sinceChange = 0;
    } else if (sinceChange >= design.minRunMinutes) {
      const wants = filtered > design.stageUp * capacity(running) || warmF > 2;
      if (wants && running < design.units.length) running += 1;
      else if (running > 1 && filtered < design.stageDown * capacity(running - 1)) running -= 1;
      else return mark();
      sinceChange = 0;
    }
    mark();

    function mark(): void {
      on.fill(0);
      for (let place = 0; place < running; place += 1) on[unitAt(place)] = 1;
    }
  };
}
