/** Exponents of the two film coefficients with flow (Modelica Buildings library, DryCoilEffectivenessNTU, documentation). */
const AIR_EXPONENT = 0.8;
const WATER_EXPONENT = 0.85;
/** A valve that opens further than this multiple of design flow has nothing left to give. */
const MAX_WATER_FRACTION = 10;
const MIN_WATER_FRACTION = 1e-4;

/** One coil that stands for all of the load side, at its design point. Capacity rates in Btu/(h F). */
export interface CoilModel {
  /** Overall conductance at design flows, Btu/(h F). */
  uaDesign: number;
  waterCapacityDesign: number;
  /** Effective air capacity rate, latent heat included: design cooling over the design air temperature drop. */
  airCapacityDesign: number;
  enteringAirF: number;
  leavingAirF: number;
  enteringWaterF: number;
  /** Air side's share of the thermal resistance at design. */
  airResistanceShare: number;
}

/** A coil's working point. */
export interface CoilPoint {
  ua: number;
  effectiveness: number;
  heatBtuPerHour: number;
  leavingWaterF: number;
  leavingAirF: number;
  waterDeltaTF: number;
}

/**
 * Effectiveness of a counterflow heat exchanger: (1 - e^(-NTU(1-Cr))) / (1 - Cr e^(-NTU(1-Cr))); Cr = 1: NTU / (1 + NTU).
 *
 * Units   none. Gaps: NaN in, NaN out.
 * Throws  RangeError when the capacity ratio is outside 0 to 1 or NTU is negative.
 * Source  W. M. Kays, A. L. London, Compact Heat Exchangers, 3rd ed. 1984, ch. 2; common to all texts.
 */
export function counterflowEffectiveness(ntu: number, capacityRatio: number): number {
  if (ntu < 0 || capacityRatio < 0 || capacityRatio > 1) {
    throw new RangeError(`counterflowEffectiveness: NTU ${ntu}, capacity ratio ${capacityRatio}`);
  }
  const gap = 1 - capacityRatio;
  // Near Cr = 1 numerator and denominator both vanish; expm1 keeps their digits.
  if (gap < 1e-9) return ntu / (1 + ntu);
  const drop = -Math.expm1(-ntu * gap);
  return drop / (gap + capacityRatio * drop);
}

/** NTU of a counterflow exchanger from its effectiveness: the inverse of counterflowEffectiveness. Source as there. */
export function counterflowNtu(effectiveness: number, capacityRatio: number): number {
  const gap = 1 - capacityRatio;
  if (gap < 1e-9) return effectiveness / (1 - effectiveness);
  return Math.log((1 - capacityRatio * effectiveness) / (1 - effectiveness)) / gap;
}

/**
 * The counterflow coil that makes the design heat at the design temperatures.
 *
 * Units   Btu/h, deg F. Throws  RangeError when the water would have to leave warmer than the air enters.
 * Source  effectiveness-NTU, as counterflowEffectiveness.
 */
export function coilFromDesign(design: {
  heatBtuPerHour: number;
  enteringAirF: number;
  leavingAirF: number;
  enteringWaterF: number;
  waterDeltaTF: number;
  airResistanceShare: number;
}): CoilModel {
  const { heatBtuPerHour, enteringAirF, leavingAirF, enteringWaterF, waterDeltaTF } = design;
  const approachF = enteringAirF - enteringWaterF;
  if (!(waterDeltaTF < approachF) || !(leavingAirF > enteringWaterF)) {
    throw new RangeError(
      `coilFromDesign: water ${enteringWaterF} F rising ${waterDeltaTF} F cannot cool air from ${enteringAirF} to ${leavingAirF} F`,
    );
  }
  const waterCapacityDesign = heatBtuPerHour / waterDeltaTF;
  const airCapacityDesign = heatBtuPerHour / (enteringAirF - leavingAirF);
  const least = Math.min(waterCapacityDesign, airCapacityDesign);
  const ratio = least / Math.max(waterCapacityDesign, airCapacityDesign);
  return {
    uaDesign: counterflowNtu(heatBtuPerHour / (least * approachF), ratio) * least,
    waterCapacityDesign,
    airCapacityDesign,
    enteringAirF,
    leavingAirF,
    enteringWaterF,
    airResistanceShare: design.airResistanceShare,
  };
}

/** Conductance at part flows: UA0 / (ra fa^-0.8 + (1 - ra) fw^-0.85). */
function conductance(coil: CoilModel, waterFraction: number, airFraction: number): number {
  const air = coil.airResistanceShare * airFraction ** -AIR_EXPONENT;
  const water = (1 - coil.airResistanceShare) * waterFraction ** -WATER_EXPONENT;
  return coil.uaDesign / (air + water);
}

/** Heat the coil takes up, Btu/h: effectiveness * Cmin * (entering air - entering water). */
function coilHeat(coil: CoilModel, waterFraction: number, airFraction: number, approachF: number): number {
  const water = waterFraction * coil.waterCapacityDesign;
  const air = airFraction * coil.airCapacityDesign;
  const least = Math.min(water, air);
  const ua = conductance(coil, waterFraction, airFraction);
  return counterflowEffectiveness(ua / least, least / Math.max(water, air)) * least * approachF;
}

/**
 * The coil's working point at given shares of design water and air flow.
 *
 * Units   shares 0 and up; deg F, Btu/h. Gaps: NaN in, NaN out.
 * Source  effectiveness-NTU with exponents 0.8 (air) and 0.85 (water).
 */
export function coilPoint(
  coil: CoilModel,
  waterFraction: number,
  airFraction: number,
  enteringAirF: number,
  enteringWaterF: number,
): CoilPoint {
  const approachF = enteringAirF - enteringWaterF;
  const heatBtuPerHour = coilHeat(coil, waterFraction, airFraction, approachF);
  const water = waterFraction * coil.waterCapacityDesign;
  const air = airFraction * coil.airCapacityDesign;
  const waterDeltaTF = heatBtuPerHour / water;
  return {
    ua: conductance(coil, waterFraction, airFraction),
    effectiveness: heatBtuPerHour / (Math.min(water, air) * approachF),
    heatBtuPerHour,
    leavingWaterF: enteringWaterF + waterDeltaTF,
    leavingAirF: enteringAirF - heatBtuPerHour / air,
    waterDeltaTF,
  };
}

/**
 * Share of design water flow at which a variable-air coil holds its design leaving air at a share of design load
 * (air share = load share, entering air fixed), by bisection on the logarithm of the flow.
 *
 * Units   shares of design; deg F.
 * Gaps    NaN in, NaN out. NaN also when no flow up to 10 times design holds the leaving air: the valve stands open.
 * Source  effectiveness-NTU with exponents 0.8 and 0.85; heat rises with water flow, so the root is the only one.
 */
export function waterFractionForLoad(coil: CoilModel, loadShare: number, enteringWaterF: number): number {
  const approachF = coil.enteringAirF - enteringWaterF;
  const needed = loadShare * coil.airCapacityDesign * (coil.enteringAirF - coil.leavingAirF);
  if (!(loadShare > 0) || !(approachF > 0)) return Number.NaN;
  if (coilHeat(coil, MAX_WATER_FRACTION, loadShare, approachF) < needed) return Number.NaN;
  let low = Math.log(MIN_WATER_FRACTION);
  let high = Math.log(MAX_WATER_FRACTION);
  while (high - low > 1e-8) {
    const middle = 0.5 * (low + high);
    if (coilHeat(coil, Math.exp(middle), loadShare, approachF) < needed) low = middle;
    else high = middle;
  }
  return Math.exp(0.5 * (low + high));
}
