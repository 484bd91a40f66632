import type { SensorStretch, SensorSuspicion } from './calibration-types';
import { PlantActivity } from './sensor-activity';
import { sensorChannels } from './sensor-channels';
import { scanChannel } from './sensor-scan';
import type { Run } from './sensor-scan';
import { leastDeparture, spikeStretches } from './sensor-spikes';
import { leastHeldSlots, stuckStretches } from './sensor-stuck';
import { suspicionsOf } from './sensor-suspicions';
import type { Measurements, PlantModel } from './types';

/** Meters that show one flow for hours when the production pumps have one speed. */
const STEADY_FLOWS: readonly (keyof Measurements)[] = ['primaryFlowGpm', 'unitFlowGpm'];

/**
 * Stretches of the loop's and the units' sensors that must not be used (stuck, out of range, spikes) or are to be shown
 * (missing), and what the whole record says against the mapping. A slot's verdict rests on the 12 hours around it, so a day
 * with its neighbours gives the same answer as the whole record; `suspicions` rest on all that is given.
 *
 * Shapes  O(n); slots half-open; stretches in order of channel, kind and time.
 * Units   deg F, gpm.
 * Gaps    no running plant: nothing counts as stuck. NaN is missing.
 * Throws  RangeError when a channel has another length than the record.
 * Source  common practice, no source; limits with each rule.
 */
export function inspectSensors(
  measurements: Measurements,
  plant: PlantModel,
): { stretches: SensorStretch[]; suspicions: SensorSuspicion[] } {
  const { stepMinutes } = measurements;
  const channels = sensorChannels(measurements, plant);
  const activity = new PlantActivity(measurements, plant, channels);
  const stretches: SensorStretch[] = [];
  for (const channel of channels) {
    const add = (kind: SensorStretch['kind'], runs: readonly Run[]) => {
      for (const run of runs) stretches.push({ channel: channel.name, unitIndex: channel.unitIndex, kind, ...run });
    };
    const scan = scanChannel(channel, stepMinutes, leastHeldSlots(stepMinutes), leastDeparture(channel));
    const steadyFlow = plant.primarySpeed === 'constant' && STEADY_FLOWS.includes(channel.name);
    add('missing', scan.missing);
    add('out-of-range', scan.outside);
    add('stuck', stuckStretches(channel, scan.held, activity, stepMinutes, steadyFlow));
    add('spike', spikeStretches(channel, scan.jumps, channels, measurements, plant));
  }
  return { stretches, suspicions: suspicionsOf(measurements, plant, channels, activity) };
}

/** A copy with the slots of the stretches as NaN; the same array when there are none. */
function blank(values: Float64Array, stretches: readonly SensorStretch[]): Float64Array {
  if (stretches.length === 0) return values;
  const copy = values.slice();
  for (const { fromSlot, toSlot } of stretches) copy.fill(Number.NaN, fromSlot, toSlot);
  return copy;
}

/**
 * The record without what must not be used: slots of stuck, out-of-range and spike stretches become NaN.
 *
 * Shapes  channels without such a stretch are the same arrays, the others are copies; the record itself is left as it is.
 * Gaps    `missing` stretches and channels that do not exist are passed over.
 */
export function withoutStretches(measurements: Measurements, stretches: readonly SensorStretch[]): Measurements {
  const unusable = stretches.filter((stretch) => stretch.kind !== 'missing');
  if (unusable.length === 0) return measurements;
  const cleaned: Record<string, unknown> = { ...measurements };
  for (const name of new Set(unusable.map((stretch) => stretch.channel))) {
    const own = unusable.filter((stretch) => stretch.channel === name);
    const channel: unknown = measurements[name as keyof Measurements];
    if (channel instanceof Float64Array) cleaned[name] = blank(channel, own);
    else if (Array.isArray(channel)) {
      cleaned[name] = (channel as (Float64Array | undefined)[]).map(
        (values, index) =>
          values &&
          blank(
            values,
            own.filter((stretch) => stretch.unitIndex === index + 1),
          ),
      );
    }
  }
  return cleaned as unknown as Measurements;
}
