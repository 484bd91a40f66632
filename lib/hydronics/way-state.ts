import { FB, FLOWS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import type { SlotReading } from './slot-reading';
import { bypassThisWay, CONTRASTS, partsOf } from './contrasts';
import type { Parts, WayFit } from './contrasts';
import { truncationShift } from './normal';

/** The loop's state on the supposition of one way: reconciled values, and the doubt of the two that are shown. */
export interface WayState {
  /** Magnitude of the bypass before it is held to this way's sign: mean and sigma; NaN without any flow. */
  bypassGpm: number;
  bypassSigma: number;
  /** The same held to the sign: mean and variance of the cut-off normal. */
  heldGpm: number;
  heldVariance: number;
  /** Share held to 0..1, its sigma before. */
  share: number;
  mainGpm: number;
  otherGpm: number;
  /** Reconciled temperatures, mixing scale, order PS PR SS SR. */
  temperatures: Float64Array;
  blendVariance: number;
}

export const emptyWayState = (): WayState => ({
  bypassGpm: Number.NaN,
  bypassSigma: Number.NaN,
  heldGpm: Number.NaN,
  heldVariance: Number.NaN,
  share: Number.NaN,
  mainGpm: Number.NaN,
  otherGpm: Number.NaN,
  temperatures: new Float64Array(4).fill(Number.NaN),
  blendVariance: Number.NaN,
});

/** So many sigmas off zero, cutting off there changes nothing (3 in 100,000). */
const CLEAR_SIGMAS = 4;

/** C^-1 (residual at the held share) and C^-1 slope of the current way. */
const pull = new Float64Array(CONTRASTS);
const lean = new Float64Array(CONTRASTS);
const work = new Float64Array(CONTRASTS);

/** Solves C x = b from the LDL' factor, in place. */
function solve(fit: WayFit, b: Float64Array): void {
  const { lower, pivots, count } = fit;
  for (let row = 0; row < count; row += 1) {
    let sum = b[row] as number;
    for (let k = 0; k < row; k += 1) sum -= (lower[row * CONTRASTS + k] as number) * (b[k] as number);
    b[row] = sum;
  }
  for (let row = count - 1; row >= 0; row -= 1) {
    let sum = (b[row] as number) / (pivots[row] as number);
    for (let k = row + 1; k < count; k += 1) sum -= (lower[k * CONTRASTS + row] as number) * (b[k] as number);
    b[row] = sum;
  }
}

/** Covariance of one temperature's error with every comparison, into `work`. */
function leverOfTemperature(reading: SlotReading, parts: Parts, fit: WayFit, temperature: number): void {
  const v = reading.temperatureCovariance;
  const x = reading.crossCovariance;
  const { pure, mate, far, mix, main, other, sign } = parts;
  const { rows, formedAt: share } = fit;
  const rest = 1 - share;
  const row = temperature * TEMPERATURES;
  const withPure = v[row + pure] as number;
  if (rows.mate >= 0) work[rows.mate] = (v[row + mate] as number) - withPure;
  if (rows.mix >= 0) {
    work[rows.mix] = (v[row + mix] as number) - rest * (v[row + far] as number) - share * withPure;
  }
  if (rows.pipe >= 0) work[rows.pipe] = (v[row + TB] as number) - withPure;
  const onMain = x[temperature * FLOWS + main] as number;
  const onOther = x[temperature * FLOWS + other] as number;
  const onBypass = sign * (x[temperature * FLOWS + FB] as number);
  if (rows.other >= 0) work[rows.other] = onOther - rest * onMain;
  if (rows.bypass >= 0) {
    const mainKnown = reading.flows[main] === reading.flows[main];
    work[rows.bypass] = mainKnown ? onBypass - share * onMain : rest * onBypass - share * onOther;
  }
}

/** Covariance of one flow's error with every comparison, into `work`. */
function leverOfFlow(reading: SlotReading, parts: Parts, fit: WayFit, flow: number): void {
  const w = reading.flowCovariance;
  const x = reading.crossCovariance;
  const { pure, mate, far, mix, main, other, sign } = parts;
  const { rows, formedAt: share } = fit;
  const rest = 1 - share;
  const withPure = x[pure * FLOWS + flow] as number;
  if (rows.mate >= 0) work[rows.mate] = (x[mate * FLOWS + flow] as number) - withPure;
  if (rows.mix >= 0) {
    work[rows.mix] = (x[mix * FLOWS + flow] as number) - rest * (x[far * FLOWS + flow] as number) - share * withPure;
  }
  if (rows.pipe >= 0) work[rows.pipe] = (x[TB * FLOWS + flow] as number) - withPure;
  const onMain = w[flow * FLOWS + main] as number;
  const onOther = w[flow * FLOWS + other] as number;
  const onBypass = sign * (w[flow * FLOWS + FB] as number);
  if (rows.other >= 0) work[rows.other] = onOther - rest * onMain;
  if (rows.bypass >= 0) {
    const mainKnown = reading.flows[main] === reading.flows[main];
    work[rows.bypass] = mainKnown ? onBypass - share * onMain : rest * onBypass - share * onOther;
  }
}

const target = { value: Number.NaN, variance: Number.NaN, withShare: Number.NaN };

/** Reconciles one reading from its lever in `work`: what the comparisons say of its error is taken off. */
function reconciled(fit: WayFit, reading: number): number {
  let shift = 0;
  for (let row = 0; row < fit.count; row += 1) shift += (work[row] as number) * (pull[row] as number);
  return reading - shift;
}

/** The same with its variance and the covariance of its error with the share's; overwrites `work`. */
function reconcileWithDoubt(fit: WayFit, reading: number, variance: number): void {
  target.value = reconciled(fit, reading);
  const { lower, pivots, count } = fit;
  let leant = 0;
  for (let row = 0; row < count; row += 1) leant += (work[row] as number) * (lean[row] as number);
  // work becomes the whitened lever: its square is what the comparisons take off the variance.
  let told = 0;
  for (let row = 0; row < count; row += 1) {
    let sum = work[row] as number;
    for (let k = 0; k < row; k += 1) sum -= (lower[row * CONTRASTS + k] as number) * (work[k] as number);
    work[row] = sum;
    told += (sum * sum) / (pivots[row] as number);
  }
  const shareVariance = fit.shareVariance === fit.shareVariance ? fit.shareVariance : 0;
  target.variance = Math.max(0, variance - told + leant * leant * shareVariance);
  target.withShare = -leant * shareVariance;
}

/** Bypass magnitude from share and main flow; falls back on the meter in the pipe where no main is known. */
function settleBypass(reading: SlotReading, parts: Parts, fit: WayFit, out: WayState): void {
  const { flows, flowCovariance } = reading;
  const { main, other, sign } = parts;
  const share = out.share;
  out.mainGpm = out.otherGpm = out.bypassGpm = out.bypassSigma = Number.NaN;
  const mainKnown = flows[main] === flows[main];
  const otherKnown = flows[other] === flows[other];
  if (mainKnown || (otherKnown && share === share && share < 0.95)) {
    const flow = mainKnown ? main : other;
    leverOfFlow(reading, parts, fit, flow);
    reconcileWithDoubt(fit, flows[flow] as number, flowCovariance[flow * FLOWS + flow] as number);
    let mainGpm = target.value > 0 ? target.value : 0;
    let mainVariance = target.variance;
    let withShare = target.withShare;
    if (!mainKnown) {
      const rest = 1 - share;
      mainGpm /= rest;
      const slope = mainGpm / rest;
      mainVariance = mainVariance / (rest * rest) + slope * slope * fit.shareVariance + (2 * slope * withShare) / rest;
      withShare = withShare / rest + slope * fit.shareVariance;
    }
    out.mainGpm = mainGpm;
    if (share !== share) return;
    out.otherGpm = (1 - share) * mainGpm;
    out.bypassGpm = fit.share * mainGpm;
    const variance =
      mainGpm * mainGpm * fit.shareVariance + share * share * mainVariance + 2 * share * mainGpm * withShare;
    out.bypassSigma = Math.sqrt(variance > 0 ? variance : 0);
    return;
  }
  const meterGpm = bypassThisWay(reading, sign);
  if (meterGpm === meterGpm && !otherKnown) {
    out.bypassGpm = meterGpm;
    out.bypassSigma = Math.sqrt(flowCovariance[FB * FLOWS + FB] as number);
  } else if (otherKnown) out.otherGpm = flows[other] as number;
}

/**
 * The loop's state on the supposition of one way, after `fitWay` on the same reading (which leaves its comparisons behind):
 * every measured value moved by what the comparisons say of its error, what was not measured from the tee that makes it.
 * `stretch` widens the variances for measurements that disagree (1: none).
 *
 * Units   mixing scale, gpm. Gaps: NaN where nothing tells.
 * Source  conditional mean and variance of errors with a free parameter (generalized least squares): x = y - g' C^-1 r,
 *         var = V - g' C^-1 g + (g' C^-1 s)^2 var(share).
 */
export function stateOfWay(
  reading: SlotReading,
  fit: WayFit,
  stretch: number,
  shareScale: number,
  out: WayState,
): void {
  const parts = partsOf(fit.way);
  const { temperatures, measured, temperatureCovariance } = reading;
  const known = fit.share === fit.share;
  const sigma = Math.sqrt(fit.shareVariance * stretch);
  const peak = known ? fit.share - (fit.shareVariance * stretch) / shareScale : Number.NaN;
  const z = peak / sigma;
  let share = known ? (z < CLEAR_SIGMAS ? peak + sigma * truncationShift(z) : peak) : Number.NaN;
  if (share > 1) share = 1;
  out.share = share;
  for (let row = 0; row < fit.count; row += 1) {
    pull[row] = (fit.at[row] as number) + (known ? share * (fit.slope[row] as number) : 0);
    lean[row] = fit.slope[row] as number;
  }
  solve(fit, pull);
  solve(fit, lean);

  for (let temperature = PS; temperature <= SR; temperature += 1) {
    const value = temperatures[temperature] as number;
    if (value !== value) {
      out.temperatures[temperature] = Number.NaN;
      continue;
    }
    leverOfTemperature(reading, parts, fit, temperature);
    if (temperature !== SS) {
      out.temperatures[temperature] = reconciled(fit, value);
      continue;
    }
    reconcileWithDoubt(fit, value, temperatureCovariance[temperature * TEMPERATURES + temperature] as number);
    out.temperatures[temperature] = target.value;
    out.blendVariance = target.variance * stretch;
  }
  fillUnmeasured(measured, parts, share, out);

  settleBypass(reading, parts, fit, out);
  out.bypassSigma *= Math.sqrt(stretch);
  holdSign(out, fit.shareVariance * stretch, shareScale);
}

/** Streams no sensor gives but the tee does: the mix from its parts. */
function fillUnmeasured(measured: Uint8Array, parts: Parts, share: number, out: WayState): void {
  const t = out.temperatures;
  if (!measured[parts.mate] && parts.mate === PR) t[PR] = measured[SR] ? (t[SR] as number) : Number.NaN;
  if (!measured[parts.mix] && parts.mix === PR) {
    const tellable = share === share && measured[SR] && (measured[PS] || measured[SS]);
    t[PR] = tellable ? (1 - share) * (t[SR] as number) + share * (t[PS] as number) : Number.NaN;
  }
}

/** Cuts the normal of the bypass off at zero, and lets the record's own spread of shares pull on it. */
function holdSign(out: WayState, shareVariance: number, shareScale: number): void {
  const sigma = out.bypassSigma;
  if (!(sigma > 0)) {
    out.heldGpm = out.bypassGpm > 0 || out.bypassGpm !== out.bypassGpm ? out.bypassGpm : 0;
    out.heldVariance = sigma * sigma;
    return;
  }
  if (out.mainGpm > 0 && shareVariance > 0) out.bypassGpm -= (out.mainGpm * shareVariance) / shareScale;
  const z = out.bypassGpm / sigma;
  if (z > CLEAR_SIGMAS) {
    out.heldGpm = out.bypassGpm;
    out.heldVariance = sigma * sigma;
    return;
  }
  const shift = truncationShift(z);
  out.heldGpm = out.bypassGpm + sigma * shift;
  out.heldVariance = sigma * sigma * Math.max(0, 1 - shift * (shift + z));
}
