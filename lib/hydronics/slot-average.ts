import { FLOWS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { readValues } from './read-slot';
import type { SlotValues } from './read-slot';
import type { SensorErrors } from './sensor-errors';

/** Farthest neighbour that may be averaged in. */
const REACH_MINUTES = 20;
/** A ring of neighbours joins while no channel's mean departs from the inner one by more than this many sigmas of both. */
const JOIN_SIGMAS = 2;
const CHANNELS = TEMPERATURES + FLOWS;

/** Reads one slot's values, averaged with neighbours where the record shows that nothing moves. */
export type SlotAverager = (slot: number, out: SlotValues) => void;

/** Running sums of one channel: values and how many there were. */
interface Sums {
  channel: Float64Array;
  value: Float64Array;
  count: Int32Array;
}

function runningSums(channel: Float64Array): Sums {
  const n = channel.length;
  const value = new Float64Array(n + 1);
  const count = new Int32Array(n + 1);
  for (let slot = 0; slot < n; slot += 1) {
    const reading = channel[slot] as number;
    const there = reading === reading;
    value[slot + 1] = (value[slot] as number) + (there ? reading : 0);
    count[slot + 1] = (count[slot] as number) + (there ? 1 : 0);
  }
  return { channel, value, count };
}

/** Running count of slots at which the plant's state or its source of primary flow changes. */
function runningChanges(loop: LoopRecord, state: Float64Array): Int32Array {
  const changes = new Int32Array(loop.n + 1);
  for (let slot = 0; slot < loop.n; slot += 1) {
    const changed =
      slot > 0 && (state[slot] !== state[slot - 1] || loop.primaryFrom[slot] !== loop.primaryFrom[slot - 1]);
    changes[slot + 1] = (changes[slot] as number) + (changed ? 1 : 0);
  }
  return changes;
}

/** Half-widths tried one after another: each ring about as wide as what it joins. */
function halfWidths(stepMinutes: number): number[] {
  const reach = Math.floor(REACH_MINUTES / stepMinutes);
  const widths: number[] = [];
  for (let width = 1; width <= reach; width = Math.max(width + 1, Math.floor(1.5 * width))) widths.push(width);
  return widths;
}

/**
 * Averages each slot with its neighbours as far as the record shows that nothing moves: rings of neighbours, the same to
 * both sides and for all channels, join as long as no channel's ring differs from what is inside by more than its noise
 * explains. One window for all channels, or flows of one moment would be weighed against temperatures of another; even
 * to both sides, so that a steady ramp is not shifted. Without noise seen in the record nothing is averaged.
 *
 * Shapes  `state` has the record's length. Gaps: a missing reading stays missing; neighbours' gaps are left out of the mean.
 * Source  the largest window whose means agree (A. Goldenshluger, A. Nemirovski, Math. Methods Stat. 6 (1997) 135).
 */
export function slotAverager(loop: LoopRecord, errors: SensorErrors, state: Float64Array): SlotAverager {
  const widths = halfWidths(loop.stepMinutes);
  const averages = widths.length > 0 && errors.noise.some((sigma) => sigma > 0);
  if (!averages) return (slot, out) => readValues(loop, slot, out);
  const sums = [...loop.temperatures, ...loop.flows].map((channel) => (channel ? runningSums(channel) : null));
  const changes = runningChanges(loop, state);
  const flowNoise = errors.metered.noise;
  return (slot, out) => {
    readValues(loop, slot, out);
    let joined = 0;
    for (let index = 0; index < widths.length; index += 1) {
      const width = widths[index] as number;
      const from = slot - width;
      const to = slot + width + 1;
      if (from < 0 || to > loop.n || changes[to] !== changes[from + 1]) break;
      let still = true;
      for (let i = 0; i < CHANNELS && still; i += 1) {
        const sum = sums[i];
        if (!sum || !((sum.channel[slot] as number) < Infinity)) continue;
        still = ringJoins(sum, slot, joined, width, i < TEMPERATURES ? (errors.noise[i] as number) : -(flowNoise[i - TEMPERATURES] as number));
      }
      if (!still) break;
      joined = width;
    }
    if (joined === 0) return;
    for (let i = 0; i < CHANNELS; i += 1) {
      const sum = sums[i];
      if (!sum || !((sum.channel[slot] as number) < Infinity)) continue;
      const count = (sum.count[slot + joined + 1] as number) - (sum.count[slot - joined] as number);
      out.values[i] = ((sum.value[slot + joined + 1] as number) - (sum.value[slot - joined] as number)) / count;
      out.counts[i] = count;
    }
  };
}

/** True when the ring from `inner` to `outer` agrees with what is inside. `noise` below zero is a share of the reading. */
function ringJoins(sum: Sums, slot: number, inner: number, outer: number, noise: number): boolean {
  const { value, count } = sum;
  const insideCount = (count[slot + inner + 1] as number) - (count[slot - inner] as number);
  const inside = ((value[slot + inner + 1] as number) - (value[slot - inner] as number)) / insideCount;
  const ringCount = (count[slot + outer + 1] as number) - (count[slot - outer] as number) - insideCount;
  if (ringCount === 0) return true;
  const ring =
    ((value[slot + outer + 1] as number) - (value[slot - outer] as number) - inside * insideCount) / ringCount;
  const sigma = noise < 0 ? -noise * inside : noise;
  const away = ring - inside;
  const limit = JOIN_SIGMAS * sigma;
  return away * away <= limit * limit * (1 / insideCount + 1 / ringCount);
}
