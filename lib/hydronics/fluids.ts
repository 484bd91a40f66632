import { GALLON_M3, POUND_KG, TON_BTU_PER_HOUR } from '../units';
import type { Fluid } from './types';

/** 1 Btu(IT)/(lb F) in J/(kg K), exact by the definition of the international-table Btu. */
const BTU_PER_LB_F_SI = 4186.8;
/** 1 kg/m3 in lb per US gallon. */
const LB_PER_GALLON = GALLON_M3 / POUND_KG;

/**
 * Density and specific heat of one fluid as polynomials in x = (tempF - baseF) / scaleF.
 * Enthalpy is the term-by-term integral of specific heat, so the two cannot disagree.
 */
export interface FluidCurves {
  baseF: number;
  scaleF: number;
  /** lb per US gallon; ascending powers of x. */
  density: readonly number[];
  /** Btu/(lb F); ascending powers of x. */
  specificHeat: readonly number[];
  /** Btu/lb; ascending powers of x. */
  enthalpy: readonly number[];
}

/**
 * Water at 101.325 kPa. Least-squares fits (Chebyshev-spaced, 32 to 122 F) to IAPWS-IF97 region 1; largest relative
 * departure 5e-7 in density and 2e-6 in specific heat. 0.6 MPa in place of 0.1 moves the trade factor by at most 0.03 %.
 * Source: IAPWS R7-97(2012), equations 7 and table 2; made by fixtures/reference/if97.ts.
 */
const WATER_BASE_F = 60;
const WATER_SCALE_F = 30;
const WATER_DENSITY_KG_M3 = [
  999.0158075, -2.621678642, -1.612968053, 0.2171009264, -0.04285823562, 0.005432259764,
] as const;
const WATER_SPECIFIC_HEAT = [
  1.00041392, -0.00394991593, 0.00254658053, -0.00115895162, 0.000530592731, -0.000160354521, 0.0000223221502,
] as const;
/** Enthalpy of water at 60 F and 101.325 kPa, Btu/lb; zero of IF97 (triple-point liquid). */
const WATER_ENTHALPY_AT_BASE = 28.119582185;

/** Melinder's form: y = SUM_i SUM_j c[i][j] (T - baseK)^i (x - baseShare)^j; T in kelvin, x the mass share of glycol. */
interface GlycolFit {
  baseK: number;
  baseShare: number;
  densityKgM3: readonly (readonly number[])[];
  specificHeatJ: readonly (readonly number[])[];
  /** Freezing point in kelvin; powers of (x - baseShare) only. */
  freezeK: readonly number[];
}

/** Source: A. Melinder, Properties of Secondary Working Fluids for Indirect Systems, IIR 2010; -20 (or freezing) to 40 C. */
const ETHYLENE_GLYCOL: GlycolFit = {
  baseK: 304.878,
  baseShare: 0.308462,
  densityKgM3: [
    [1034.0, 131.1, 0.749, -106.2, -96.23, 489.1],
    [-0.4781, -0.6876, 0.7855, 1.229, -7.211],
    [-0.002692, 0.004805, -0.003995, -0.01153],
    [4.725e-6, 1.69e-6, 4.982e-5],
  ],
  specificHeatJ: [
    [3737, -1799, -993.3, 2610, 1537, -16180],
    [2.93, 10.46, 3.516, -1.189, -42.72],
    [-0.004675, -0.04147, 0.05109, -0.1643],
    [-1.389e-5, 1.847e-5, -7.138e-4],
  ],
  freezeK: [257.9, -80.8, -133.4, -72.93, 100.6, 11.4],
};

/** Source: as for ethylene glycol. */
const PROPYLENE_GLYCOL: GlycolFit = {
  baseK: 305.8583,
  baseShare: 0.307031,
  densityKgM3: [
    [1018, 76.04, -24.98, -155.0, -113.1, 234.2],
    [-0.5406, -0.945, 0.27, 2.829, -2.221],
    [-0.002666, 0.005541, -0.004018, -0.007175],
    [1.347e-5, -1.343e-5, 3.376e-5],
  ],
  specificHeatJ: [
    [3882, -1304, -1598, 353.9, 5000, -4959],
    [2.699, 5.07, 0.9534, 31.02, -71.35],
    [-0.001659, -0.004752, 0.1167, -0.295],
    [-1.032e-5, 1.522e-4, -4.87e-4],
  ],
  freezeK: [259.9, -66.31, -109.4, -228.3, -340.9, 146.5],
};

/** Polynomial with ascending coefficients at x, by Horner's rule. */
export function polynomial(coefficients: readonly number[], x: number): number {
  let value = 0;
  for (let power = coefficients.length - 1; power >= 0; power -= 1) value = value * x + (coefficients[power] as number);
  return value;
}

/** Integral of specific heat over temperature: constant + scaleF * SUM c[i] x^(i+1) / (i+1). */
function integrate(specificHeat: readonly number[], scaleF: number, constant: number): number[] {
  return [constant, ...specificHeat.map((coefficient, power) => (scaleF * coefficient) / (power + 1))];
}

function waterCurves(): FluidCurves {
  return {
    baseF: WATER_BASE_F,
    scaleF: WATER_SCALE_F,
    density: WATER_DENSITY_KG_M3.map((coefficient) => coefficient * LB_PER_GALLON),
    specificHeat: WATER_SPECIFIC_HEAT,
    enthalpy: integrate(WATER_SPECIFIC_HEAT, WATER_SCALE_F, WATER_ENTHALPY_AT_BASE),
  };
}

function glycolCurves(fit: GlycolFit, massPercent: number): FluidCurves {
  const share = massPercent / 100 - fit.baseShare;
  const scaleF = 1.8; // x then counts kelvin from the fit's base
  const density = fit.densityKgM3.map((row) => polynomial(row, share) * LB_PER_GALLON);
  const specificHeat = fit.specificHeatJ.map((row) => polynomial(row, share) / BTU_PER_LB_F_SI);
  const baseF = (fit.baseK - 273.15) * 1.8 + 32;
  const raw = integrate(specificHeat, scaleF, 0);
  // The zero of a glycol's enthalpy is free; 32 F is the usual one.
  raw[0] = -polynomial(raw, (32 - baseF) / scaleF);
  return { baseF, scaleF, density, specificHeat, enthalpy: raw };
}

function glycolFit(fluid: Fluid): GlycolFit {
  if (!(fluid.massPercent >= 0 && fluid.massPercent <= 60)) {
    throw new RangeError(`fluid: glycol mass percent must be 0 to 60, got ${fluid.massPercent}`);
  }
  return fluid.kind === 'ethylene-glycol' ? ETHYLENE_GLYCOL : PROPYLENE_GLYCOL;
}

const WATER_CURVES = waterCurves();
const glycolCache = new Map<string, FluidCurves>();

/**
 * The fluid's property polynomials, for loops that evaluate many temperatures of one fluid.
 *
 * Throws  RangeError when a glycol's mass percent is outside 0 to 60 (the fits end there).
 */
export function fluidCurves(fluid: Fluid): FluidCurves {
  if (fluid.kind === 'water') return WATER_CURVES;
  const key = `${fluid.kind} ${fluid.massPercent}`;
  let curves = glycolCache.get(key);
  if (!curves) glycolCache.set(key, (curves = glycolCurves(glycolFit(fluid), fluid.massPercent)));
  return curves;
}

/** Density from ready curves. Units: deg F in, lb per US gallon out. Gaps: NaN in, NaN out. */
export const densityFromCurves = (tempF: number, curves: FluidCurves): number =>
  polynomial(curves.density, (tempF - curves.baseF) / curves.scaleF);

/** Specific enthalpy from ready curves. Units: deg F in, Btu/lb out. Gaps: NaN in, NaN out. */
export const enthalpyFromCurves = (tempF: number, curves: FluidCurves): number =>
  polynomial(curves.enthalpy, (tempF - curves.baseF) / curves.scaleF);

/** Specific heat from ready curves. Units: deg F in, Btu/(lb F) out. Gaps: NaN in, NaN out. */
export const specificHeatFromCurves = (tempF: number, curves: FluidCurves): number =>
  polynomial(curves.specificHeat, (tempF - curves.baseF) / curves.scaleF);

/** Temperature of a specific enthalpy: Newton's method on h(T) = h, whose slope is cp. Units: Btu/lb in, deg F out. */
export function tempFFromCurves(enthalpyBtuPerLb: number, curves: FluidCurves): number {
  // cp varies by under 2 % in range, so the start is within a few degrees and two steps reach 1e-9 F.
  const start = curves.baseF;
  let tempF = start + (enthalpyBtuPerLb - enthalpyFromCurves(start, curves)) / specificHeatFromCurves(start, curves);
  for (let step = 0; step < 2; step += 1) {
    tempF += (enthalpyBtuPerLb - enthalpyFromCurves(tempF, curves)) / specificHeatFromCurves(tempF, curves);
  }
  return tempF;
}

/**
 * Density of the loop's fluid.
 *
 * Units   deg F; lb per US gallon.
 * Gaps    NaN in, NaN out. Outside the fits' range (water 32 to 122 F, glycols freezing to 104 F) the curve is continued.
 * Throws  RangeError when a glycol's mass percent is outside 0 to 60.
 * Source  water: IAPWS R7-97(2012), region 1, 101.325 kPa; glycols: A. Melinder, IIR 2010.
 */
export const densityLbPerGallon = (tempF: number, fluid: Fluid): number => densityFromCurves(tempF, fluidCurves(fluid));

/**
 * Specific heat at constant pressure of the loop's fluid.
 *
 * Units   deg F; Btu/(lb F). Gaps, Throws, Source as densityLbPerGallon.
 */
export const specificHeatBtuPerLbF = (tempF: number, fluid: Fluid): number =>
  specificHeatFromCurves(tempF, fluidCurves(fluid));

/**
 * Specific enthalpy of the loop's fluid; only differences carry meaning (glycols count from 32 F).
 *
 * Units   deg F; Btu/lb. Gaps, Throws, Source as densityLbPerGallon.
 */
export const enthalpyBtuPerLb = (tempF: number, fluid: Fluid): number => enthalpyFromCurves(tempF, fluidCurves(fluid));

/**
 * Temperature at which the fluid has a specific enthalpy; the inverse of enthalpyBtuPerLb to better than 1e-6 F.
 *
 * Units   Btu/lb; deg F. Gaps, Throws, Source as densityLbPerGallon.
 */
export const tempFFromEnthalpy = (enthalpy: number, fluid: Fluid): number =>
  tempFFromCurves(enthalpy, fluidCurves(fluid));

/**
 * The trade's "500": heat carried by one gallon a minute for each degree, 60 * density * specific heat.
 *
 * Units   deg F; Btu/h per gpm per F. Gaps, Throws, Source as densityLbPerGallon.
 */
export function heatFactorBtuPerHourPerGpmF(tempF: number, fluid: Fluid): number {
  const curves = fluidCurves(fluid);
  return 60 * densityFromCurves(tempF, curves) * specificHeatFromCurves(tempF, curves);
}

/**
 * Cooling carried by a flow between two temperatures: 60 * density at the meter * gpm * (h(return) - h(supply)) / 12000.
 *
 * Units   gpm, deg F; tons of refrigeration, positive when the return is the warmer.
 * Gaps    NaN in, NaN out. Without `meterTempF` the meter is taken to sit in the supply pipe.
 * Throws  as densityLbPerGallon.
 * Source  steady-flow energy balance.
 */
export function tonsFromFlow(
  flowGpm: number,
  supplyF: number,
  returnF: number,
  fluid: Fluid,
  meterTempF: number = supplyF,
): number {
  const curves = fluidCurves(fluid);
  const riseBtuPerLb = enthalpyFromCurves(returnF, curves) - enthalpyFromCurves(supplyF, curves);
  return (60 * densityFromCurves(meterTempF, curves) * flowGpm * riseBtuPerLb) / TON_BTU_PER_HOUR;
}

/**
 * Freezing point of the fluid; the property curves do not fail below it, so callers compare.
 *
 * Units   deg F.
 * Throws  as densityLbPerGallon.
 * Source  water 32 F at 101.325 kPa; glycols: A. Melinder, IIR 2010.
 */
export function freezingPointF(fluid: Fluid): number {
  if (fluid.kind === 'water') return 32;
  const fit = glycolFit(fluid);
  return (polynomial(fit.freezeK, fluid.massPercent / 100 - fit.baseShare) - 273.15) * 1.8 + 32;
}
