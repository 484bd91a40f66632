import { densityFromCurves, enthalpyFromCurves, fluidCurves, tempFFromCurves } from './fluids';
import type { Fluid } from './types';

/** What both tees make of two flows and the two unmixed temperatures. */
export interface DecouplerBalance {
  /** Positive from the supply tee to the return tee (forward), negative backward; at the temperature of the common pipe. */
  bypassFlowGpm: number;
  secondarySupplyF: number;
  primaryReturnF: number;
}

/**
 * Both tees of a decoupler, by mass and enthalpy. With masses m = rho F and b = mp - ms:
 *   forward (b >= 0): Tss = Tps;  mp h(Tpr) = ms h(Tsr) + b h(Tps)
 *   reverse (b < 0):  Tpr = Tsr;  ms h(Tss) = mp h(Tps) + |b| h(Tsr)
 *
 * Units   gpm, both meters in the supply pipes (volume is not conserved exactly, mass is); deg F.
 * Gaps    NaN in, NaN out. A side without flow has no temperature of its own: its mixed temperature is NaN.
 * Throws  RangeError when a flow is negative, or when a glycol's mass percent is outside 0 to 60.
 * Source  first law for a steady adiabatic junction without shaft work.
 */
export function decouplerBalance(
  primaryFlowGpm: number,
  secondaryFlowGpm: number,
  primarySupplyF: number,
  secondaryReturnF: number,
  fluid: Fluid,
): DecouplerBalance {
  if (primaryFlowGpm < 0 || secondaryFlowGpm < 0) {
    throw new RangeError(`decouplerBalance: negative flow (${primaryFlowGpm}, ${secondaryFlowGpm})`);
  }
  const curves = fluidCurves(fluid);
  const coldDensity = densityFromCurves(primarySupplyF, curves);
  const hotDensity = densityFromCurves(secondaryReturnF, curves);
  const cold = enthalpyFromCurves(primarySupplyF, curves);
  const hot = enthalpyFromCurves(secondaryReturnF, curves);
  const primaryMass = primaryFlowGpm * coldDensity;
  if (!(primaryFlowGpm < secondaryFlowGpm)) {
    const bypassMass = primaryMass - secondaryFlowGpm * coldDensity;
    const share = primaryMass > 0 ? bypassMass / primaryMass : Number.NaN;
    return {
      bypassFlowGpm: bypassMass / coldDensity,
      secondarySupplyF: secondaryFlowGpm > 0 ? primarySupplyF : Number.NaN,
      primaryReturnF: tempFFromCurves(hot - share * (hot - cold), curves),
    };
  }
  // The secondary meter reads at the mixed temperature, which depends on the mass it reports: two rounds settle it.
  let share = (secondaryFlowGpm - primaryFlowGpm) / secondaryFlowGpm;
  let secondarySupplyF = Number.NaN;
  let secondaryMass = Number.NaN;
  for (let round = 0; round < 3; round += 1) {
    secondarySupplyF = tempFFromCurves(cold + share * (hot - cold), curves);
    secondaryMass = secondaryFlowGpm * densityFromCurves(secondarySupplyF, curves);
    share = (secondaryMass - primaryMass) / secondaryMass;
  }
  return {
    bypassFlowGpm: (primaryMass - secondaryMass) / hotDensity,
    secondarySupplyF: tempFFromCurves(cold + share * (hot - cold), curves),
    primaryReturnF: primaryFlowGpm > 0 ? secondaryReturnF : Number.NaN,
  };
}

/**
 * Share of the secondary supply that is return water, in reverse flow: beta = (Tss - Tps) / (Tsr - Tps) = |b| / Fs.
 *
 * Units   three temperatures, or three enthalpies (then the share is exact by mass); a fraction.
 * Gaps    NaN in, NaN out; equal supply and return: NaN.
 * Source  energy balance at the supply tee.
 */
export function reverseFraction(primarySupply: number, secondaryReturn: number, secondarySupply: number): number {
  const span = secondaryReturn - primarySupply;
  return span === 0 ? Number.NaN : (secondarySupply - primarySupply) / span;
}

/**
 * Share of the primary flow that crosses over, in forward flow: alpha = (Tsr - Tpr) / (Tsr - Tps) = b / Fp.
 *
 * Units, Gaps as reverseFraction. Source  energy balance at the return tee.
 */
export function forwardFraction(primarySupply: number, secondaryReturn: number, primaryReturn: number): number {
  const span = secondaryReturn - primarySupply;
  return span === 0 ? Number.NaN : (secondaryReturn - primaryReturn) / span;
}

/** Derivatives of a fraction by its three temperatures, 1/F. They sum to zero: an offset common to all sensors cancels. */
export interface FractionSensitivity {
  byPrimarySupply: number;
  bySecondaryReturn: number;
  /** Secondary supply for the reverse fraction, primary return for the forward one. */
  byMixed: number;
}

/** Derivatives of reverseFraction: -(1 - beta)/D, -beta/D, 1/D with D = Tsr - Tps. Source: algebra on reverseFraction. */
export function reverseSensitivity(
  primarySupply: number,
  secondaryReturn: number,
  secondarySupply: number,
): FractionSensitivity {
  const span = secondaryReturn - primarySupply;
  const beta = reverseFraction(primarySupply, secondaryReturn, secondarySupply);
  return { byPrimarySupply: -(1 - beta) / span, bySecondaryReturn: -beta / span, byMixed: 1 / span };
}

/** Derivatives of forwardFraction: alpha/D, (1 - alpha)/D, -1/D with D = Tsr - Tps. Source: algebra on forwardFraction. */
export function forwardSensitivity(
  primarySupply: number,
  secondaryReturn: number,
  primaryReturn: number,
): FractionSensitivity {
  const span = secondaryReturn - primarySupply;
  const alpha = forwardFraction(primarySupply, secondaryReturn, primaryReturn);
  return { byPrimarySupply: alpha / span, bySecondaryReturn: (1 - alpha) / span, byMixed: -1 / span };
}

/**
 * Standard uncertainty of a fraction f whose stream sits at `near` when f = 0 and at `far` when f = 1, mixed measured:
 *   u(f) = sqrt(u_mixed^2 + (1 - f)^2 u_near^2 + f^2 u_far^2) / |D|
 * For beta `near` is the primary supply and `far` the secondary return; for alpha the other way round.
 *
 * Units   uncertainties and the span D in one unit (F, or Btu/lb); independent sensors.
 * Gaps    NaN in, NaN out; span 0: Infinity.
 * Source  law of propagation, JCGM 100:2008, 5.1.2, on the fractions above.
 */
export function fractionUncertainty(
  fraction: number,
  span: number,
  nearSigma: number,
  farSigma: number,
  mixedSigma: number,
): number {
  const near = (1 - fraction) * nearSigma;
  const far = fraction * farSigma;
  return Math.sqrt(mixedSigma * mixedSigma + near * near + far * far) / Math.abs(span);
}

/**
 * Secondary over primary flow from four temperatures, in either direction: R = (Tpr - Tps) / (Tsr - Tss); b/Fp = 1 - R.
 *
 * Units   temperatures or enthalpies. Gaps: NaN in, NaN out; Tsr = Tss: NaN.
 * Source  energy balance of the whole decoupler.
 */
export function secondaryToPrimaryRatio(
  primarySupply: number,
  primaryReturn: number,
  secondarySupply: number,
  secondaryReturn: number,
): number {
  const load = secondaryReturn - secondarySupply;
  return load === 0 ? Number.NaN : (primaryReturn - primarySupply) / load;
}

/**
 * Standard uncertainty of secondaryToPrimaryRatio for four independent sensors of one sigma:
 *   u(R)/R = sigma * sqrt(2/(Tpr - Tps)^2 + 2/(Tsr - Tss)^2)
 *
 * Units   F; a ratio. Gaps: NaN in, NaN out. Source: JCGM 100:2008, 5.1.6.
 */
export function ratioUncertainty(
  primarySupply: number,
  primaryReturn: number,
  secondarySupply: number,
  secondaryReturn: number,
  sigma: number,
): number {
  const production = primaryReturn - primarySupply;
  const load = secondaryReturn - secondarySupply;
  const ratio = secondaryToPrimaryRatio(primarySupply, primaryReturn, secondarySupply, secondaryReturn);
  return Math.abs(ratio) * sigma * Math.sqrt(2 / (production * production) + 2 / (load * load));
}
