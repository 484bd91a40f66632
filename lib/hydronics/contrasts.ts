import { FB, FLOWS, FP, FS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import type { SlotReading } from './slot-reading';

/** Which way the common pipe is supposed to run while the evidence is weighed. */
export type Way = 'forward' | 'reverse';
/** Most comparisons between measurements that one way holds: mate, mix, bypass temperature, other flow, bypass flow. */
export const CONTRASTS = 5;
/** Below this share of the main flow the common pipe's own sensor may sit in standing water. */
const STANDING_SHARE = 0.08;
/** What the pipe's sensor misses of its stream all the same (heat from the room, imperfect mixing), as share of the span. */
const PIPE_MISFIT = 0.04;

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
export function compare(reading: SlotReading, parts: Parts, fit: WayFit): void {
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
export function formCovariance(reading: SlotReading, parts: Parts, share: number, fit: WayFit): void {
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
        sign * ((w[FB * FLOWS + other] as number) - rest * (w[FB * FLOWS + main] as number)) -
        share * om +
        share * rest * mm;
    }
  }
  if (iBypass >= 0) {
    const bb = w[FB * FLOWS + FB] as number;
    if (iOther >= 0 || reading.flows[main] === reading.flows[main]) {
      const bm = sign * (w[FB * FLOWS + main] as number);
      c[iBypass * CONTRASTS + iBypass] = bb + share * share * (w[main * FLOWS + main] as number) - 2 * share * bm;
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
    c[row * CONTRASTS + rows.pipe] = a * (x[TB * FLOWS + i] as number) + b * (x[TB * FLOWS + j] as number) - withPure;
  }
}
