import { FLOWS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { movingVariance } from './read-slot';
import type { SlotValues } from './read-slot';
import { STATES } from './types';

const RUNNING = STATES.indexOf('running');
/** Readings are averaged to about this before they enter: finer ones repeat each other. */
const BIN_MINUTES = 5;
const MAX_BINS = 2400;
const CHANNELS = TEMPERATURES + FLOWS;

/** Steady running stretches of a record, each the mean over one bin. Row-major, CHANNELS a row. */
export interface CalibrationBins {
  count: number;
  values: Float64Array;
  /** Readings in each mean. */
  readings: Float64Array;
  /** Doubt of moving temperatures, F^2, TEMPERATURES a row. */
  moving: Float64Array;
  /** First slot of the bin. */
  slots: Int32Array;
  /** Hours of record that one bin stands for. */
  hoursEach: number;
}

/** Where a bin may lie: its slots run steadily from the same source of flow. */
function usable(loop: LoopRecord, state: Float64Array, steady: Float64Array, from: number, to: number): boolean {
  for (let slot = from; slot < to; slot += 1) {
    if (state[slot] !== RUNNING || steady[slot] !== 1 || loop.primaryFrom[slot] !== loop.primaryFrom[from]) return false;
  }
  return true;
}

/**
 * Cuts a record into bins of about five minutes and keeps those that run steadily, evenly thinned to a few thousand.
 *
 * Shapes  `state` and `steady` have the record's length. Gaps: a channel's mean is over what was measured, NaN if nothing.
 */
export function calibrationBins(loop: LoopRecord, state: Float64Array, steady: Float64Array): CalibrationBins {
  const width = Math.max(1, Math.round(BIN_MINUTES / loop.stepMinutes));
  const starts: number[] = [];
  for (let from = 0; from + width <= loop.n; from += width) if (usable(loop, state, steady, from, from + width)) starts.push(from);
  const thin = Math.max(1, Math.ceil(starts.length / MAX_BINS));
  const kept = starts.filter((_, index) => index % thin === 0);
  const count = kept.length;
  const bins: CalibrationBins = {
    count,
    values: new Float64Array(count * CHANNELS),
    readings: new Float64Array(count * CHANNELS),
    moving: new Float64Array(count * TEMPERATURES),
    slots: Int32Array.from(kept),
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
          if (value === value) {
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
