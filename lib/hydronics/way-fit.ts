import { compare, CONTRASTS, formCovariance, partsOf } from './contrasts';
import type { Parts, Way, WayFit } from './contrasts';
import { TEMPERATURES } from './loop-record';
import { logNormalCdf } from './normal';
import type { SlotReading } from './slot-reading';

const HALF_LOG_TWO_PI = 0.5 * Math.log(2 * Math.PI);

/** LDL' in place of the lower triangle: unit lower factor below the diagonal, pivots apart. */
function factor(fit: WayFit): void {
  const { lower, pivots, count } = fit;
  for (let column = 0; column < count; column += 1) {
    let pivot = lower[column * CONTRASTS + column] as number;
    for (let k = 0; k < column; k += 1) {
      const l = lower[column * CONTRASTS + k] as number;
      pivot -= l * l * (pivots[k] as number);
    }
    // Two sensors that share all their error compare exactly; a hair keeps the arithmetic finite.
    pivots[column] = pivot > 1e-9 ? pivot : 1e-9;
    for (let row = column + 1; row < count; row += 1) {
      let sum = lower[row * CONTRASTS + column] as number;
      for (let k = 0; k < column; k += 1) {
        sum -=
          (lower[row * CONTRASTS + k] as number) * (lower[column * CONTRASTS + k] as number) * (pivots[k] as number);
      }
      lower[row * CONTRASTS + column] = sum / (pivots[column] as number);
    }
  }
}

const whitenedAt = new Float64Array(CONTRASTS);
const whitenedSlope = new Float64Array(CONTRASTS);
/** Sums of the last `evaluate`: at' C^-1 at, at' C^-1 slope, slope' C^-1 slope, log |C|. */
const sums = { aa: 0, as: 0, ss: 0, logDeterminant: 0 };

/** Forms and factors the covariance at a share, and the three quadratic forms of the comparisons. */
function evaluate(reading: SlotReading, parts: Parts, share: number, fit: WayFit): void {
  formCovariance(reading, parts, share, fit);
  factor(fit);
  fit.formedAt = share;
  const { at, slope, lower, pivots, count } = fit;
  let aa = 0;
  let as = 0;
  let ss = 0;
  let determinant = 1;
  for (let row = 0; row < count; row += 1) {
    let a = at[row] as number;
    let s = slope[row] as number;
    for (let k = 0; k < row; k += 1) {
      const l = lower[row * CONTRASTS + k] as number;
      a -= l * (whitenedAt[k] as number);
      s -= l * (whitenedSlope[k] as number);
    }
    whitenedAt[row] = a;
    whitenedSlope[row] = s;
    const pivot = pivots[row] as number;
    aa += (a * a) / pivot;
    as += (a * s) / pivot;
    ss += (s * s) / pivot;
    determinant *= pivot;
  }
  if (reading.shutSigma === reading.shutSigma) ss += 1 / (reading.shutSigma * reading.shutSigma);
  sums.aa = aa;
  sums.as = as;
  sums.ss = ss;
  sums.logDeterminant = Math.log(determinant);
}

/** First guess of the share from whatever says something of it. */
function firstGuess(fit: WayFit): number {
  const { rows } = fit;
  const row = rows.other >= 0 ? rows.other : rows.bypass >= 0 ? rows.bypass : rows.mix;
  if (row < 0) return 0;
  const guess = -(fit.at[row] as number) / (fit.slope[row] as number);
  return guess > 0 ? (guess < 1 ? guess : 1) : 0;
}

const SAME_SHARE = 0.02;
const HOPELESS_Z = -5;
/** Beyond this the share's whole mass is inside (3 in 100,000). */
const CLEAR_Z = 4;
/** A share this uncertain is not known at all. */
const NO_SHARE_VARIANCE = 1;

/**
 * Weighs a slot's measurements on the supposition that the common pipe runs one way: the best share by generalized least
 * squares, its variance, how badly the measurements disagree, and the likelihood integrated over the share with the prior
 * density exp(-share / shareScale) on 0..1 (the record's own spread of shares; Infinity: uniform).
 *
 * The two unmixed temperatures and the main flow have flat priors and are integrated out exactly: every comparison leans on
 * them with coefficient one. With flow meters alone the two ways give P(reverse) = cdf(-b / u(b)).
 *
 * Units   mixing scale, gpm. Gaps: what is missing drops out; `informed` is false when nothing is compared.
 * Source  generalized least squares; Laplace's integral, exact here where the covariance does not change over the share.
 */
export function fitWay(reading: SlotReading, fit: WayFit, shareScale: number): void {
  const parts = partsOf(fit.way);
  compare(reading, parts, fit);
  const { rows } = fit;
  fit.informed = rows.real > 0;
  if (fit.count === 0) {
    fit.share = fit.shareVariance = Number.NaN;
    fit.chiSquare = fit.redundancy = fit.logEvidence = 0;
    return;
  }
  const guess = firstGuess(fit);
  evaluate(reading, parts, guess, fit);
  if (sums.ss * NO_SHARE_VARIANCE > 1) {
    const once = -sums.as / sums.ss;
    const better = once > 0 ? (once < 1 ? once : 1) : 0;
    // The covariance changes slowly with the share: near enough is the same.
    if (Math.abs(better - guess) > SAME_SHARE) evaluate(reading, parts, better, fit);
  }
  const perShare = 1 / shareScale;
  const normalise = perShare > 0 ? Math.log(-Math.expm1(-perShare) * shareScale) : 0;
  let logEvidence = -0.5 * sums.logDeterminant - fit.count * HALF_LOG_TWO_PI - normalise;
  if (!(sums.ss * NO_SHARE_VARIANCE > 1)) {
    fit.share = fit.shareVariance = Number.NaN;
    fit.chiSquare = sums.aa;
    fit.redundancy = rows.real;
    fit.logEvidence = logEvidence + normalise - 0.5 * sums.aa;
    return;
  }
  const variance = 1 / sums.ss;
  const share = -sums.as * variance;
  const sigma = Math.sqrt(variance);
  const least = sums.aa - sums.as * sums.as * variance;
  // The prior's slope moves the peak of the integrand, not the measured share.
  const peak = share - variance * perShare;
  const lowZ = peak / sigma;
  const highZ = (1 - peak) / sigma;
  logEvidence += HALF_LOG_TWO_PI + Math.log(sigma) - 0.5 * least - perShare * (share - 0.5 * variance * perShare);
  if (lowZ < HOPELESS_Z) {
    // Leading term of the tail: beyond this the way is ruled out whatever the rest.
    logEvidence += -0.5 * lowZ * lowZ - Math.log(-lowZ) - HALF_LOG_TWO_PI;
  } else if (lowZ < CLEAR_Z || highZ < CLEAR_Z) {
    logEvidence +=
      highZ < CLEAR_Z && lowZ >= CLEAR_Z
        ? logNormalCdf(highZ)
        : logNormalCdf(lowZ) + (highZ < CLEAR_Z ? Math.log1p(-tailShare(lowZ, highZ)) : 0);
  }
  const beyond = share < 0 ? share : share > 1 ? share - 1 : 0;
  fit.share = share;
  fit.shareVariance = variance;
  fit.chiSquare = Math.max(0, least + beyond * beyond * sums.ss);
  fit.redundancy = rows.real > 0 ? rows.real - 1 : 0;
  fit.logEvidence = logEvidence + flowMeasure(reading, parts);
}

/** Of the mass above share 0, the part beyond share 1. */
function tailShare(lowZ: number, highZ: number): number {
  return Math.min(0.999999, Math.exp(logNormalCdf(-highZ) - logNormalCdf(lowZ)));
}

/** Both mains measured: the prior is flat in the bypass, not in the share, so that the ways meet evenly at zero flow. */
function flowMeasure(reading: SlotReading, parts: Parts): number {
  const mainGpm = reading.flows[parts.main] as number;
  const otherGpm = reading.flows[parts.other] as number;
  return mainGpm > 0 && otherGpm > 0 ? 0.5 * Math.log(mainGpm / otherGpm) : 0;
}

/** Least squared disagreement that a way can have, from its two sensors in one stream alone; 0 where there are not two. */
export function leastDisagreement(reading: SlotReading, way: Way): number {
  const { pure, mate } = partsOf(way);
  const { temperatures, measured, temperatureCovariance: v } = reading;
  if (!measured[pure] || !measured[mate]) return 0;
  const apart = (temperatures[mate] as number) - (temperatures[pure] as number);
  const variance =
    (v[mate * TEMPERATURES + mate] as number) +
    (v[pure * TEMPERATURES + pure] as number) -
    2 * (v[mate * TEMPERATURES + pure] as number);
  return (apart * apart) / (variance > 1e-9 ? variance : 1e-9);
}

/** Marks a way as ruled out without working it out. */
export function ruleOut(fit: WayFit, disagreement: number): void {
  fit.informed = true;
  fit.share = fit.shareVariance = Number.NaN;
  fit.chiSquare = disagreement;
  fit.redundancy = 1;
  fit.logEvidence = Number.NEGATIVE_INFINITY;
}
