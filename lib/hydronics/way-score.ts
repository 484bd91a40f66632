import { FB, FP, FS, PS, TB } from './loop-record';
import { BYPASS_GAIN, BYPASS_ZERO, SECONDARY_GAIN, SECONDARY_ZERO } from './sensor-errors';
import type { SlotReading } from './slot-reading';
import { CONTRASTS, partsOf } from './contrasts';
import type { WayFit } from './contrasts';

/** Lasting errors that bear on one slot: at most five offsets and a gain and a zero of each of three flows. */
const TOUCHED = 11;
/** Below this share the pipe's own sensor stands between the streams and says nothing of anybody's offset. */
const PIPE_TELLS_SHARE = 0.1;
const derivative = new Float64Array(CONTRASTS * TOUCHED);
const columns = new Int32Array(TOUCHED);
const whiteSlope = new Float64Array(CONTRASTS);
const whiteRest = new Float64Array(CONTRASTS);

/** Where a slot's primary supply and flow keep their errors; -1: it has none. */
export interface PrimaryPlaces {
  supply: number;
  gain: number;
  zero: number;
}

function add(out: Float64Array, row: number, column: number, value: number): void {
  const k = row * TOUCHED + column;
  out[k] = (out[k] as number) + value;
}

/**
 * Derivatives of the comparisons with respect to the lasting errors, at a share: rows CONTRASTS, columns the five offsets,
 * then gain and zero of primary, secondary and bypass flow. A sensor that reads high by d is corrected down by d.
 *
 * Units   F per F; gpm per unit gain; gpm per share of design flow.
 */
export function errorDerivatives(
  reading: SlotReading,
  fit: WayFit,
  share: number,
  designPrimaryGpm: number,
  designSecondaryGpm: number,
  out: Float64Array,
): void {
  const { pure, mate, far, mix, main, other, sign } = partsOf(fit.way);
  const { rows } = fit;
  out.fill(0);
  const rest = 1 - share;
  if (rows.mate >= 0) {
    if (reading.measured[mate]) add(out, rows.mate, mate, -1);
    if (reading.measured[pure]) add(out, rows.mate, pure, 1);
  }
  if (rows.mix >= 0) {
    if (reading.measured[mix]) add(out, rows.mix, mix, -1);
    if (reading.measured[far]) add(out, rows.mix, far, rest);
    if (reading.measured[pure]) add(out, rows.mix, pure, share);
  }
  if (rows.pipe >= 0 && share > PIPE_TELLS_SHARE) {
    add(out, rows.pipe, TB, -1);
    if (reading.measured[pure]) add(out, rows.pipe, pure, 1);
  }
  // Gains act on the flows as fitted, not as read: else all meters together would be scaled down to shrink what is left over.
  const mainKnown = reading.flows[main] === reading.flows[main];
  const mainGpm = mainKnown ? (reading.flows[main] as number) : (reading.flows[other] as number) / Math.max(0.05, rest);
  const flow = (row: number, index: number, fittedGpm: number, factor: number) => {
    add(out, row, 5 + 2 * index, -factor * fittedGpm);
    if (index === FB && reading.bypassUnsigned) return;
    add(out, row, 6 + 2 * index, -factor * (index === FP ? designPrimaryGpm : designSecondaryGpm));
  };
  if (rows.other >= 0) {
    flow(rows.other, other, rest * mainGpm, 1);
    flow(rows.other, main, mainGpm, -rest);
  }
  if (rows.bypass >= 0) {
    const way = reading.bypassUnsigned ? 1 : sign;
    if (mainKnown) {
      flow(rows.bypass, FB, way * share * mainGpm, way);
      flow(rows.bypass, main, mainGpm, -share);
    } else {
      flow(rows.bypass, FB, way * share * mainGpm, way * rest);
      flow(rows.bypass, other, rest * mainGpm, -share);
    }
  }
}

/** Squared disagreement of a slot with one way, the share profiled within 0..1; after `fitWay` on it. */
export function profileScore(
  reading: SlotReading,
  fit: WayFit,
  places: PrimaryPlaces,
  designPrimaryGpm: number,
  designSecondaryGpm: number,
  weight: number,
  normal: Float64Array,
  gradient: Float64Array,
): number {
  const p = gradient.length;
  const count = fit.count;
  if (count === 0) return 0;
  const known = fit.share === fit.share;
  const inside = known && fit.share >= 0 && fit.share <= 1;
  const share = known ? (fit.share > 0 ? (fit.share < 1 ? fit.share : 1) : 0) : 0;
  errorDerivatives(reading, fit, share, designPrimaryGpm, designSecondaryGpm, derivative);
  for (let i = 0; i < 5; i += 1) columns[i] = i;
  columns[PS] = places.supply;
  columns[5 + 2 * FP] = places.gain;
  columns[6 + 2 * FP] = places.zero;
  columns[5 + 2 * FS] = SECONDARY_GAIN;
  columns[6 + 2 * FS] = SECONDARY_ZERO;
  columns[5 + 2 * FB] = BYPASS_GAIN;
  columns[6 + 2 * FB] = BYPASS_ZERO;

  const { at, slope, lower, pivots } = fit;
  let slopes = 0;
  let cost = 0;
  for (let row = 0; row < count; row += 1) {
    const root = 1 / Math.sqrt(pivots[row] as number);
    let rest = (at[row] as number) + (known ? share * (slope[row] as number) : 0);
    let lean = slope[row] as number;
    for (let k = 0; k < row; k += 1) {
      const l = (lower[row * CONTRASTS + k] as number) / root0(pivots[k] as number);
      rest -= l * (whiteRest[k] as number);
      lean -= l * (whiteSlope[k] as number);
      for (let column = 0; column < TOUCHED; column += 1) {
        const i = row * TOUCHED + column;
        derivative[i] = (derivative[i] as number) - l * (derivative[k * TOUCHED + column] as number);
      }
    }
    whiteRest[row] = rest * root;
    whiteSlope[row] = lean * root;
    for (let column = 0; column < TOUCHED; column += 1) {
      const i = row * TOUCHED + column;
      derivative[i] = (derivative[i] as number) * root;
    }
    slopes += lean * root * lean * root;
    cost += rest * root * rest * root;
  }
  // The share is free: what a change of error does along its slope, the share takes up.
  if (inside && slopes > 0) {
    for (let column = 0; column < TOUCHED; column += 1) {
      let along = 0;
      for (let row = 0; row < count; row += 1) {
        along += (whiteSlope[row] as number) * (derivative[row * TOUCHED + column] as number);
      }
      along /= slopes;
      for (let row = 0; row < count; row += 1) {
        const i = row * TOUCHED + column;
        derivative[i] = (derivative[i] as number) - along * (whiteSlope[row] as number);
      }
    }
  }
  for (let a = 0; a < TOUCHED; a += 1) {
    const i = columns[a] as number;
    if (i < 0) continue;
    let slopeA = 0;
    for (let row = 0; row < count; row += 1) {
      slopeA += (derivative[row * TOUCHED + a] as number) * (whiteRest[row] as number);
    }
    gradient[i] = (gradient[i] as number) + weight * slopeA;
    for (let b = 0; b <= a; b += 1) {
      const j = columns[b] as number;
      if (j < 0) continue;
      let sum = 0;
      for (let row = 0; row < count; row += 1) {
        sum += (derivative[row * TOUCHED + a] as number) * (derivative[row * TOUCHED + b] as number);
      }
      if (sum === 0) continue;
      const hi = i > j ? i : j;
      const lo = i > j ? j : i;
      normal[hi * p + lo] = (normal[hi * p + lo] as number) + weight * sum;
    }
  }
  return 0.5 * weight * cost;
}

/** 1 / sqrt, the root that whitened an earlier row. */
const root0 = (pivot: number): number => 1 / Math.sqrt(pivot);
