import { at, unitsOnCount } from './units-on';
import type { Measurements, PlantModel } from './types';
import { STATES } from './types';

const UNKNOWN = STATES.indexOf('unknown');
const RUNNING = STATES.indexOf('running');
const STARTING = STATES.indexOf('starting');
const COASTING = STATES.indexOf('coasting');
const OFF = STATES.indexOf('off');

/** After the first unit comes on, the loop is being filled with cold water (common practice: 10 to 15 minutes). */
const STARTING_MINUTES = 15;
/** A warm loop may be pulled down for longer, as long as supply is this far above its set-point; then it is a fault. */
const PULL_DOWN_F = 6;
const PULL_DOWN_MINUTES = 60;
/** Flow below this share of design is no flow. */
const NO_FLOW_SHARE = 0.05;
/** Without status, a rise of this much from supply to return means that cooling is made; below the second, that none is. */
const COOLING_RISE_F = 2;
const IDLE_RISE_F = 0.75;

/** Smallest unit's design flow: below a share of it the primary side stands still. */
function smallestUnitFlowGpm(plant: PlantModel): number {
  let smallest = Number.POSITIVE_INFINITY;
  for (const unit of plant.units) smallest = Math.min(smallest, unit.flowGpm);
  return smallest;
}

/** Rise from the coldest to the warmest end of the loop that is measured, F; NaN when either end is missing. */
function loopRiseF(measurements: Measurements, slot: number): number {
  const primarySupplyF = at(measurements.primarySupplyF, slot);
  const coldF = primarySupplyF === primarySupplyF ? primarySupplyF : at(measurements.secondarySupplyF, slot);
  const secondaryReturnF = at(measurements.secondaryReturnF, slot);
  const warmF = secondaryReturnF === secondaryReturnF ? secondaryReturnF : at(measurements.primaryReturnF, slot);
  return warmF - coldF;
}

/** 1 when production cools, 0 when it does not, NaN when nothing measured tells. */
function producing(measurements: Measurements, plant: PlantModel, noPrimaryGpm: number, slot: number): number {
  const on = unitsOnCount(measurements, plant, slot);
  if (on === on) return on > 0 ? 1 : 0;
  const primaryFlowGpm = at(measurements.primaryFlowGpm, slot);
  if (primaryFlowGpm <= noPrimaryGpm) return 0;
  const riseF = loopRiseF(measurements, slot);
  if (riseF >= COOLING_RISE_F) return 1;
  // Temperatures close together without a flow may be a light load or standing water: nothing is decided.
  if (primaryFlowGpm !== primaryFlowGpm) return Number.NaN;
  if (riseF < IDLE_RISE_F) return 0;
  // A pumped primary side without temperatures is taken to run; between the two rises nothing is decided.
  return riseF !== riseF ? 1 : Number.NaN;
}

/** 1 when the distribution side is pumped, 0 when not, NaN when nothing measured tells. */
function distributing(measurements: Measurements, plant: PlantModel, slot: number): number {
  const secondaryFlowGpm = at(measurements.secondaryFlowGpm, slot);
  if (secondaryFlowGpm === secondaryFlowGpm) {
    return secondaryFlowGpm > NO_FLOW_SHARE * plant.distributionPumps.flowGpm ? 1 : 0;
  }
  const powerKw = at(measurements.distributionPumpPowerKw, slot);
  if (powerKw === powerKw) return powerKw > 0.5 ? 1 : 0;
  return Number.NaN;
}

/**
 * The plant's state at each slot, as codes of STATES: off, starting (the first 15 minutes after the first unit comes on,
 * up to 60 while supply is more than 6 F above its set-point), running, coasting (units off, distribution pumped), unknown.
 *
 * Shapes  `state` has length n and is overwritten.
 * Gaps    judged only from measured status, power, flow and temperatures; nothing measured: unknown. The first slot, and
 *         one after unknown ones, counts as running at once: nothing says that the plant has just started.
 * Throws  RangeError when `state` has another length.
 * Source  common practice, no source (limits above).
 */
export function plantStates(measurements: Measurements, plant: PlantModel, state: Float64Array): void {
  if (state.length !== measurements.n) {
    throw new RangeError(`plantStates: state has length ${state.length}, the record ${measurements.n}`);
  }
  const noPrimaryGpm = NO_FLOW_SHARE * smallestUnitFlowGpm(plant);
  const step = measurements.stepMinutes;
  let minutesOn = Number.POSITIVE_INFINITY;
  for (let slot = 0; slot < measurements.n; slot += 1) {
    const cooling = producing(measurements, plant, noPrimaryGpm, slot);
    if (cooling === 1) {
      state[slot] = isStarting(measurements, plant, slot, minutesOn) ? STARTING : RUNNING;
      minutesOn += step;
    } else if (cooling === 0) {
      state[slot] = distributing(measurements, plant, slot) === 1 ? COASTING : OFF;
      minutesOn = 0;
    } else {
      state[slot] = UNKNOWN;
      minutesOn = Number.POSITIVE_INFINITY;
    }
  }
}

function isStarting(measurements: Measurements, plant: PlantModel, slot: number, minutesOn: number): boolean {
  if (minutesOn < STARTING_MINUTES) return true;
  if (!(minutesOn < PULL_DOWN_MINUTES)) return false;
  const setpointF = at(measurements.supplySetpointF, slot);
  const target = setpointF === setpointF ? setpointF : plant.productionSupplyF;
  return at(measurements.primarySupplyF, slot) > target + PULL_DOWN_F;
}
