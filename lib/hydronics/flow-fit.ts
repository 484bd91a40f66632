/**
 * What is known of the flows at one instant if the common pipe runs one given way.
 * `main` is the larger flow of that way (primary when forward, secondary when reverse), `other` the smaller,
 * `bypass` the magnitude between them: main = other + bypass. Missing is NaN.
 */
export interface FlowEvidence {
  mainGpm: number;
  mainSigma: number;
  otherGpm: number;
  otherSigma: number;
  /** A meter in the common pipe, signed so that this way is positive. */
  bypassGpm: number;
  bypassSigma: number;
  /** bypass / main from temperatures. */
  fraction: number;
  fractionSigma: number;
}

/** Weighted least-squares flows of one way, with their covariance. Gaps: what cannot be known is NaN. */
export interface FlowFit {
  mainGpm: number;
  mainVariance: number;
  bypassGpm: number;
  bypassVariance: number;
  covariance: number;
  /** Weighted sum of squared residuals. */
  chiSquare: number;
  /** Measurements beyond the unknowns: what chiSquare is to be judged against. */
  redundancy: number;
  /** True when no flow is known and the fit is in shares of the main flow (main = 1). */
  relative: boolean;
}

export const emptyFlowEvidence = (): FlowEvidence => ({
  mainGpm: Number.NaN,
  mainSigma: Number.NaN,
  otherGpm: Number.NaN,
  otherSigma: Number.NaN,
  bypassGpm: Number.NaN,
  bypassSigma: Number.NaN,
  fraction: Number.NaN,
  fractionSigma: Number.NaN,
});

export const emptyFlowFit = (): FlowFit => ({
  mainGpm: Number.NaN,
  mainVariance: Number.NaN,
  bypassGpm: Number.NaN,
  bypassVariance: Number.NaN,
  covariance: Number.NaN,
  chiSquare: Number.NaN,
  redundancy: Number.NaN,
  relative: false,
});

const known = (value: number): boolean => value === value;
const weight = (value: number, sigma: number): number => (known(value) && sigma > 0 ? 1 / (sigma * sigma) : 0);

/** The flow that turns the fraction's uncertainty into gpm: the best figure at hand, before any fit. */
function scaleFlow(evidence: FlowEvidence): number {
  if (known(evidence.mainGpm)) return evidence.mainGpm;
  if (known(evidence.otherGpm) && evidence.fraction < 0.95) return evidence.otherGpm / (1 - evidence.fraction);
  return evidence.bypassGpm / evidence.fraction;
}

function setUnknown(out: FlowFit): void {
  out.mainGpm = out.mainVariance = out.bypassGpm = out.bypassVariance = out.covariance = Number.NaN;
  out.chiSquare = 0;
  out.redundancy = 0;
  out.relative = false;
}

/** With fewer than two of the four measurements there is nothing to fit, but one may still stand alone. */
function setFromOne(evidence: FlowEvidence, out: FlowFit): void {
  setUnknown(out);
  if (known(evidence.bypassGpm)) {
    out.bypassGpm = evidence.bypassGpm;
    out.bypassVariance = evidence.bypassSigma * evidence.bypassSigma;
  } else if (known(evidence.fraction)) {
    out.relative = true;
    out.mainGpm = 1;
    out.mainVariance = out.covariance = 0;
    out.bypassGpm = evidence.fraction;
    out.bypassVariance = evidence.fractionSigma * evidence.fractionSigma;
  } else if (known(evidence.mainGpm)) {
    out.mainGpm = evidence.mainGpm;
    out.mainVariance = evidence.mainSigma * evidence.mainSigma;
  }
}

/**
 * Least squares for (main, bypass) from whichever of four independent measurements exist:
 *   main = m1,  main - bypass = m2,  bypass = m3,  bypass - fraction * main = 0
 * the last with sigma(fraction) * main. Two unknowns in closed form, so nothing is allocated.
 *
 * Units   gpm; fraction 0 to 1. With no flow at all the answer is in shares of the main flow and `relative` is true.
 * Gaps    fewer than two measurements: only what one measurement says, the rest NaN; chi-square 0, redundancy 0.
 * Source  weighted least squares by the normal equations (S. Narasimhan, C. Jordache, Data Reconciliation and Gross Error
 *         Detection, 2000, ch. 3); the fraction: lib/hydronics/tees.ts.
 */
export function fitFlows(evidence: FlowEvidence, out: FlowFit): void {
  const wMain = weight(evidence.mainGpm, evidence.mainSigma);
  const wOther = weight(evidence.otherGpm, evidence.otherSigma);
  const wBypass = weight(evidence.bypassGpm, evidence.bypassSigma);
  const anyFlow = wMain > 0 || wOther > 0 || wBypass > 0;
  const fractionKnown = anyFlow && known(evidence.fraction);
  const fraction = fractionKnown ? evidence.fraction : 0;
  const wFraction = fractionKnown ? weight(fraction, evidence.fractionSigma * scaleFlow(evidence)) : 0;
  const measurements = (wMain > 0 ? 1 : 0) + (wOther > 0 ? 1 : 0) + (wBypass > 0 ? 1 : 0) + (wFraction > 0 ? 1 : 0);
  if (measurements < 2) return setFromOne(evidence, out);

  const main = wMain > 0 ? evidence.mainGpm : 0;
  const other = wOther > 0 ? evidence.otherGpm : 0;
  const bypass = wBypass > 0 ? evidence.bypassGpm : 0;
  const n11 = wMain + wOther + fraction * fraction * wFraction;
  const n12 = -wOther - fraction * wFraction;
  const n22 = wOther + wBypass + wFraction;
  const determinant = n11 * n22 - n12 * n12;
  if (!(determinant > 1e-12 * n11 * n22)) return setFromOne(evidence, out);
  const right1 = wMain * main + wOther * other;
  const right2 = wBypass * bypass - wOther * other;
  const mainFit = (n22 * right1 - n12 * right2) / determinant;
  const bypassFit = (n11 * right2 - n12 * right1) / determinant;
  const mainGap = mainFit - main;
  const otherGap = mainFit - bypassFit - other;
  const bypassGap = bypassFit - bypass;
  const fractionGap = bypassFit - fraction * mainFit;
  out.mainGpm = mainFit;
  out.mainVariance = n22 / determinant;
  out.bypassGpm = bypassFit;
  out.bypassVariance = n11 / determinant;
  out.covariance = -n12 / determinant;
  out.chiSquare =
    wMain * mainGap * mainGap +
    wOther * otherGap * otherGap +
    wBypass * bypassGap * bypassGap +
    wFraction * fractionGap * fractionGap;
  out.redundancy = measurements - 2;
  out.relative = false;
}
