import { enthalpyFromCurves, fluidCurves, specificHeatFromCurves } from './fluids';
import type { Fluid } from './types';

/**
 * A scale of temperature on which streams mix exactly: enthalpy over the specific heat at `baseF`, so that one degree of it
 * is one degree F at the base:  u = T + bend * (T - baseF)^2 + ...
 */
export interface MixingScale {
  baseF: number;
  /** Half the relative slope of specific heat at the base, 1/F. */
  bend: number;
}

/**
 * The mixing scale of a fluid about a temperature.
 *
 * Units   deg F.
 * Throws  RangeError when a glycol's mass percent is outside 0 to 60.
 * Source  second-order expansion of h(T) (lib/hydronics/fluids.ts); within 0.003 F of it 15 F from the base.
 */
export function mixingScale(baseF: number, fluid: Fluid): MixingScale {
  const curves = fluidCurves(fluid);
  const reachF = 10;
  const rise = enthalpyFromCurves(baseF + reachF, curves) - enthalpyFromCurves(baseF, curves);
  const fall = enthalpyFromCurves(baseF, curves) - enthalpyFromCurves(baseF - reachF, curves);
  return { baseF, bend: (rise - fall) / (2 * reachF * reachF * specificHeatFromCurves(baseF, curves)) };
}

/** Temperature to mixing scale. Units: deg F. Gaps: NaN in, NaN out. */
export function toMixing(tempF: number, scale: MixingScale): number {
  const away = tempF - scale.baseF;
  return tempF + scale.bend * away * away;
}

/** Mixing scale back to temperature, within 1e-5 F over 30 F. Units: deg F. Gaps: NaN in, NaN out. */
export function fromMixing(mixingF: number, scale: MixingScale): number {
  const away = mixingF - scale.baseF;
  const bent = scale.bend * away;
  return mixingF - away * bent * (1 - 2 * bent);
}
