import { FLOWS, FS, PS, SS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { movingVariance } from './read-slot';
import type { SlotValues } from './read-slot';
import { STATES } from './types';

const RUNNING = STATES.indexOf('running');
/** Readings are averaged to about this before they enter: finer ones repeat each other. */
const BIN_MINUTES = 15;
const MAX_BINS = 750;
const CHANNELS = TEMPERATURES + FLOWS;

/** Steady running stretches of a record, each the mean over one bin. Row-major, CHANNELS a row. */
export interface CalibrationBins {
  count: number;
  values: Float64Array;
  /** Readings in each mean. */
  readings: Float64Array;
  /** Doubt of moving temperatures, F^2, TEMPERATURES a row. */
  moving: Float64Array;
  /** First slot of each bin, and how many it holds. */
  slots: Int32Array;
  width: number;
  /** Hours of record that one bin stands for. */
  hoursEach: number;
}

/** Below this share of design, secondary flow is none, and temperatures at the tees are those of standing water. */
const NO_FLOW_SHARE = 0.05;
/** Supply this far above its usual is not made just now, whatever the state says, F. */
const WARM_SUPPLY_F = 5;

/** Supply that a running record usually has, for telling hours in which nothing cools; NaN without a supply. */
function usualSupply(loop: LoopRecord, state: Float64Array): number {
  const channel = loop.temperatures[PS] ?? loop.temperatures[SS];
  if (!channel) return Number.NaN;
  const stride = Math.max(1, Math.floor(loop.n / 2000));
  const seen = new Float64Array(Math.ceil(loop.n / stride));
  let count = 0;
  for (let slot = 0; slot < loop.n; slot += stride) {
    const value = channel[slot] as number;
    if (state[slot] === RUNNING && value === value) {
      seen[count] = value;
      count += 1;
    }
  }
  // The lower quartile: a plant may be warm for more than half of a short record.
  return count > 0 ? (seen.subarray(0, count).sort()[count >> 2] as number) : Number.NaN;
}

/** Share of a bin's slots that must run steadily. */
const STEADY_SHARE = 0.6;

/** A slot that enters: it runs steadily, with water moving that is cooled just now. */
function enters(loop: LoopRecord, state: Float64Array, steady: Float64Array, usual: number, slot: number): boolean {
  if (state[slot] !== RUNNING || steady[slot] !== 1) return false;
  const supply = loop.temperatures[PS] ?? loop.temperatures[SS];
  const secondary = loop.flows[FS];
  if (secondary && (secondary[slot] as number) < NO_FLOW_SHARE * loop.designSecondaryGpm) return false;
  return !(supply && (supply[slot] as number) > usual + WARM_SUPPLY_F);
}

/** Where a bin may lie: one running set, and enough slots that enter (marked in `entering`). */
function usable(loop: LoopRecord, entering: Uint8Array, from: number, to: number): boolean {
  let count = 0;
  for (let slot = from; slot < to; slot += 1) {
    if (loop.set[slot] !== loop.set[from]) return false;
    count += entering[slot] as number;
  }
  return count >= STEADY_SHARE * (to - from);
}

/**
 * Cuts a record into bins of about a quarter of an hour and keeps those that run steadily, evenly thinned where there are many.
 *
 * Shapes  `state` and `steady` have the record's length. Gaps: a channel's mean is over what was measured, NaN if nothing.
 */
export function calibrationBins(loop: LoopRecord, state: Float64Array, steady: Float64Array): CalibrationBins {
  const width = Math.max(1, Math.round(BIN_MINUTES / loop.stepMinutes));
  const usual = usualSupply(loop, state);
  const entering = new Uint8Array(loop.n);
  for (let slot = 0; slot < loop.n; slot += 1) entering[slot] = enters(loop, state, steady, usual, slot) ? 1 : 0;
  const starts: number[] = [];
  for (let from = 0; from + width <= loop.n; from += width)
    if (usable(loop, entering, from, from + width)) starts.push(from);
  const thin = Math.max(1, Math.ceil(starts.length / MAX_BINS));
  const kept = starts.filter((_, index) => index % thin === 0);
  const count = kept.length;
  const bins: CalibrationBins = {
    count,
    values: new Float64Array(count * CHANNELS),
    readings: new Float64Array(count * CHANNELS),
    moving: new Float64Array(count * TEMPERATURES),
    slots: Int32Array.from(kept),
    width,
    hoursEach: (thin * width * loop.stepMinutes) / 60,
  };
  const channels = [...loop.temperatures, ...loop.flows];
  kept.forEach((from, bin) => {
    channels.forEach((channel, index) => {
      let sum = 0;
      let readings = 0;
      if (channel) {
        for (let slot = from; slot < from + width; slot += 1) {
          const value = channel[slot] as number;
          if (value === value && entering[slot] === 1) {
            sum += value;
            readings += 1;
          }
        }
        if (index < TEMPERATURES) {
          const doubt = movingVariance(channel, from + (width >> 1), loop.stepMinutes);
          bins.moving[bin * TEMPERATURES + index] = doubt === doubt ? doubt : 0;
        }
      }
      bins.values[bin * CHANNELS + index] = readings > 0 ? sum / readings : Number.NaN;
      bins.readings[bin * CHANNELS + index] = Math.max(1, readings);
    });
  });
  return bins;
}

/** Puts one bin where the estimator reads a slot from. */
export function readBin(bins: CalibrationBins, bin: number, out: SlotValues): void {
  for (let i = 0; i < CHANNELS; i += 1) {
    out.values[i] = bins.values[bin * CHANNELS + i] as number;
    out.counts[i] = bins.readings[bin * CHANNELS + i] as number;
  }
  for (let i = 0; i < TEMPERATURES; i += 1) out.moving[i] = bins.moving[bin * TEMPERATURES + i] as number;
}

/** Every so many-th bin, so that at most about `most` are left; each stands for as much more. */
export function thinBins(bins: CalibrationBins, most: number): CalibrationBins {
  const thin = Math.max(1, Math.ceil(bins.count / most));
  if (thin === 1) return bins;
  const kept = Array.from({ length: Math.ceil(bins.count / thin) }, (_, index) => index * thin);
  const pick = (source: Float64Array, width: number) => {
    const out = new Float64Array(kept.length * width);
    kept.forEach((bin, index) => out.set(source.subarray(bin * width, (bin + 1) * width), index * width));
    return out;
  };
  return {
    count: kept.length,
    values: pick(bins.values, CHANNELS),
    readings: pick(bins.readings, CHANNELS),
    moving: pick(bins.moving, TEMPERATURES),
    slots: Int32Array.from(kept, (bin) => bins.slots[bin] as number),
    width: bins.width,
    hoursEach: bins.hoursEach * thin,
  };
}
