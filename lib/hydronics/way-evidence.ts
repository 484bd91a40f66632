import { enthalpyFromCurves } from './fluids';
import type { FluidCurves } from './fluids';
import { emptyFlowEvidence, emptyFlowFit, fitFlows } from './flow-fit';
import type { FlowEvidence, FlowFit } from './flow-fit';
import { logNormalCdf, truncationShift } from './normal';
import { quadrature } from './slot-inputs';
import type { SlotInputs } from './slot-inputs';

/** Enthalpies of the measured streams, Btu/lb; NaN where missing. */
export interface StreamEnthalpies {
  primarySupply: number;
  secondarySupply: number;
  primaryReturn: number;
  secondaryReturn: number;
  bypass: number;
}

export const emptyStreams = (): StreamEnthalpies => ({
  primarySupply: Number.NaN,
  secondarySupply: Number.NaN,
  primaryReturn: Number.NaN,
  secondaryReturn: Number.NaN,
  bypass: Number.NaN,
});

/** Fills `out` with the enthalpies of a slot's temperatures: once a slot, though both ways use them. */
export function readStreams(inputs: SlotInputs, curves: FluidCurves, out: StreamEnthalpies): void {
  out.primarySupply = enthalpyFromCurves(inputs.primarySupplyF, curves);
  out.secondarySupply = enthalpyFromCurves(inputs.secondarySupplyF, curves);
  out.primaryReturn = enthalpyFromCurves(inputs.primaryReturnF, curves);
  out.secondaryReturn = enthalpyFromCurves(inputs.secondaryReturnF, curves);
  out.bypass = enthalpyFromCurves(inputs.bypassF, curves);
}

/** Which way the common pipe is supposed to run while the evidence is weighed. */
export type Way = 'forward' | 'reverse';

/** Below this many sigmas between supply and return, fractions from temperatures are noise and are not formed. */
const MIN_SPAN_SIGMAS = 2;
/** A sensor in a common pipe can sit in standing water: it may speak against a way, but with no more than this. */
const BYPASS_TEMP_CHI_LIMIT = 9;

/** Everything the measurements say if the common pipe runs one given way. Enthalpies in Btu/lb. */
export interface WayEvidence {
  flows: FlowEvidence;
  fit: FlowFit;
  /** The fit without temperatures: what the flow meters alone predict. */
  meterFit: FlowFit;
  /** Signed distance of the bypass from zero in sigmas, positive = this way; NaN when its size is unknown. */
  z: number;
  /** Mean and variance of the bypass magnitude, given that it runs this way. */
  bypassMean: number;
  bypassVariance: number;
  /** Main flow given the same. */
  mainMean: number;
  /** Blended supply and its variance (enthalpy). */
  blend: number;
  blendVariance: number;
  /** The stream that is mixed this way, as measured: primary return when forward, secondary supply when reverse. */
  mix: number;
  mixSigma: number;
  /** Unmixed streams at the tees. */
  cold: number;
  hot: number;
  logLikelihood: number;
  /** Squared disagreement of the measurements with this way, and how many comparisons it holds. */
  chiSquare: number;
  comparisons: number;
  /** Supply and return are far enough apart for fractions from temperatures. */
  spanKnown: boolean;
  /** True when something measured bears on the way at all. */
  informed: boolean;
}

export const emptyWayEvidence = (): WayEvidence => ({
  flows: emptyFlowEvidence(),
  fit: emptyFlowFit(),
  meterFit: emptyFlowFit(),
  z: Number.NaN,
  bypassMean: Number.NaN,
  bypassVariance: Number.NaN,
  mainMean: Number.NaN,
  blend: Number.NaN,
  blendVariance: Number.NaN,
  mix: Number.NaN,
  mixSigma: Number.NaN,
  cold: Number.NaN,
  hot: Number.NaN,
  logLikelihood: Number.NaN,
  chiSquare: Number.NaN,
  comparisons: Number.NaN,
  spanKnown: false,
  informed: false,
});

const known = (value: number): boolean => value === value;

/** One stream read by up to two sensors: their inverse-variance mean, and what their difference says. */
interface Pooled {
  value: number;
  variance: number;
  chiSquare: number;
  comparisons: number;
}
const pooled: Pooled = { value: Number.NaN, variance: Number.NaN, chiSquare: 0, comparisons: 0 };

function pool(value1: number, sigma1: number, value2: number, sigma2: number): void {
  const variance1 = sigma1 * sigma1;
  const variance2 = sigma2 * sigma2;
  pooled.chiSquare = 0;
  pooled.comparisons = 0;
  if (known(value1) && known(value2)) {
    const share1 = variance2 / (variance1 + variance2);
    pooled.value = value2 + share1 * (value1 - value2);
    pooled.variance = share1 * variance1;
    pooled.chiSquare = ((value1 - value2) * (value1 - value2)) / (variance1 + variance2);
    pooled.comparisons = 1;
  } else if (known(value1)) {
    pooled.value = value1;
    pooled.variance = variance1;
  } else {
    pooled.value = value2;
    pooled.variance = variance2;
  }
}

/** Copies the flow measurements into the main/other/bypass view of this way. */
function viewFlows(inputs: SlotInputs, forward: boolean, flows: FlowEvidence): void {
  flows.mainGpm = forward ? inputs.primaryFlowGpm : inputs.secondaryFlowGpm;
  flows.mainSigma = forward ? inputs.primaryFlowSigma : inputs.secondaryFlowSigma;
  flows.otherGpm = forward ? inputs.secondaryFlowGpm : inputs.primaryFlowGpm;
  flows.otherSigma = forward ? inputs.secondaryFlowSigma : inputs.primaryFlowSigma;
  if (known(inputs.bypassFlowGpm)) {
    flows.bypassGpm = forward ? inputs.bypassFlowGpm : -inputs.bypassFlowGpm;
    flows.bypassSigma = inputs.bypassFlowSigma;
  } else {
    flows.bypassGpm = inputs.bypassUnsignedGpm;
    flows.bypassSigma = inputs.bypassUnsignedSigma;
  }
}

/**
 * Weighs one slot's measurements on the supposition that the common pipe runs one way.
 *
 * In forward flow the two supplies are one stream and the primary return is the mix; in reverse flow the two returns are
 * one stream and the secondary supply is the mix. The like streams are pooled by inverse variance, their difference
 * counts against the way; the mix gives the fraction alpha or beta; flows and fraction are fitted together
 * (flow-fit.ts); the likelihood is exp(-chi2/2) times the probability that the fitted bypass has the way's sign, or one
 * half where its size is unknown. With flow meters alone the two ways then give exactly P(reverse) = cdf(-b/u(b)).
 *
 * Units   inputs in deg F and gpm; streams as enthalpy (Btu/lb), so the mixing is exact.
 * Gaps    missing inputs drop out; `informed` is false when nothing bears on the way.
 * Source  inverse-variance weighting and first-order propagation, JCGM 100:2008, 5.1.2; fractions in tees.ts.
 */
export function weighWay(
  way: Way,
  inputs: SlotInputs,
  streams: StreamEnthalpies,
  btuPerLbF: number,
  out: WayEvidence,
): void {
  const forward = way === 'forward';
  const { primarySupply, secondarySupply, primaryReturn, secondaryReturn } = streams;
  const mix = forward ? primaryReturn : secondarySupply;
  const mixSigma = btuPerLbF * (forward ? inputs.primaryReturnSigma : inputs.secondarySupplySigma);

  out.mix = mix;
  out.mixSigma = mixSigma;
  if (forward) {
    pool(
      primarySupply,
      btuPerLbF * inputs.primarySupplySigma,
      secondarySupply,
      btuPerLbF * inputs.secondarySupplySigma,
    );
  } else {
    pool(
      secondaryReturn,
      btuPerLbF * inputs.secondaryReturnSigma,
      primaryReturn,
      btuPerLbF * inputs.primaryReturnSigma,
    );
  }
  const doubled = pooled.value;
  const doubledVariance = pooled.variance;
  out.chiSquare = pooled.chiSquare;
  out.comparisons = pooled.comparisons;
  const likeStreams = pooled.comparisons > 0;
  const single = forward ? secondaryReturn : primarySupply;
  const singleSigma = btuPerLbF * (forward ? inputs.secondaryReturnSigma : inputs.primarySupplySigma);
  out.cold = forward ? doubled : single;
  out.hot = forward ? single : doubled;
  const coldVariance = forward ? doubledVariance : singleSigma * singleSigma;
  const hotVariance = forward ? singleSigma * singleSigma : doubledVariance;
  const span = out.hot - out.cold;
  const spanKnown = span > MIN_SPAN_SIGMAS * Math.sqrt(coldVariance + hotVariance);

  out.spanKnown = spanKnown;
  const flows = out.flows;
  viewFlows(inputs, forward, flows);
  flows.fraction = Number.NaN;
  fitFlows(flows, out.meterFit);
  if (spanKnown && known(mix)) {
    const raw = forward ? (out.hot - mix) / span : (mix - out.cold) / span;
    const share = raw < 0 ? 0 : raw > 1 ? 1 : raw;
    const near = (1 - share) * Math.sqrt(forward ? hotVariance : coldVariance);
    const far = share * Math.sqrt(forward ? coldVariance : hotVariance);
    flows.fractionSigma = Math.sqrt(mixSigma * mixSigma + near * near + far * far) / span;
    flows.fraction = raw > 1 ? 1 : raw;
    // A mix warmer than the warm stream, or colder than the cold one, speaks against the way (or a sensor).
    if (raw > 1) out.chiSquare += ((raw - 1) / flows.fractionSigma) ** 2;
  } else if (known(mix) && known(single)) {
    // No span to divide by, yet a mix on the wrong side of the stream it starts from is impossible this way.
    const wrong = forward ? mix - single : single - mix;
    if (wrong > 0) {
      out.chiSquare += (wrong * wrong) / (mixSigma * mixSigma + singleSigma * singleSigma);
      out.comparisons += 1;
    }
  }
  fitFlows(flows, out.fit);
  out.chiSquare += out.fit.chiSquare;
  out.comparisons += out.fit.redundancy;

  settleBypass(out);
  let commonPipeChi = 0;
  if (spanKnown && known(inputs.bypassF)) {
    const sigma = quadrature(btuPerLbF * inputs.bypassFSigma, Math.sqrt(forward ? coldVariance : hotVariance));
    const gap = (streams.bypass - (forward ? out.cold : out.hot)) / sigma;
    commonPipeChi = Math.min(BYPASS_TEMP_CHI_LIMIT, gap * gap);
  }
  out.informed =
    likeStreams ||
    (known(mix) && known(single)) ||
    (spanKnown && known(inputs.bypassF)) ||
    known(inputs.bypassFlowGpm) ||
    (known(flows.mainGpm) && known(flows.otherGpm));
  out.logLikelihood = -0.5 * (out.chiSquare + commonPipeChi) + (known(out.z) ? logNormalCdf(out.z) : -Math.LN2);
  if (out.z < 0) out.chiSquare += out.z * out.z;
  blendSupply(forward, doubled, doubledVariance, coldVariance, hotVariance, out);
}

/** Bypass and main flow given that the bypass has this way's sign: the moments of the cut-off normal. */
function settleBypass(out: WayEvidence): void {
  const fit = out.fit;
  const sigma = Math.sqrt(fit.bypassVariance);
  out.z = sigma > 0 ? fit.bypassGpm / sigma : Number.NaN;
  if (!known(out.z)) {
    out.bypassMean = out.bypassVariance = Number.NaN;
    out.mainMean = fit.relative ? Number.NaN : fit.mainGpm;
    return;
  }
  const shift = truncationShift(out.z);
  out.bypassMean = fit.bypassGpm + sigma * shift;
  out.bypassVariance = fit.bypassVariance * Math.max(0, 1 - out.z * shift - shift * shift);
  out.mainMean = fit.relative ? Number.NaN : fit.mainGpm + (fit.covariance / fit.bypassVariance) * sigma * shift;
}

/** Blended supply of this way: one stream when forward; measured mix and meters' prediction together when reverse. */
function blendSupply(
  forward: boolean,
  doubled: number,
  doubledVariance: number,
  coldVariance: number,
  hotVariance: number,
  out: WayEvidence,
): void {
  if (forward) {
    out.blend = doubled;
    out.blendVariance = doubledVariance;
    return;
  }
  const fit = out.meterFit;
  const share = fit.relative ? Number.NaN : Math.min(1, Math.max(0, fit.bypassGpm / fit.mainGpm));
  const span = out.hot - out.cold;
  const shareVariance =
    (fit.bypassVariance + share * share * fit.mainVariance - 2 * share * fit.covariance) / (fit.mainGpm * fit.mainGpm);
  const predicted = out.cold + share * span;
  const predictedVariance =
    span * span * shareVariance + (1 - share) * (1 - share) * coldVariance + share * share * hotVariance;
  // A main flow of zero predicts nothing: its share has no finite variance.
  const usable = predictedVariance < Number.POSITIVE_INFINITY;
  pool(out.mix, out.mixSigma, usable ? predicted : Number.NaN, Math.sqrt(predictedVariance));
  out.blend = pooled.value;
  out.blendVariance = pooled.variance;
}
