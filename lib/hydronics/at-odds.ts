import { SENSOR_ROLES } from './calibration-types';
import { FP } from './loop-record';
import type { SlotReading } from './slot-reading';
import { CONTRASTS } from './contrasts';
import type { WayFit } from './contrasts';
import { errorDerivatives } from './way-score';

/** Squared sigmas below which no measurement stands out: 0.95 point of chi-square with one degree of freedom. */
const STANDS_OUT = 3.8415;
const PARAMETERS = 11;
const derivative = new Float64Array(CONTRASTS * PARAMETERS);
const whiteRest = new Float64Array(CONTRASTS);
const whiteSlope = new Float64Array(CONTRASTS);
const whiteColumn = new Float64Array(CONTRASTS);

function whiten(fit: WayFit, value: (row: number) => number, out: Float64Array): void {
  for (let row = 0; row < fit.count; row += 1) {
    let sum = value(row);
    for (let k = 0; k < row; k += 1) {
      sum -= (fit.lower[row * CONTRASTS + k] as number) * Math.sqrt(fit.pivots[k] as number) * (out[k] as number);
    }
    out[row] = sum / Math.sqrt(fit.pivots[row] as number);
  }
}

function dot(a: Float64Array, b: Float64Array, count: number): number {
  let sum = 0;
  for (let row = 0; row < count; row += 1) sum += (a[row] as number) * (b[row] as number);
  return sum;
}

/**
 * The measurement whose error would explain most of what is left over: index into SENSOR_ROLES, -1 when the left-over is
 * within chance or nothing is redundant. z_j = |K_j' P r| / sqrt(K_j' P K_j), P the inverse covariance of the comparisons
 * with the share projected out. Where one comparison is all there is, its members tie and the first is named.
 *
 * Source  maximum-power measurement test (R. Mah, A. Tamhane, AIChE J. 28 (1982) 828).
 */
export function mostAtOdds(reading: SlotReading, fit: WayFit, rated: boolean): number {
  if (!(fit.chiSquare > STANDS_OUT) || fit.redundancy < 1 || fit.count === 0) return -1;
  const known = fit.share === fit.share;
  const share = known ? Math.min(1, Math.max(0, fit.share)) : 0;
  errorDerivatives(reading, fit, share, 1, 1, derivative);
  whiten(fit, (row) => (fit.at[row] as number) + (known ? share * (fit.slope[row] as number) : 0), whiteRest);
  whiten(fit, (row) => fit.slope[row] as number, whiteSlope);
  const inside = known && fit.share >= 0 && fit.share <= 1;
  const slopes = dot(whiteSlope, whiteSlope, fit.count);
  let most = 0;
  let found = -1;
  for (let role = 0; role < 8; role += 1) {
    const column = role < 5 ? role : 5 + 2 * (role - 5);
    whiten(fit, (row) => derivative[row * PARAMETERS + column] as number, whiteColumn);
    let square = dot(whiteColumn, whiteColumn, fit.count);
    let along = dot(whiteColumn, whiteRest, fit.count);
    if (inside && slopes > 0) {
      const lean = dot(whiteColumn, whiteSlope, fit.count);
      square -= (lean * lean) / slopes;
      along -= (lean * dot(whiteSlope, whiteRest, fit.count)) / slopes;
    }
    const z = square > 1e-12 ? Math.abs(along) / Math.sqrt(square) : 0;
    if (z > most * (1 + 1e-9)) {
      most = z;
      found = role;
    }
  }
  return found === 5 + FP && rated ? SENSOR_ROLES.indexOf('ratedFlow') : found;
}
