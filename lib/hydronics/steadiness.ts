import { unitsOnCount } from './units-on';
import type { Measurements, PlantModel } from './types';

/** Neighbourhood that must be quiet, to each side of the slot. */
const WINDOW_MINUTES = 5;
/** Faster than this and a transport lag of minutes looks like a temperature difference: 0.2 F/min. */
const MAX_RAMP_F_PER_MINUTE = 0.2;
/** Change of a flow over the window, as share of design flow. */
const MAX_FLOW_CHANGE_SHARE = 0.1;
/** With records coarser than the window the limits are those of this many minutes, or every slot would be unsteady. */
const MAX_COUNTED_MINUTES = 10;

/** Marks the slots from or to which a channel changes by more than a limit over the window. */
function markChanges(channel: Float64Array | undefined, window: number, limit: number, steady: Float64Array): void {
  if (!channel) return;
  for (let slot = window; slot < channel.length; slot += 1) {
    // NaN (missing) compares false: an unknown neighbour says nothing.
    if (Math.abs((channel[slot] as number) - (channel[slot - window] as number)) > limit) {
      steady[slot] = 0;
      steady[slot - window] = 0;
    }
  }
}

/**
 * 1 where the slot is steady, 0 where staging, a flow or a temperature changed fast around it.
 *
 * Shapes  `steady` has length n and is overwritten.
 * Units   deg F, gpm, minutes.
 * Gaps    missing neighbours are not counted as changes.
 * Throws  RangeError when `steady` has another length.
 * Source  common practice, no source (limits above).
 */
export function markSteady(measurements: Measurements, plant: PlantModel, steady: Float64Array): void {
  const n = measurements.n;
  if (steady.length !== n) throw new RangeError(`markSteady: steady has length ${steady.length}, the record ${n}`);
  const window = Math.max(1, Math.round(WINDOW_MINUTES / measurements.stepMinutes));
  const minutes = Math.min(MAX_COUNTED_MINUTES, window * measurements.stepMinutes);
  const rampF = MAX_RAMP_F_PER_MINUTE * minutes;
  const flowGpm = (MAX_FLOW_CHANGE_SHARE * plant.distributionPumps.flowGpm * minutes) / WINDOW_MINUTES;
  // The flag array first holds the count of running units, so that staging is found without another array.
  for (let slot = 0; slot < n; slot += 1) steady[slot] = unitsOnCount(measurements, plant, slot);
  let quietSince = 0;
  let previous = steady[0] ?? Number.NaN;
  for (let slot = 0; slot < n; slot += 1) {
    const count = steady[slot] as number;
    if (count !== previous && count === count && previous === previous) {
      for (let back = Math.max(quietSince, slot - window); back < slot; back += 1) steady[back] = 0;
      quietSince = slot;
    }
    if (count === count) previous = count;
    steady[slot] = quietSince > 0 && slot - quietSince < window ? 0 : 1;
  }
  markChanges(measurements.primarySupplyF, window, rampF, steady);
  markChanges(measurements.secondarySupplyF, window, rampF, steady);
  markChanges(measurements.primaryReturnF, window, rampF, steady);
  markChanges(measurements.secondaryReturnF, window, rampF, steady);
  markChanges(measurements.primaryFlowGpm, window, flowGpm, steady);
  markChanges(measurements.secondaryFlowGpm, window, flowGpm, steady);
}
