import { FB, FLOWS, FP, FS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import { logNormalCdf } from './normal';
import type { SlotReading } from './slot-reading';

/** Which way the common pipe is supposed to run while the evidence is weighed. */
export type Way = 'forward' | 'reverse';

/** Most comparisons between measurements that one way holds: mate, mix, bypass temperature, other flow, bypass flow. */
export const CONTRASTS = 5;
/** Below this share of the main flow the common pipe's own sensor may sit in standing water. */
const STANDING_SHARE = 0.08;
/** What the pipe's sensor misses of its stream all the same (heat from the room, imperfect mixing), as share of the span. */
const PIPE_MISFIT = 0.04;
const HALF_LOG_TWO_PI = 0.5 * Math.log(2 * Math.PI);

/**
 * What the measurements say on the supposition of one way. The share is the bypass over the main flow (primary when
 * forward, secondary when reverse). Given the share, every comparison is linear:
 *   mate - pure = 0                       two sensors in the unmixed stream
 *   mix - (1 - share) far - share pure = 0   the mixed stream
 *   bypass temperature - pure = 0
 *   other - (1 - share) main = 0          the smaller flow
 *   bypass flow - share main = 0
 */
export interface WayFit {
  way: Way;
  /** Generalized least-squares share, not held to 0..1, and its variance; NaN when nothing measured bears on its size. */
  share: number;
  shareVariance: number;
  /** Squared disagreement at the best share within 0..1, and comparisons beyond the unknowns. */
  chiSquare: number;
  redundancy: number;
  /** Logarithm of the likelihood integrated over the share. */
  logEvidence: number;
  /** At least one comparison between two measured quantities exists. */
  informed: boolean;
  /** Comparisons: count, value at share 0 (`at`), slope with the share (`slope`), LDL' factor of their covariance. */
  count: number;
  rows: ContrastRows;
  at: Float64Array;
  slope: Float64Array;
  lower: Float64Array;
  pivots: Float64Array;
  /** Share the covariance was formed at. */
  formedAt: number;
}

export const emptyWayFit = (way: Way): WayFit => ({
  way,
  share: Number.NaN,
  shareVariance: Number.NaN,
  chiSquare: 0,
  redundancy: 0,
  logEvidence: 0,
  informed: false,
  count: 0,
  rows: { mate: -1, mix: -1, pipe: -1, other: -1, bypass: -1, real: 0 },
  at: new Float64Array(CONTRASTS),
  slope: new Float64Array(CONTRASTS),
  lower: new Float64Array(CONTRASTS * CONTRASTS),
  pivots: new Float64Array(CONTRASTS),
  formedAt: 0,
});

/** Rows of the comparisons; -1 where a comparison does not exist. */
export interface ContrastRows {
  mate: number;
  mix: number;
  pipe: number;
  other: number;
  bypass: number;
  /** How many compare measured quantities only. */
  real: number;
}

/** Which reading plays which part, for each way. */
export interface Parts {
  pure: number;
  mate: number;
  far: number;
  mix: number;
  main: number;
  other: number;
  sign: number;
}
export const FORWARD_PARTS: Parts = { pure: PS, mate: SS, far: SR, mix: PR, main: FP, other: FS, sign: 1 };
export const REVERSE_PARTS: Parts = { pure: SR, mate: PR, far: PS, mix: SS, main: FS, other: FP, sign: -1 };
export const partsOf = (way: Way): Parts => (way === 'forward' ? FORWARD_PARTS : REVERSE_PARTS);

/** Lists the comparisons that the measurements allow: values at share 0 and slopes. */
function compare(reading: SlotReading, parts: Parts, fit: WayFit): void {
  const { temperatures, measured, flows } = reading;
  const { pure, mate, far, mix, main, other, sign } = parts;
  const { at, slope, rows } = fit;
  let count = 0;
  let real = 0;
  rows.mate = rows.mix = rows.pipe = rows.other = rows.bypass = -1;
  const mateF = temperatures[mate] as number;
  const pureF = temperatures[pure] as number;
  const farF = temperatures[far] as number;
  // What leans on vague stand-ins alone says nothing and is left out.
  if (mateF === mateF && (measured[mate] || measured[pure])) {
    at[count] = mateF - pureF;
    slope[count] = 0;
    rows.mate = count;
    count += 1;
    if (measured[mate] && measured[pure]) real += 1;
  }
  const mixF = temperatures[mix] as number;
  if (mixF === mixF && (measured[far] || measured[pure])) {
    at[count] = mixF - farF;
    slope[count] = farF - pureF;
    rows.mix = count;
    count += 1;
    if (measured[mix] && measured[far] && measured[pure]) real += 1;
  }
  const pipeF = temperatures[TB] as number;
  if (pipeF === pipeF) {
    at[count] = pipeF - pureF;
    slope[count] = 0;
    rows.pipe = count;
    count += 1;
    if (measured[pure]) real += 1;
  }
  const mainGpm = flows[main] as number;
  const otherGpm = flows[other] as number;
  if (mainGpm === mainGpm && otherGpm === otherGpm) {
    at[count] = otherGpm - mainGpm;
    slope[count] = mainGpm;
    rows.other = count;
    count += 1;
    real += 1;
  }
  const bypassGpm = bypassThisWay(reading, sign);
  if (bypassGpm === bypassGpm && (mainGpm === mainGpm || otherGpm === otherGpm)) {
    at[count] = bypassGpm;
    slope[count] = mainGpm === mainGpm ? -mainGpm : -(bypassGpm + otherGpm);
    rows.bypass = count;
    count += 1;
    real += 1;
  }
  fit.count = count;
  rows.real = real;
}

/** The bypass meter's reading, positive this way; a magnitude counts for either. */
export function bypassThisWay(reading: SlotReading, sign: number): number {
  const bypassGpm = reading.flows[FB] as number;
  return reading.bypassUnsigned ? Math.abs(bypassGpm) : sign * bypassGpm;
}

/** Doubt of the common pipe's own temperature: near zero flow it drifts from the stream towards the room. */
function standingVariance(share: number, spanF: number): number {
  const standing = share >= STANDING_SHARE ? 0 : 1 - Math.max(0, share) / STANDING_SHARE;
  const doubt = (0.6 * standing + PIPE_MISFIT) * spanF;
  return doubt * doubt;
}

/** Fills `lower` with the covariance of the comparisons at a share. */
function formCovariance(reading: SlotReading, parts: Parts, share: number, fit: WayFit): void {
  const v = reading.temperatureCovariance;
  const w = reading.flowCovariance;
  const x = reading.crossCovariance;
  const c = fit.lower;
  const { pure, mate, far, mix, main, other, sign } = parts;
  const rest = 1 - share;
  const { mate: iMate, mix: iMix, pipe: iPipe, other: iOther, bypass: iBypass } = fit.rows;
  const pp = v[pure * TEMPERATURES + pure] as number;
  if (iMate >= 0) {
    c[iMate * CONTRASTS + iMate] =
      (v[mate * TEMPERATURES + mate] as number) + pp - 2 * (v[mate * TEMPERATURES + pure] as number);
  }
  if (iMix >= 0) {
    const xp = v[mix * TEMPERATURES + pure] as number;
    const xf = v[mix * TEMPERATURES + far] as number;
    const fp = v[far * TEMPERATURES + pure] as number;
    c[iMix * CONTRASTS + iMix] =
      (v[mix * TEMPERATURES + mix] as number) +
      rest * rest * (v[far * TEMPERATURES + far] as number) +
      share * share * pp -
      2 * (rest * xf + share * xp - rest * share * fp);
    if (iMate >= 0) {
      c[iMix * CONTRASTS + iMate] =
        (v[mix * TEMPERATURES + mate] as number) -
        rest * (v[far * TEMPERATURES + mate] as number) -
        share * (v[pure * TEMPERATURES + mate] as number) -
        xp +
        rest * fp +
        share * pp;
    }
  }
  if (iPipe >= 0) {
    const spanF = (reading.temperatures[far] as number) - (reading.temperatures[pure] as number);
    c[iPipe * CONTRASTS + iPipe] =
      (v[TB * TEMPERATURES + TB] as number) +
      pp -
      2 * (v[TB * TEMPERATURES + pure] as number) +
      standingVariance(share, spanF);
    const tp = (v[TB * TEMPERATURES + pure] as number) - pp;
    if (iMate >= 0) {
      c[iPipe * CONTRASTS + iMate] =
        (v[TB * TEMPERATURES + mate] as number) - (v[pure * TEMPERATURES + mate] as number) - tp;
    }
    if (iMix >= 0) {
      c[iPipe * CONTRASTS + iMix] =
        (v[TB * TEMPERATURES + mix] as number) -
        (v[pure * TEMPERATURES + mix] as number) -
        rest * ((v[TB * TEMPERATURES + far] as number) - (v[pure * TEMPERATURES + far] as number)) -
        share * tp;
    }
  }
  if (iOther >= 0) {
    const mm = w[main * FLOWS + main] as number;
    const om = w[other * FLOWS + main] as number;
    c[iOther * CONTRASTS + iOther] = (w[other * FLOWS + other] as number) + rest * rest * mm - 2 * rest * om;
    fillCross(iOther, other, 1, main, -rest, share, parts, x, fit);
    if (iBypass >= 0) {
      c[iBypass * CONTRASTS + iOther] =
        sign * ((w[FB * FLOWS + other] as number) - rest * (w[FB * FLOWS + main] as number)) - share * om + share * rest * mm;
    }
  }
  if (iBypass >= 0) {
    const bb = w[FB * FLOWS + FB] as number;
    if (iOther >= 0 || reading.flows[main] === reading.flows[main]) {
      const bm = sign * (w[FB * FLOWS + main] as number);
      c[iBypass * CONTRASTS + iBypass] =
        bb + share * share * (w[main * FLOWS + main] as number) - 2 * share * bm;
      fillCross(iBypass, FB, sign, main, -share, share, parts, x, fit);
    } else {
      const bo = sign * (w[FB * FLOWS + other] as number);
      c[iBypass * CONTRASTS + iBypass] =
        rest * rest * bb + share * share * (w[other * FLOWS + other] as number) - 2 * rest * share * bo;
      fillCross(iBypass, FB, sign * rest, other, -share, share, parts, x, fit);
    }
  }
}

/** Covariance of a flow comparison (a on flow i, b on flow j) with the temperature comparisons. */
function fillCross(
  row: number,
  i: number,
  a: number,
  j: number,
  b: number,
  share: number,
  parts: Parts,
  x: Float64Array,
  fit: WayFit,
): void {
  const { pure, mate, far, mix } = parts;
  const { rows, lower: c } = fit;
  const withPure = a * (x[pure * FLOWS + i] as number) + b * (x[pure * FLOWS + j] as number);
  if (rows.mate >= 0) {
    c[row * CONTRASTS + rows.mate] =
      a * (x[mate * FLOWS + i] as number) + b * (x[mate * FLOWS + j] as number) - withPure;
  }
  if (rows.mix >= 0) {
    const withFar = a * (x[far * FLOWS + i] as number) + b * (x[far * FLOWS + j] as number);
    c[row * CONTRASTS + rows.mix] =
      a * (x[mix * FLOWS + i] as number) +
      b * (x[mix * FLOWS + j] as number) -
      (1 - share) * withFar -
      share * withPure;
  }
  if (rows.pipe >= 0) {
    c[row * CONTRASTS + rows.pipe] =
      a * (x[TB * FLOWS + i] as number) + b * (x[TB * FLOWS + j] as number) - withPure;
  }
}

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
        sum -= (lower[row * CONTRASTS + k] as number) * (lower[column * CONTRASTS + k] as number) * (pivots[k] as number);
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
  const parts = fit.way === 'forward' ? FORWARD_PARTS : REVERSE_PARTS;
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
  } else if (lowZ < 6 || highZ < 6) {
    logEvidence += highZ < 6 && lowZ >= 6 ? logNormalCdf(highZ) : logNormalCdf(lowZ) + (highZ < 6 ? Math.log1p(-tailShare(lowZ, highZ)) : 0);
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
