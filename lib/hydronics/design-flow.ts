import { TON_BTU_PER_HOUR } from '../units';
import { heatFactorBtuPerHourPerGpmF } from './fluids';
import type { Fluid } from './types';

/**
 * Flow that carries a load at a delta-T: tons * 12000 / (K * delta-T), K at the mean water temperature.
 *
 * Units   tons, deg F; gpm. Gaps: NaN in, NaN out. Throws: RangeError for a glycol share outside 0 to 60 %.
 * Source  steady-flow energy balance; K: lib/hydronics/fluids.ts.
 */
export function flowFromTonsGpm(tons: number, deltaTF: number, supplyF: number, fluid: Fluid): number {
  return (tons * TON_BTU_PER_HOUR) / (heatFactorBtuPerHourPerGpmF(supplyF + deltaTF / 2, fluid) * deltaTF);
}

/**
 * Delta-T at which a flow carries a load, the inverse of flowFromTonsGpm; K at the mean water temperature, by repetition.
 *
 * Units, Gaps, Throws, Source as flowFromTonsGpm.
 */
export function deltaTFromTonsF(tons: number, flowGpm: number, supplyF: number, fluid: Fluid): number {
  let deltaTF = 10;
  for (let round = 0; round < 3; round += 1) {
    deltaTF = (tons * TON_BTU_PER_HOUR) / (heatFactorBtuPerHourPerGpmF(supplyF + deltaTF / 2, fluid) * flowGpm);
  }
  return deltaTF;
}
