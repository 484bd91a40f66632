import { FB, FLOWS, FP, FS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import { logNormalCdf } from './normal';
import type { SlotReading } from './slot-reading';

const LOG_TWO_PI = Math.log(2 * Math.PI);
/** Largest mean share either way within one interval: the prior is even on 0 to here for both. */
const LARGEST_SHARE = 0.5;

/** A swing is about balance: its smaller share is at least this part of the larger, or it is one way with something else. */
const LEAST_OF_LARGER = 0.25;

/** A slot in which the pipe ran both ways: mean share each way (of the larger main), and how likely the readings are. */
export interface BothWays {
  logEvidence: number;
  /** Net bypass, gpm, and its sigma; NaN without flows. */
  bypassGpm: number;
  bypassSigma: number;
}
export const emptyBothWays = (): BothWays => ({
  logEvidence: Number.NEGATIVE_INFINITY,
  bypassGpm: Number.NaN,
  bypassSigma: Number.NaN,
});

/** Squared sigmas at which the flows contradict a swing: it is no explanation then, however badly one way alone fits. */
const CONTRADICTED = 16;

function ruleOut(out: BothWays): void {
  out.logEvidence = Number.NEGATIVE_INFINITY;
  out.bypassGpm = out.bypassSigma = Number.NaN;
}

/** Covariance of a combination of temperatures (coefficients in the order PS PR SS SR) with another. */
function between(v: Float64Array, a: readonly number[], b: readonly number[]): number {
  let sum = 0;
  for (let i = PS; i <= SR; i += 1) {
    for (let j = PS; j <= SR; j += 1) sum += (a[i] as number) * (b[j] as number) * (v[i * TEMPERATURES + j] as number);
  }
  return sum;
}

/**
 * Weighs the third possibility: within one interval the common pipe ran forward for a while and backward for a while, so
 * that the means show supply warmed by `back` and return diluted by `ahead` of the span at once:
 *   SS - PS = back (SR - PS),   SR - PR = ahead (SR - PS),   Fp - Fs = (ahead - back) main
 * Both shares even on 0 to one half, integrated over, the smaller at least a quarter of the larger. Worked out only where supply and return are both measured on both
 * sides: with less, a mixture cannot be told from one way.
 *
 * Units   mixing scale, gpm. Gaps: log evidence -Infinity where it cannot be told.
 * Source  Laplace's integral over two shares; balances averaged over the interval with the mains held.
 */
export function weighBothWays(reading: SlotReading, out: BothWays): void {
  const { temperatures: t, measured, temperatureCovariance: v, flows, flowCovariance: w } = reading;
  out.logEvidence = Number.NEGATIVE_INFINITY;
  out.bypassGpm = out.bypassSigma = Number.NaN;
  if (!measured[PS] || !measured[PR] || !measured[SS] || !measured[SR]) return;
  const span = (t[SR] as number) - (t[PS] as number);
  const back = ((t[SS] as number) - (t[PS] as number)) / span;
  const ahead = ((t[SR] as number) - (t[PR] as number)) / span;
  if (!(span > 0 && Math.min(back, ahead) > LEAST_OF_LARGER * Math.max(back, ahead))) return;
  const rise = [-(1 - back), 0, 1, -back];
  const fall = [-ahead, -1, 0, 1 - ahead];
  const vBack = between(v, rise, rise) / (span * span);
  const vAhead = between(v, fall, fall) / (span * span);
  const vBoth = between(v, rise, fall) / (span * span);
  // Both shares are read off the temperatures; flows then compare with their difference.
  const inside =
    logNormalCdf(back / Math.sqrt(vBack)) + logNormalCdf(ahead / Math.sqrt(vAhead)) - 2 * Math.log(LARGEST_SHARE);
  out.logEvidence = inside - 2 * Math.log(span);
  // The pipe's own temperature is then a mean over both streams: as likely anywhere between them.
  if (measured[TB]) out.logEvidence -= Math.log(span);
  const primary = flows[FP] as number;
  const secondary = flows[FS] as number;
  const main = Math.max(primary, secondary);
  if (!(main > 0)) {
    // One way alone is held against the bypass meter then, and a swing cannot be: it is not set beside it.
    if (!Number.isNaN(flows[FB])) out.logEvidence = Number.NEGATIVE_INFINITY;
    return;
  }
  const byTemperature = (ahead - back) * main;
  const ofTemperature = main * main * Math.max(0, vBack + vAhead - 2 * vBoth);
  const byFlow = primary - secondary;
  const ofFlow = (w[FP * FLOWS + FP] as number) + (w[FS * FLOWS + FS] as number) - 2 * (w[FP * FLOWS + FS] as number);
  const apart = byFlow - byTemperature;
  const variance = ofTemperature + ofFlow;
  if (apart * apart > CONTRADICTED * variance) return ruleOut(out);
  // Density of the secondary reading given the rest, as the one-way fits have it.
  out.logEvidence -= 0.5 * ((apart * apart) / variance + Math.log(variance) + LOG_TWO_PI);
  const share = ofTemperature / variance;
  out.bypassGpm = byTemperature + share * apart;
  out.bypassSigma = Math.sqrt(share * ofFlow);
  const meter = flows[FB] as number;
  if (meter !== meter) return;
  const expected = reading.bypassUnsigned ? (ahead + back) * main : out.bypassGpm;
  const off = (reading.bypassUnsigned ? Math.abs(meter) : meter) - expected;
  const doubt = (w[FB * FLOWS + FB] as number) + (reading.bypassUnsigned ? ofTemperature : out.bypassSigma ** 2);
  if (off * off > CONTRADICTED * doubt) return ruleOut(out);
  out.logEvidence -= 0.5 * ((off * off) / doubt + Math.log(doubt) + LOG_TWO_PI);
}
