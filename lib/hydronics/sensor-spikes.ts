import type { SensorChannel } from './sensor-channels';
import type { Run } from './sensor-scan';
import { unitsOnCount } from './units-on';
import type { Measurements, PlantModel } from './types';

/** Least departure from both sides (common practice, no source); the common pipe's flow may hunt by more. */
const LEAST_F = 4;
const LEAST_FLOW_SHARE = 0.2;
const LEAST_BYPASS_FLOW_SHARE = 0.3;
/** Times the channel's mean step from slot to slot nearby, and times the difference of the two sides. */
const NOISE_TIMES = 8;
const SIDES_TIMES = 3;
/** Slots to each side that tell the noise. */
const NOISE_SLOTS = 12;
/** Another sensor that departs by this much at the same time says that the plant did it. */
const ALSO_MOVED_F = 1.5;
const ALSO_MOVED_FLOW_SHARE = 0.05;
/** A unit that comes or goes this near explains a jump. */
const STAGING_MINUTES = 10;
/** The common pipe may show any stream of the loop; only beyond them all is it a spike. */
const BEYOND_STREAMS_F = 2;

/** How far the values of slot..end (half-open) lie beyond both neighbours; NaN when one of them is missing. */
function departure(values: Float64Array, slot: number, end: number): number {
  const before = values[slot - 1] as number;
  const after = values[end] as number;
  const first = values[slot] as number;
  const last = values[end - 1] as number;
  return Math.max(Math.min(first, last) - Math.max(before, after), Math.min(before, after) - Math.max(first, last));
}

/** Mean step from slot to slot nearby, the suspected values left out. */
function noiseNearby(channel: SensorChannel, slot: number, end: number): number {
  const { values } = channel;
  let sum = 0;
  let count = 0;
  const from = Math.max(1, slot - NOISE_SLOTS);
  const to = Math.min(values.length, end + 1 + NOISE_SLOTS);
  for (let at = from; at < to; at += 1) {
    if (at >= slot && at <= end) continue;
    const step = Math.abs((values[at] as number) - (values[at - 1] as number));
    if (step === step) {
      sum += step;
      count += 1;
    }
  }
  return count > 0 ? sum / count : 0;
}

function anotherMoved(channel: SensorChannel, others: readonly SensorChannel[], slot: number, end: number): boolean {
  return others.some((other) => {
    if (other === channel) return false;
    const limit = other.quantity === 'temperature' ? ALSO_MOVED_F : ALSO_MOVED_FLOW_SHARE * other.designGpm;
    const before = other.values[slot - 1] as number;
    const after = other.values[end] as number;
    // Beside one missing side the other side alone has to do.
    const usual = before === before ? (after === after ? (before + after) / 2 : before) : after;
    return Math.abs((other.values[slot] as number) - usual) >= limit;
  });
}

function unitsChanged(measurements: Measurements, plant: PlantModel, slot: number, end: number): boolean {
  const near = Math.max(1, Math.ceil(STAGING_MINUTES / measurements.stepMinutes));
  const from = Math.max(0, slot - near);
  const to = Math.min(measurements.n - 1, end + near);
  let before = unitsOnCount(measurements, plant, from);
  for (let at = from + 1; at <= to; at += 1) {
    const now = unitsOnCount(measurements, plant, at);
    if (now !== before && now === now && before === before) return true;
    if (now === now) before = now;
  }
  return false;
}

function amongStreams(channel: SensorChannel, others: readonly SensorChannel[], slot: number): boolean {
  let coldest = Infinity;
  let warmest = -Infinity;
  for (const other of others) {
    if (other.quantity !== 'temperature' || other.place === 'bypass' || other.unitIndex > 0) continue;
    const value = other.values[slot] as number;
    if (value < coldest) coldest = value;
    if (value > warmest) warmest = value;
  }
  const value = channel.values[slot] as number;
  return value >= coldest - BEYOND_STREAMS_F && value <= warmest + BEYOND_STREAMS_F;
}

/** A value must lie this far beyond both sides to be a spike. Units: deg F or gpm. */
export function leastDeparture(channel: SensorChannel): number {
  if (channel.quantity === 'temperature') return LEAST_F;
  return (channel.place === 'bypass' ? LEAST_BYPASS_FLOW_SHARE : LEAST_FLOW_SHARE) * channel.designGpm;
}

/** Where the spike that begins at the slot ends (half-open); -1 when none does. */
function spikeEnd(channel: SensorChannel, slot: number): number {
  const { values, lo, hi } = channel;
  if (slot < 1 || slot + 1 >= values.length) return -1;
  const least = leastDeparture(channel);
  const single = departure(values, slot, slot + 1);
  const end = single > least ? slot + 1 : slot + 2;
  if (end >= values.length) return -1;
  const size = single > least ? single : departure(values, slot, end);
  if (!(size > least)) return -1;
  // Readings that cannot be at all are told apart as such.
  if (!((values[end - 1] as number) >= lo && (values[end - 1] as number) <= hi)) return -1;
  const sides = Math.abs((values[slot - 1] as number) - (values[end] as number));
  return size > SIDES_TIMES * sides && size > NOISE_TIMES * noiseNearby(channel, slot, end) ? end : -1;
}

/**
 * Single or double slots in which the channel departs from both sides far beyond its noise and comes back, while no unit
 * comes or goes and no other sensor moves.
 *
 * Shapes  `jumps`: slots that lie beyond the one before by more than `leastDeparture`.
 * Gaps    a value beside a missing one is never called a spike: nothing shows that it came back.
 * Source  common practice, no source (limits above).
 */
export function spikeStretches(
  channel: SensorChannel,
  jumps: readonly number[],
  channels: readonly SensorChannel[],
  measurements: Measurements,
  plant: PlantModel,
): Run[] {
  const spikes: Run[] = [];
  const mixes = channel.quantity === 'temperature' && channel.place === 'bypass';
  let done = 0;
  for (const slot of jumps) {
    if (slot < done) continue;
    const end = spikeEnd(channel, slot);
    if (end < 0 || (mixes && amongStreams(channel, channels, slot))) continue;
    if (anotherMoved(channel, channels, slot, end) || unitsChanged(measurements, plant, slot, end)) continue;
    spikes.push({ fromSlot: slot, toSlot: end });
    // The step back is no second spike.
    done = end + 1;
  }
  return spikes;
}
