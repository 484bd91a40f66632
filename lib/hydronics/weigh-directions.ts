import { NINETY_PERCENT_Z, normalCdf } from './normal';
import type { SlotInputs } from './slot-inputs';
import type { WayEvidence } from './way-evidence';
import type { Arrangement, Reason } from './types';

/** A direction is named when its probability is at least this. */
export const DECIDED_PROBABILITY = 0.75;
/** Within this share of secondary flow of zero the common pipe stands still. */
export const STILL_SHARE = 0.02;
/** Squared sigmas at which one comparison is a contradiction (3.5 sigma, 1 in 2000), and what each further one adds. */
const CONTRADICTION_CHI_SQUARE = 12.25;
const CONTRADICTION_PER_COMPARISON = 3;
/** A common-pipe temperature this far from both ends says that the pipe ran both ways, or that the water hunts. */
const BETWEEN_LOW = 0.25;
const BETWEEN_HIGH = 0.75;

/** What both ways together say of one slot. Flows in gpm, streams as enthalpy; NaN where unknown. */
export interface Verdict {
  reverseProbability: number;
  bypassGpm: number;
  bypassSigma: number;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  blend: number;
  blendSigma: number;
  direction: 'unknown' | 'forward' | 'reverse' | 'still';
  reason: Reason;
}

export const emptyVerdict = (): Verdict => ({
  reverseProbability: Number.NaN,
  bypassGpm: Number.NaN,
  bypassSigma: Number.NaN,
  primaryFlowGpm: Number.NaN,
  secondaryFlowGpm: Number.NaN,
  blend: Number.NaN,
  blendSigma: Number.NaN,
  direction: 'unknown',
  reason: 'no data',
});

const known = (value: number): boolean => value === value;

/** How far a way's disagreement exceeds what chance allows; positive = contradicted. */
const excessDisagreement = (way: WayEvidence): number =>
  way.chiSquare - CONTRADICTION_CHI_SQUARE - CONTRADICTION_PER_COMPARISON * Math.max(0, way.comparisons - 1);

/** Mean and sigma of two cases with probabilities; one case alone counts only when it is decided. */
const mixed = { mean: Number.NaN, sigma: Number.NaN };
function mix(
  forward: number,
  forwardVariance: number,
  reverse: number,
  reverseVariance: number,
  pReverse: number,
): void {
  const pForward = 1 - pReverse;
  if (known(forward) && known(reverse)) {
    const gap = forward - reverse;
    mixed.mean = pForward * forward + pReverse * reverse;
    mixed.sigma = Math.sqrt(pForward * forwardVariance + pReverse * reverseVariance + pForward * pReverse * gap * gap);
  } else if (known(forward) && pForward >= DECIDED_PROBABILITY) {
    mixed.mean = forward;
    mixed.sigma = Math.sqrt(forwardVariance);
  } else if (known(reverse) && pReverse >= DECIDED_PROBABILITY) {
    mixed.mean = reverse;
    mixed.sigma = Math.sqrt(reverseVariance);
  } else {
    mixed.mean = mixed.sigma = Number.NaN;
  }
}

/** Flows of both mains that agree with the bypass exactly; the measured ones where the bypass is not known in gpm. */
function settleFlows(
  forward: WayEvidence,
  reverse: WayEvidence,
  inputs: SlotInputs,
  pReverse: number,
  out: Verdict,
): void {
  mix(forward.mainMean, 0, reverse.mainMean - reverse.bypassMean, 0, pReverse);
  out.primaryFlowGpm = known(out.bypassGpm) && known(mixed.mean) ? Math.max(0, mixed.mean) : inputs.primaryFlowGpm;
  mix(forward.mainMean - forward.bypassMean, 0, reverse.mainMean, 0, pReverse);
  out.secondaryFlowGpm = known(out.bypassGpm) && known(mixed.mean) ? Math.max(0, mixed.mean) : inputs.secondaryFlowGpm;
}

/** Probability that |b| is within the still band, b normal. */
function stillProbability(bypass: number, sigma: number, secondaryFlow: number): number {
  const band = STILL_SHARE * secondaryFlow;
  // Outside the band, or with sigma too wide for half the probability to fit inside, no cdf need be asked.
  if (!(Math.abs(bypass) < band && sigma < 1.5 * band)) return 0;
  return normalCdf((band - bypass) / sigma) - normalCdf((-band - bypass) / sigma);
}

/** True when the unsigned meter saw more water than the net flow can explain: it ran both ways within the interval. */
function ranBothWays(inputs: SlotInputs): boolean {
  if (!known(inputs.bypassUnsignedGpm) || known(inputs.bypassFlowGpm)) return false;
  const netGpm = Math.abs(inputs.primaryFlowGpm - inputs.secondaryFlowGpm);
  const sigma = Math.hypot(inputs.bypassUnsignedSigma, inputs.primaryFlowSigma, inputs.secondaryFlowSigma);
  return inputs.bypassUnsignedGpm > netGpm + 3 * sigma;
}

/** Why the direction is not known, when the measurements do not contradict each other. */
function whyUnknown(forward: WayEvidence, reverse: WayEvidence, inputs: SlotInputs): Reason {
  const span = inputs.secondaryReturnF - inputs.primarySupplyF;
  const place = (inputs.bypassF - inputs.primarySupplyF) / span;
  if (reverse.spanKnown && place > BETWEEN_LOW && place < BETWEEN_HIGH) return 'both ways within the interval';
  const flowsTell = known(inputs.bypassFlowGpm) || known(inputs.primaryFlowGpm - inputs.secondaryFlowGpm);
  const temperaturesTell = forward.spanKnown || reverse.spanKnown;
  return !flowsTell && !temperaturesTell ? 'temperatures too close' : 'too near balance';
}

/** Direction by the rule of the interval row: still, else the sign that is probable enough, else unknown with a reason. */
function decide(forward: WayEvidence, reverse: WayEvidence, inputs: SlotInputs, out: Verdict): void {
  // Without flows the bypass is still known as a share of the main flow, and near zero the mains are equal.
  const relative = !known(out.bypassGpm);
  const pReverse = out.reverseProbability;
  let still: number;
  if (relative) {
    mix(forward.bypassMean, forward.bypassVariance, -reverse.bypassMean, reverse.bypassVariance, pReverse);
    still = forward.fit.relative && reverse.fit.relative ? stillProbability(mixed.mean, mixed.sigma, 1) : 0;
  } else {
    still = stillProbability(out.bypassGpm, out.bypassSigma, out.secondaryFlowGpm);
  }
  out.reason = '';
  if (still > 0.5) out.direction = 'still';
  else if (pReverse >= DECIDED_PROBABILITY) out.direction = 'reverse';
  else if (1 - pReverse >= DECIDED_PROBABILITY) out.direction = 'forward';
  else {
    out.direction = 'unknown';
    out.reason = whyUnknown(forward, reverse, inputs);
  }
}

/** Squared disagreement for each comparison, 1 or more: what sigmas squared are stretched by (Birge's ratio). */
const disagreement = (way: WayEvidence): number =>
  way.comparisons > 0 ? Math.max(1, way.chiSquare / way.comparisons) : Math.max(1, way.chiSquare);

/** Sigmas that leave room for the measurements' disagreement: what differs by more than its doubt is doubted more. */
function stretchSigmas(closest: WayEvidence, out: Verdict): void {
  const stretch = Math.sqrt(disagreement(closest));
  out.bypassSigma *= stretch;
  out.blendSigma *= stretch;
}

/**
 * Measurements that no way explains: flows and blended supply as measured, and odds weakened by the disagreement as the
 * squared sigmas are.
 */
function contradicted(
  closest: WayEvidence,
  logOdds: number,
  reverse: WayEvidence,
  inputs: SlotInputs,
  out: Verdict,
): void {
  out.direction = 'unknown';
  out.reason = ranBothWays(inputs) ? 'both ways within the interval' : 'sensors contradict';
  out.reverseProbability = 1 / (1 + Math.exp(-logOdds / disagreement(closest)));
  if (known(reverse.mix)) {
    out.blend = reverse.mix;
    out.blendSigma = reverse.mixSigma;
  }
  out.primaryFlowGpm = inputs.primaryFlowGpm;
  out.secondaryFlowGpm = inputs.secondaryFlowGpm;
}

/** A minimum-flow bypass runs forward or not at all; what says otherwise contradicts the arrangement. */
function weighForwardOnly(forward: WayEvidence, reverse: WayEvidence, inputs: SlotInputs, out: Verdict): void {
  const sizeKnown = known(forward.z) && !forward.fit.relative;
  out.reverseProbability = forward.informed ? 0 : Number.NaN;
  out.bypassGpm = sizeKnown ? forward.bypassMean : Number.NaN;
  out.bypassSigma = sizeKnown ? Math.sqrt(forward.bypassVariance) : Number.NaN;
  out.blend = forward.blend;
  out.blendSigma = Math.sqrt(forward.blendVariance);
  settleFlows(forward, forward, inputs, 0, out);
  if (!forward.informed) {
    out.direction = 'unknown';
    out.reason = 'no data';
    return;
  }
  const contradicts = excessDisagreement(forward) > 0;
  if (contradicts) contradicted(forward, reverse.logLikelihood - forward.logLikelihood, reverse, inputs, out);
  stretchSigmas(forward, out);
  if (contradicts) return;
  if (stillProbability(out.bypassGpm, out.bypassSigma, out.secondaryFlowGpm) > 0.5) out.direction = 'still';
  else out.direction = normalCdf(forward.z) >= DECIDED_PROBABILITY ? 'forward' : 'unknown';
  out.reason = out.direction === 'unknown' ? 'too near balance' : '';
}

/**
 * Weighs forward against reverse: P(reverse) from both likelihoods, the bypass and the blended supply as the two ways'
 * moments mixed by it. With flow meters alone this is b = Fp - Fs, u(b) in quadrature and P(reverse) = cdf(-b/u(b)).
 *
 * Units   gpm; streams as enthalpy. Gaps: nothing that bears on the direction: unknown, 'no data'.
 * Source  Bayes' rule with equal prior odds; direction rule of the interval row.
 */
export function weighDirections(
  arrangement: Arrangement,
  forward: WayEvidence,
  reverse: WayEvidence,
  inputs: SlotInputs,
  out: Verdict,
): void {
  if (arrangement === 'variable-primary') return weighForwardOnly(forward, reverse, inputs, out);
  if (!forward.informed && !reverse.informed) {
    settleNothing(inputs, forward, out);
    return;
  }
  const logOdds = reverse.logLikelihood - forward.logLikelihood;
  const pReverse = 1 / (1 + Math.exp(-logOdds));
  out.reverseProbability = pReverse;
  if (forward.fit.relative || reverse.fit.relative) {
    out.bypassGpm = out.bypassSigma = Number.NaN;
  } else {
    mix(forward.bypassMean, forward.bypassVariance, -reverse.bypassMean, reverse.bypassVariance, pReverse);
    out.bypassGpm = mixed.mean;
    out.bypassSigma = mixed.sigma;
  }
  settleFlows(forward, reverse, inputs, pReverse, out);
  mix(forward.blend, forward.blendVariance, reverse.blend, reverse.blendVariance, pReverse);
  out.blend = mixed.mean;
  out.blendSigma = mixed.sigma;
  const closest = excessDisagreement(forward) < excessDisagreement(reverse) ? forward : reverse;
  const noWayFits = excessDisagreement(closest) > 0;
  if (noWayFits) contradicted(closest, logOdds, reverse, inputs, out);
  stretchSigmas(closest, out);
  if (!noWayFits) decide(forward, reverse, inputs, out);
}

function settleNothing(inputs: SlotInputs, forward: WayEvidence, out: Verdict): void {
  out.reverseProbability = out.bypassGpm = out.bypassSigma = Number.NaN;
  out.primaryFlowGpm = inputs.primaryFlowGpm;
  out.secondaryFlowGpm = inputs.secondaryFlowGpm;
  // A lone secondary supply sensor is the blended supply whichever way the pipe runs; a primary one is not.
  const measured = known(inputs.secondarySupplyF);
  out.blend = measured ? forward.blend : Number.NaN;
  out.blendSigma = measured ? Math.sqrt(forward.blendVariance) : Number.NaN;
  out.direction = 'unknown';
  out.reason = 'no data';
}

/** Half-width of the central 90 % interval of a sigma. */
export const ninetyPercent = (sigma: number): number => NINETY_PERCENT_Z * sigma;
