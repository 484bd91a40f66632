import { coilFromDesign, waterFractionForLoad } from './coil';
import type { CoilModel } from './coil';
import type { PlantModel } from './types';

/** Air enters this much above the design water and leaves this much above it: 80 and 55 F over 44 F water (common practice). */
const AIR_ENTERING_ABOVE_WATER_F = 36;
const AIR_LEAVING_ABOVE_WATER_F = 11;
/** Half of the design resistance on the air side (common practice, no source). */
const AIR_RESISTANCE_SHARE = 0.5;
/**
 * A clean coil's delta-T rises as load falls (to 1.34 of design at a quarter load), but real entering air cools with the
 * load and field experience is that delta-T falls at light load (Taylor, ASHRAE Trans. 2002, AC-02-6-1). No more than this
 * share of design is ever promised, so that no excess is claimed on the strength of an ideal coil.
 */
export const MAX_EXPECTED_SHARE = 1.2;
/** Loads outside these shares are judged as if at the nearer end: below, the coil's laws no longer hold. */
const LEAST_LOAD_SHARE = 0.1;
const MOST_LOAD_SHARE = 1.2;
/** A coil whose valve stands open takes about this share of design flow; more is not to be had. */
const OPEN_VALVE_SHARE = 2;

/** The load side of a plant as one coil; heat is in shares of design. */
export interface LoadSide {
  coil: CoilModel;
  /** Water the coils are designed for: production supply, or the blend of a building bridge. */
  designSupplyF: number;
  designDeltaTF: number;
}

/** The load side from the plant's design numbers. Throws: RangeError when the design delta-T exceeds 35 F. */
export function loadSide(plant: PlantModel): LoadSide {
  const designSupplyF = plant.blendedSupplyF ?? plant.productionSupplyF;
  const coil = coilFromDesign({
    heatBtuPerHour: 1,
    enteringAirF: designSupplyF + AIR_ENTERING_ABOVE_WATER_F,
    leavingAirF: designSupplyF + AIR_LEAVING_ABOVE_WATER_F,
    enteringWaterF: designSupplyF,
    waterDeltaTF: Math.min(plant.loadDeltaTF, AIR_ENTERING_ABOVE_WATER_F - 1),
    airResistanceShare: AIR_RESISTANCE_SHARE,
  });
  return { coil, designSupplyF, designDeltaTF: plant.loadDeltaTF };
}

/** Share of design water flow that a load share takes at a supply temperature; an open valve where there is no solution. */
function waterShare(side: LoadSide, loadShare: number, supplyF: number): number {
  const solved = waterFractionForLoad(side.coil, loadShare, supplyF);
  return Number.isNaN(solved) ? OPEN_VALVE_SHARE : Math.min(solved, OPEN_VALVE_SHARE);
}

/**
 * Delta-T that healthy coils make at a share of design load, fed at a given supply temperature. At design supply it is the
 * load-solved curve of a counterflow coil that holds its leaving air, bounded to 1.2 of design; another supply scales it
 * by the ratio of the flows that the coil needs.
 *
 * Units   share of design load; deg F.
 * Gaps    NaN in, NaN out. Water too warm for the leaving air: the valve stands open at twice design flow.
 * Source  effectiveness-NTU (lib/hydronics/coil.ts); the bound: see MAX_EXPECTED_SHARE.
 */
export function expectedDeltaTF(side: LoadSide, loadShare: number, supplyF: number): number {
  if (Number.isNaN(loadShare) || Number.isNaN(supplyF)) return Number.NaN;
  const share = Math.min(MOST_LOAD_SHARE, Math.max(LEAST_LOAD_SHARE, loadShare));
  const atDesign = waterShare(side, share, side.designSupplyF);
  const promisedF = Math.min(MAX_EXPECTED_SHARE, share / atDesign) * side.designDeltaTF;
  if (supplyF === side.designSupplyF) return promisedF;
  return (promisedF * atDesign) / waterShare(side, share, supplyF);
}
