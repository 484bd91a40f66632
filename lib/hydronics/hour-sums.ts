import { at, unitOn } from './units-on';
import { DIRECTIONS, REASONS, STATES } from './types';
import type { Estimates, Measurements, PlantModel, UnitModel } from './types';

const RUNNING = STATES.indexOf('running');
const UNKNOWN_STATE = STATES.indexOf('unknown');
const REVERSE = DIRECTIONS.indexOf('reverse');
const FORWARD = DIRECTIONS.indexOf('forward');
const STILL = DIRECTIONS.indexOf('still');
const CONTRADICT = REASONS.indexOf('sensors contradict');
/** A building bridge blends by design: only supply warmer than its design blend by more than this is a fault. */
const BRIDGE_TOLERANCE_F = 0.5;

const orElse = (value: number, other: number): number => (Number.isNaN(value) ? other : value);

/** Mean of what was there: sum and count, NaN when nothing was. */
class Mean {
  private sum = 0;
  private count = 0;
  add(value: number): void {
    if (Number.isNaN(value)) return;
    this.sum += value;
    this.count += 1;
  }
  get value(): number {
    return this.count > 0 ? this.sum / this.count : Number.NaN;
  }
}

/** What an hour's running intervals add up to. Means are over time; ratios of sums, never means of ratios. */
export interface HourSums {
  slots: number;
  runningMinutes: number;
  reverseMinutes: number;
  forwardMinutes: number;
  stillMinutes: number;
  unknownMinutes: number;
  contradictingMinutes: number;
  loadTons: number;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  bypassFlowGpm: number;
  primarySupplyF: number;
  blendedSupplyF: number;
  blendedSupplyMaxF: number;
  setpointF: number;
  reverseFlowGpm: number;
  reverseFlowMaxGpm: number;
  reverseProbability: number;
  /** Load and flow over the intervals that have both; then plain means of degrees, for records without flow. */
  pairedLoadTons: number;
  pairedFlowGpm: number;
  meanLoadDeltaTF: number;
  /** Production delta-T weighted by primary flow, or the plain mean without flow. */
  productionDeltaTF: number;
  /** Units that ran for most of the running intervals; undefined when no unit says anything. */
  unitsOn: UnitModel[] | undefined;
  quality: number;
}

/** Sums slots [from, to) of a record; slots outside it count as missing. */
export function sumHour(
  estimates: Estimates,
  measurements: Measurements,
  plant: PlantModel,
  from: number,
  to: number,
): HourSums {
  const step = measurements.stepMinutes;
  // A variable-primary plant whose bypass nobody measures is one loop: its pumps serve both sides.
  const forwardOnly = plant.arrangement === 'variable-primary';
  const minutes = { running: 0, reverse: 0, forward: 0, still: 0, unknown: 0, contradicting: 0 };
  const load = new Mean();
  const primaryFlow = new Mean();
  const secondaryFlow = new Mean();
  const bypass = new Mean();
  const primarySupply = new Mean();
  const blended = new Mean();
  const setpoint = new Mean();
  const reverseFlow = new Mean();
  const probability = new Mean();
  const pairedLoad = new Mean();
  const pairedFlow = new Mean();
  const loadDeltaT = new Mean();
  const productionDeltaT = new Mean();
  const productionHeat = new Mean();
  const productionWeight = new Mean();
  let blendedMaxF = Number.NaN;
  let reverseMaxGpm = Number.NaN;
  let quality = 0;
  for (let slot = Math.max(0, from); slot < Math.min(to, measurements.n); slot += 1) {
    quality += estimates.quality[slot] as number;
    if (estimates.state[slot] === UNKNOWN_STATE) minutes.unknown += step;
    if (estimates.state[slot] !== RUNNING) continue;
    minutes.running += step;
    const loadTons = estimates.load_tons[slot] as number;
    const primaryGpm = estimates.primary_flow_gpm[slot] as number;
    const blendedF = estimates.blended_supply_f[slot] as number;
    const productionF = estimates.production_delta_t_f[slot] as number;
    const bypassGpm = estimates.bypass_flow_gpm[slot] as number;
    const oneLoop = forwardOnly && Number.isNaN(bypassGpm);
    const secondaryGpm = orElse(estimates.secondary_flow_gpm[slot] as number, oneLoop ? primaryGpm : Number.NaN);
    load.add(loadTons);
    primaryFlow.add(primaryGpm);
    secondaryFlow.add(secondaryGpm);
    bypass.add(bypassGpm);
    primarySupply.add(estimates.primary_supply_f[slot] as number);
    blended.add(blendedF);
    setpoint.add(at(measurements.supplySetpointF, slot));
    probability.add(estimates.reverse_probability[slot] as number);
    loadDeltaT.add(orElse(estimates.load_delta_t_f[slot] as number, oneLoop ? productionF : Number.NaN));
    productionDeltaT.add(productionF);
    if (!Number.isNaN(loadTons * secondaryGpm)) {
      pairedLoad.add(loadTons);
      pairedFlow.add(secondaryGpm);
    }
    if (!Number.isNaN(productionF * primaryGpm)) {
      productionHeat.add(productionF * primaryGpm);
      productionWeight.add(primaryGpm);
    }
    if (!(blendedF <= blendedMaxF) && !Number.isNaN(blendedF)) blendedMaxF = blendedF;

    const direction = estimates.direction[slot];
    if (direction === FORWARD) minutes.forward += step;
    else if (direction === STILL) minutes.still += step;
    else if (direction !== REVERSE) {
      minutes.unknown += step;
      if (estimates.reason[slot] === CONTRADICT) minutes.contradicting += step;
    } else if (!isDesignBlend(plant, blendedF)) {
      minutes.reverse += step;
      const magnitudeGpm = -(estimates.bypass_flow_gpm[slot] as number);
      reverseFlow.add(magnitudeGpm);
      if (!(magnitudeGpm <= reverseMaxGpm) && !Number.isNaN(magnitudeGpm)) reverseMaxGpm = magnitudeGpm;
    }
  }
  return {
    slots: to - from,
    runningMinutes: minutes.running,
    reverseMinutes: minutes.reverse,
    forwardMinutes: minutes.forward,
    stillMinutes: minutes.still,
    unknownMinutes: minutes.unknown,
    contradictingMinutes: minutes.contradicting,
    loadTons: load.value,
    primaryFlowGpm: primaryFlow.value,
    secondaryFlowGpm: secondaryFlow.value,
    bypassFlowGpm: bypass.value,
    primarySupplyF: primarySupply.value,
    blendedSupplyF: blended.value,
    blendedSupplyMaxF: blendedMaxF,
    setpointF: setpoint.value,
    reverseFlowGpm: reverseFlow.value,
    reverseFlowMaxGpm: reverseMaxGpm,
    reverseProbability: probability.value,
    pairedLoadTons: pairedLoad.value,
    pairedFlowGpm: pairedFlow.value,
    meanLoadDeltaTF: loadDeltaT.value,
    productionDeltaTF:
      productionWeight.value > 0 ? productionHeat.value / productionWeight.value : productionDeltaT.value,
    unitsOn: unitsOnFor(estimates, measurements, plant, from, to),
    quality: to > from ? quality / (to - from) : 0,
  };
}

/** Return water up to the design blend is what a building bridge is for. */
const isDesignBlend = (plant: PlantModel, blendedF: number): boolean =>
  plant.arrangement === 'building-bridge' &&
  plant.blendedSupplyF !== null &&
  blendedF <= plant.blendedSupplyF + BRIDGE_TOLERANCE_F;

/** The units that were on in more than half of the running intervals in which they said anything. */
function unitsOnFor(
  estimates: Estimates,
  measurements: Measurements,
  plant: PlantModel,
  from: number,
  to: number,
): UnitModel[] | undefined {
  const shares = plant.units.map((unit, index) => {
    const on = new Mean();
    for (let slot = Math.max(0, from); slot < Math.min(to, measurements.n); slot += 1) {
      if (estimates.state[slot] === RUNNING) on.add(unitOn(measurements, unit, index, slot));
    }
    return on.value;
  });
  if (shares.every((share) => Number.isNaN(share))) return undefined;
  return plant.units.filter((_, index) => (shares[index] ?? 0) > 0.5);
}
