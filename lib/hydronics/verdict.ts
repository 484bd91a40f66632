import { mostAtOdds } from './at-odds';
import type { BothWays } from './both-ways';
import { FB, FLOWS, FP, FS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import { NINETY_PERCENT_Z, normalCdf, normalQuantile } from './normal';
import type { SlotReading } from './slot-reading';
import type { Arrangement, Direction, Reason } from './types';
import type { WayFit } from './contrasts';
import type { WayState } from './way-state';

/** A direction is named when its probability is at least this. */
export const DECIDED_PROBABILITY = 0.75;
/** Within this share of secondary flow of zero the common pipe stands still. */
export const STILL_SHARE = 0.02;
/** Squared sigmas at which one comparison is a contradiction (3.5 sigma, 1 in 2000), and what each further one adds. */
const CONTRADICTION_CHI_SQUARE = 12.25;
const CONTRADICTION_PER_COMPARISON = 3;
/** Degrees of freedom that a sensor's stated sigma is worth: disagreement widens intervals as Student's t would. */
const SIGMA_FREEDOM = 4;
/** A common-pipe temperature this far from both ends says that the pipe ran both ways, or that the water hunts. */
const BETWEEN_LOW = 0.25;
const BETWEEN_HIGH = 0.75;
/** So many sigmas off a band, nothing lies in it (3 in 100,000). */
const FAR_SIGMAS = 4;
/** The same for a way that does not know how much crosses over. */
const UNSIZED_PROBABILITY = 0.05;
/** A way less probable than this is left out. */
const NEGLIGIBLE = 1e-6;
/** A blended supply less sure than this is not known, F. */
const UNKNOWN_BLEND_SIGMA_F = 8;

/** What both ways together say of one slot. Flows in gpm, temperatures on the mixing scale; NaN where unknown. */
export interface Verdict {
  direction: Direction;
  reason: Reason;
  reverseProbability: number;
  bypassGpm: number;
  bypassLoGpm: number;
  bypassHiGpm: number;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  /** Order PS PR SS SR. */
  temperatures: Float64Array;
  blendSigma: number;
  chiSquare: number;
  redundancy: number;
  /** Index into SENSOR_ROLES, -1 for none. */
  atOdds: number;
}

export const emptyVerdict = (): Verdict => ({
  direction: 'unknown',
  reason: 'no data',
  reverseProbability: Number.NaN,
  bypassGpm: Number.NaN,
  bypassLoGpm: Number.NaN,
  bypassHiGpm: Number.NaN,
  primaryFlowGpm: Number.NaN,
  secondaryFlowGpm: Number.NaN,
  temperatures: new Float64Array(4).fill(Number.NaN),
  blendSigma: Number.NaN,
  chiSquare: Number.NaN,
  redundancy: 0,
  atOdds: -1,
});

const known = (value: number): boolean => value === value;

/** How far a way's disagreement exceeds what chance allows; positive = contradicted. */
export const excessDisagreement = (fit: WayFit): number =>
  fit.chiSquare - CONTRADICTION_CHI_SQUARE - CONTRADICTION_PER_COMPARISON * Math.max(0, fit.redundancy - 1);

/** What variances are stretched by: (freedom + chi-square) / (freedom + redundancy), never below 1. */
export const stretchOf = (fit: WayFit): number =>
  Math.max(1, (SIGMA_FREEDOM + fit.chiSquare) / (SIGMA_FREEDOM + fit.redundancy));

/** Flows as the meters give them, where no way settles them. */
function passFlows(reading: SlotReading, out: Verdict): void {
  out.primaryFlowGpm = reading.flows[FP] as number;
  out.secondaryFlowGpm = reading.flows[FS] as number;
}

/** Temperatures as the sensors give them, corrected; NaN where nothing was measured. */
function passTemperatures(reading: SlotReading, out: Verdict): void {
  for (let i = PS; i <= SR; i += 1) {
    out.temperatures[i] = reading.measured[i] ? (reading.temperatures[i] as number) : Number.NaN;
  }
  out.blendSigma = Math.sqrt(reading.temperatureCovariance[SS * TEMPERATURES + SS] as number);
}

function clearBypass(out: Verdict): void {
  out.bypassGpm = out.bypassLoGpm = out.bypassHiGpm = Number.NaN;
}

/** Mean of two ways by probability; a way that does not know leaves it to the other when that one is decided. */
function mean(forward: number, reverse: number, pReverse: number): number {
  if (known(forward) && known(reverse)) return forward + pReverse * (reverse - forward);
  if (known(forward) && pReverse <= 1 - DECIDED_PROBABILITY) return forward;
  if (known(reverse) && pReverse >= DECIDED_PROBABILITY) return reverse;
  return Number.NaN;
}

/**
 * Point below which the bypass lies with probability `level`: a normal cut off at zero on either side, joined there with
 * P(reverse) of the mass below.
 */
export function bypassQuantile(level: number, pReverse: number, forward: WayState, reverse: WayState): number {
  if (level < pReverse) {
    const { bypassGpm: mu, bypassSigma: sigma } = reverse;
    if (!(sigma > 0)) return -Math.max(0, mu);
    const mass = normalCdf(mu / sigma);
    // So far on the other side that nothing is left of it: all of it lies at zero.
    if (!(mass > 0)) return 0;
    return -Math.max(0, mu - sigma * normalQuantile((level / pReverse) * mass));
  }
  const { bypassGpm: mu, bypassSigma: sigma } = forward;
  if (!(sigma > 0)) return Math.max(0, mu);
  const mass = normalCdf(mu / sigma);
  if (!(mass > 0)) return 0;
  const above = ((1 - level) / (1 - pReverse)) * mass;
  return Math.max(0, mu - sigma * normalQuantile(above));
}

/** Probability that a normal cut off at zero lies below `band`. */
function belowBand(mu: number, sigma: number, band: number): number {
  if (!(sigma > 0)) return mu < band ? 1 : 0;
  if (mu > band + FAR_SIGMAS * sigma) return 0;
  const below = normalCdf(-mu / sigma);
  return (normalCdf((band - mu) / sigma) - below) / Math.max(1e-300, 1 - below);
}

/** Probability that the bypass is within `band` of zero. */
function stillProbability(band: number, pReverse: number, forward: WayState, reverse: WayState): number {
  const ahead =
    pReverse < 1 - NEGLIGIBLE ? (1 - pReverse) * belowBand(forward.bypassGpm, forward.bypassSigma, band) : 0;
  const back = pReverse > NEGLIGIBLE ? pReverse * belowBand(reverse.bypassGpm, reverse.bypassSigma, band) : 0;
  return ahead + back;
}

/** The same of the share, where no flow is known. */
function stillShareProbability(pReverse: number, forward: WayFit, reverse: WayFit): number {
  const ahead =
    pReverse < 1 - NEGLIGIBLE && known(forward.share)
      ? (1 - pReverse) * belowBand(forward.share, Math.sqrt(forward.shareVariance), STILL_SHARE)
      : 0;
  const back =
    pReverse > NEGLIGIBLE && known(reverse.share)
      ? pReverse * belowBand(reverse.share, Math.sqrt(reverse.shareVariance), STILL_SHARE)
      : 0;
  return ahead + back;
}

/** Why the direction is not known, when the measurements do not contradict each other. */
function whyUnknown(reading: SlotReading): Reason {
  const { temperatures: t, measured, flows } = reading;
  const span = (t[SR] as number) - (t[PS] as number);
  const v = reading.temperatureCovariance;
  const spanSigma = Math.sqrt(
    Math.max(
      0,
      (v[PS * TEMPERATURES + PS] as number) +
        (v[SR * TEMPERATURES + SR] as number) -
        2 * (v[PS * TEMPERATURES + SR] as number),
    ),
  );
  const place = ((t[TB] as number) - (t[PS] as number)) / span;
  const spanKnown = (measured[PS] || measured[SS]) && (measured[SR] || measured[PR]) && span > 2 * spanSigma;
  if (spanKnown && place > BETWEEN_LOW && place < BETWEEN_HIGH) return 'both ways within the interval';
  const flowsTell = known(flows[FB] as number) || known((flows[FP] as number) - (flows[FS] as number));
  return !flowsTell && !spanKnown ? 'temperatures too close' : 'too near balance';
}

/** True when the unsigned meter saw more water than the net flow can explain: it ran both ways within the interval. */
function unsignedSawBoth(reading: SlotReading): boolean {
  if (!reading.bypassUnsigned || !known(reading.flows[FB] as number)) return false;
  const netGpm = Math.abs((reading.flows[FP] as number) - (reading.flows[FS] as number));
  const w = reading.flowCovariance;
  const variance = (w[FP * FLOWS + FP] as number) + (w[FS * FLOWS + FS] as number) + (w[FB * FLOWS + FB] as number);
  return Math.abs(reading.flows[FB] as number) > netGpm + 3 * Math.sqrt(variance);
}

/** The same where one way is all there is: its state as it stands. */
function takeDecided(reading: SlotReading, state: WayState, forward: boolean, out: Verdict): void {
  const reach = NINETY_PERCENT_Z * state.bypassSigma;
  out.bypassGpm = forward ? state.heldGpm : -state.heldGpm;
  out.bypassLoGpm = out.bypassGpm - reach;
  out.bypassHiGpm = out.bypassGpm + reach;
  const primary = forward ? state.mainGpm : state.mainGpm - state.heldGpm;
  out.primaryFlowGpm = primary > 0 ? primary : 0;
  out.secondaryFlowGpm = primary >= out.bypassGpm ? out.primaryFlowGpm - out.bypassGpm : (reading.flows[FS] as number);
  for (let i = PS; i <= SR; i += 1) out.temperatures[i] = state.temperatures[i] as number;
  out.blendSigma = Math.sqrt(state.blendVariance);
  blank(reading, out);
}

/** Bypass, flows, temperatures and the interval of the bypass from both ways' states. */
function combine(reading: SlotReading, pReverse: number, forward: WayState, reverse: WayState, out: Verdict): void {
  const decided = pReverse < NEGLIGIBLE ? forward : pReverse > 1 - NEGLIGIBLE ? reverse : null;
  if (decided && known(decided.heldGpm) && decided.bypassGpm > 4 * decided.bypassSigma && known(decided.mainGpm)) {
    takeDecided(reading, decided, decided === forward, out);
    return;
  }
  // A way that does not know its size is left out where it is improbable, and leaves the bypass unknown where it is not.
  let pSized = pReverse;
  if (!known(forward.heldGpm) && pReverse > 1 - UNSIZED_PROBABILITY) pSized = 1;
  if (!known(reverse.heldGpm) && pReverse < UNSIZED_PROBABILITY) pSized = 0;
  const sized = (known(forward.heldGpm) || pSized > 1 - NEGLIGIBLE) && (known(reverse.heldGpm) || pSized < NEGLIGIBLE);
  if (sized) {
    const forwardGpm = pSized > 1 - NEGLIGIBLE ? 0 : (1 - pSized) * forward.heldGpm;
    const reverseGpm = pSized < NEGLIGIBLE ? 0 : pSized * reverse.heldGpm;
    out.bypassGpm = forwardGpm - reverseGpm;
    const decided = pSized < NEGLIGIBLE ? forward : reverse;
    if ((pSized < NEGLIGIBLE || pSized > 1 - NEGLIGIBLE) && decided.bypassGpm > 4 * decided.bypassSigma) {
      const reach = NINETY_PERCENT_Z * decided.bypassSigma;
      out.bypassLoGpm = out.bypassGpm - reach;
      out.bypassHiGpm = out.bypassGpm + reach;
    } else {
      // The mean can lie outside the central interval only by rounding.
      out.bypassLoGpm = Math.min(out.bypassGpm, bypassQuantile(0.05, pSized, forward, reverse));
      out.bypassHiGpm = Math.max(out.bypassGpm, bypassQuantile(0.95, pSized, forward, reverse));
    }
  } else clearBypass(out);
  const primary = mean(forward.mainGpm, reverse.mainGpm - reverse.heldGpm, pSized);
  out.primaryFlowGpm = known(primary) ? Math.max(0, primary) : (reading.flows[FP] as number);
  // One subtraction, so that primary less secondary is the bypass to the last digit.
  out.secondaryFlowGpm =
    known(primary) && known(out.bypassGpm) && primary >= out.bypassGpm
      ? out.primaryFlowGpm - out.bypassGpm
      : (reading.flows[FS] as number);
  const p = pReverse;
  for (let i = PS; i <= SR; i += 1) {
    out.temperatures[i] = mean(forward.temperatures[i] as number, reverse.temperatures[i] as number, p);
  }
  const gap =
    p > NEGLIGIBLE && p < 1 - NEGLIGIBLE
      ? (forward.temperatures[SS] as number) - (reverse.temperatures[SS] as number)
      : 0;
  const forwardVariance = p > 1 - NEGLIGIBLE ? 0 : (1 - p) * forward.blendVariance;
  const reverseVariance = p < NEGLIGIBLE ? 0 : p * reverse.blendVariance;
  out.blendSigma = Math.sqrt(forwardVariance + reverseVariance + p * (1 - p) * gap * gap);
  blank(reading, out);
}

/** Takes out what only the vague stand-ins said. */
function blank(reading: SlotReading, out: Verdict): void {
  const { measured } = reading;
  const pReverse = out.reverseProbability;
  const forward = pReverse <= 1 - DECIDED_PROBABILITY;
  const reverse = pReverse >= DECIDED_PROBABILITY;
  // Without its own sensor the blend is made of measured streams: of the primary supply alone only where nothing comes back.
  const made = measured[PS] && (forward || measured[SR] || measured[PR]);
  if (!(measured[SS] || made) || !(out.blendSigma < UNKNOWN_BLEND_SIGMA_F)) {
    out.temperatures[SS] = Number.NaN;
    out.blendSigma = Number.NaN;
  }
  if (!measured[PS] && !(forward && measured[SS])) out.temperatures[PS] = Number.NaN;
  const returnTold = reverse && measured[PR];
  const unmixed = forward && measured[PR] && known(out.bypassGpm) && (measured[PS] || measured[SS]);
  if (!measured[SR] && !returnTold && !unmixed) out.temperatures[SR] = Number.NaN;
}

/** Direction by the rule of the interval row: still, else the sign that is probable enough, else unknown with a reason. */
function decide(reading: SlotReading, still: number, out: Verdict): void {
  out.reason = '';
  if (still > 0.5) out.direction = 'still';
  else if (out.reverseProbability >= DECIDED_PROBABILITY) out.direction = 'reverse';
  else if (1 - out.reverseProbability >= DECIDED_PROBABILITY) out.direction = 'forward';
  else {
    out.direction = 'unknown';
    out.reason = whyUnknown(reading);
  }
}

/** Nothing bears on the direction: what is measured is passed on. */
export function settleNothing(reading: SlotReading, out: Verdict): void {
  out.direction = 'unknown';
  out.reason = 'no data';
  out.reverseProbability = Number.NaN;
  clearBypass(out);
  passFlows(reading, out);
  passTemperatures(reading, out);
  if (!reading.measured[SS]) out.blendSigma = Number.NaN;
  out.chiSquare = Number.NaN;
  out.redundancy = 0;
  out.atOdds = -1;
}

/**
 * Both ways' states mixed by P(reverse): bypass with its central 90 % interval, reconciled flows and temperatures, the
 * direction by the rule of the interval row.
 *
 * Units   gpm, mixing scale. `closest` is the way that disagrees less; where it is contradicted, the direction is unknown and
 *         temperatures and flows are passed on as measured, the bypass with an interval that spans both ways.
 * Source  Bayes' rule with equal prior odds; direction rule of the interval row.
 */
export function settle(
  arrangement: Arrangement,
  reading: SlotReading,
  pReverse: number,
  forwardFit: WayFit,
  reverseFit: WayFit,
  forward: WayState,
  reverse: WayState,
  bothWays: BothWays | null,
  out: Verdict,
): void {
  const oneWay = arrangement === 'variable-primary';
  const closest = oneWay || excessDisagreement(forwardFit) < excessDisagreement(reverseFit) ? forwardFit : reverseFit;
  out.reverseProbability = pReverse;
  out.chiSquare = closest.chiSquare;
  out.redundancy = closest.redundancy;
  out.atOdds = mostAtOdds(reading, closest, reading.rated);
  combine(reading, pReverse, forward, reverse, out);
  if (bothWays) {
    swing(bothWays, reading, out);
    out.direction = 'unknown';
    out.reason = 'both ways within the interval';
    return;
  }
  if (excessDisagreement(closest) > 0) {
    out.direction = 'unknown';
    out.reason = unsignedSawBoth(reading) ? 'both ways within the interval' : 'sensors contradict';
    passFlows(reading, out);
    passTemperatures(reading, out);
    if (!reading.measured[SS]) out.blendSigma = Number.NaN;
    return;
  }
  const still = known(out.bypassGpm)
    ? stillProbability(STILL_SHARE * out.secondaryFlowGpm, pReverse, forward, reverse)
    : stillShareProbability(pReverse, forwardFit, reverseFit);
  decide(reading, still, out);
  // A pipe that can only run forward is not forward because its share cannot be negative: it has to be clear of zero.
  if (oneWay && out.direction === 'forward' && !clearOfZero(forwardFit, forward)) {
    out.direction = 'unknown';
    out.reason = known(forwardFit.share) || known(forward.bypassGpm) ? 'too near balance' : 'no data';
  }
}

/** The net of a pipe that ran both ways, with the blended supply as measured: the mean of what went out. */
function swing(both: BothWays, reading: SlotReading, out: Verdict): void {
  out.chiSquare = Number.NaN;
  out.redundancy = 0;
  passTemperatures(reading, out);
  if (!known(both.bypassGpm)) return;
  const reach = NINETY_PERCENT_Z * both.bypassSigma;
  out.bypassGpm = both.bypassGpm;
  out.bypassLoGpm = both.bypassGpm - reach;
  out.bypassHiGpm = both.bypassGpm + reach;
  out.reverseProbability = normalCdf(-both.bypassGpm / both.bypassSigma);
  passFlows(reading, out);
}

/** The unheld estimate is above zero with the probability that names a direction. */
function clearOfZero(fit: WayFit, state: WayState): boolean {
  const z = known(state.bypassGpm) ? state.bypassGpm / state.bypassSigma : fit.share / Math.sqrt(fit.shareVariance);
  return normalCdf(z) >= DECIDED_PROBABILITY;
}
