import { HORSEPOWER_KW } from '../units';
import type { DistributionPumpsModel } from './types';

/** Gallons a minute times feet of water for one horsepower: 33,000 ft lbf/min over the weight of a gallon (trade figure). */
const GPM_FEET_PER_HORSEPOWER = 3960;
/** Variable-speed drive near full load; falls to 0.90 to 0.93 near a quarter (common practice, no source). */
export const DRIVE_EFFICIENCY = 0.97;

/**
 * Power of a pump and its motor and drive: 0.7457 gpm ft SG / (3960 eta_pump eta_motor eta_drive).
 *
 * Units   gpm, ft of water, efficiencies 0 to 1; kW. `specificGravity` is 1 for water.
 * Gaps    NaN in, NaN out.
 * Source  water-horsepower formula of every pump text; 3960 is exact to 0.1 %.
 */
export function pumpPowerKw(
  flowGpm: number,
  headFt: number,
  efficiency: number,
  motorEfficiency: number,
  driveEfficiency: number = DRIVE_EFFICIENCY,
  specificGravity: number = 1,
): number {
  const hydraulicHp = (flowGpm * headFt * specificGravity) / GPM_FEET_PER_HORSEPOWER;
  return (HORSEPOWER_KW * hydraulicHp) / (efficiency * motorEfficiency * driveEfficiency);
}

/**
 * Head of a distribution system whose pumps hold a differential pressure: H = Hc + (Hd - Hc) (Q/Qd)^2.
 * With control head the cube law does not hold, so it is never used here.
 *
 * Units   gpm; ft of water. Gaps: NaN in, NaN out.
 * Source  friction in turbulent flow goes with the square of flow; control head is what the set-point keeps up.
 */
export function systemHeadFt(flowGpm: number, pumps: DistributionPumpsModel): number {
  const share = flowGpm / pumps.flowGpm;
  return pumps.controlHeadFt + (pumps.headFt - pumps.controlHeadFt) * share * share;
}

/**
 * Power of the distribution pumps at a flow on their system curve, at constant efficiencies.
 *
 * Units   gpm; kW. Gaps: NaN in, NaN out. Source: pumpPowerKw and systemHeadFt.
 */
export function distributionPumpPowerKw(
  flowGpm: number,
  pumps: DistributionPumpsModel,
  driveEfficiency: number = DRIVE_EFFICIENCY,
): number {
  return pumpPowerKw(flowGpm, systemHeadFt(flowGpm, pumps), pumps.efficiency, pumps.motorEfficiency, driveEfficiency);
}

/**
 * Power that a flow takes beyond a smaller one on the same system curve; never negative.
 *
 * Units   gpm; kW. Gaps: NaN in, NaN out. Source: distributionPumpPowerKw.
 */
export function excessPumpPowerKw(flowGpm: number, neededGpm: number, pumps: DistributionPumpsModel): number {
  return Math.max(0, distributionPumpPowerKw(flowGpm, pumps) - distributionPumpPowerKw(neededGpm, pumps));
}

/** 1 Btu in ft lbf, the mechanical equivalent of heat. Source: 1055.05585262 J over 1.3558179483314004 J. */
const FOOT_POUNDS_PER_BTU = 778.169262;

/**
 * Rise of the water through a pump: what the pump loses stays in it, (1 / efficiency - 1) * head / (J cp). The useful work
 * turns to heat only along the pipes, beyond the sensor.
 *
 * Units   feet of the fluid pumped; Btu/(lb F); deg F. Gaps: NaN in, NaN out.
 * Throws  RangeError when the efficiency is not above 0 and at most 1.
 * Source  first law for an adiabatic pump.
 */
export function pumpRiseF(headFt: number, efficiency: number, btuPerLbF: number): number {
  if (efficiency <= 0 || efficiency > 1)
    throw new RangeError(`pumpRiseF: efficiency must be in (0, 1], got ${efficiency}`);
  return ((1 / efficiency - 1) * headFt) / (FOOT_POUNDS_PER_BTU * btuPerLbF);
}
