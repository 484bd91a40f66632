import { at, FLOWING_SHARE, pumpOn } from './units-on';
import type { Measurements, PlantModel, UnitModel } from './types';

/**
 * How long water takes between the sensors of one plant room, in minutes: a ramp of r F/min is worth r times this in
 * temperature doubt (common practice, no source; a 5-minute lag in a 0.2 F/min ramp is a false difference of 1 F).
 */
const TRANSPORT_LAG_MINUTES = 2;
/** A meter's doubt never falls below this share of design flow: cut-off and zero drift (common practice, no source). */
const FLOW_FLOOR_SHARE = 0.005;
/** The common pipe is as wide as a main and runs slowly: its meter is near cut-off more often (common practice). */
const BYPASS_FLOOR_SHARE = 0.01;

/** The measured state of one slot, NaN where missing. One such object is filled again for each slot. */
export interface SlotInputs {
  primarySupplyF: number;
  primarySupplySigma: number;
  primaryReturnF: number;
  primaryReturnSigma: number;
  secondarySupplyF: number;
  secondarySupplySigma: number;
  secondaryReturnF: number;
  secondaryReturnSigma: number;
  bypassF: number;
  bypassFSigma: number;
  primaryFlowGpm: number;
  primaryFlowSigma: number;
  secondaryFlowGpm: number;
  secondaryFlowSigma: number;
  bypassFlowGpm: number;
  bypassFlowSigma: number;
  bypassUnsignedGpm: number;
  bypassUnsignedSigma: number;
}

export const emptySlotInputs = (): SlotInputs => ({
  primarySupplyF: Number.NaN,
  primarySupplySigma: Number.NaN,
  primaryReturnF: Number.NaN,
  primaryReturnSigma: Number.NaN,
  secondarySupplyF: Number.NaN,
  secondarySupplySigma: Number.NaN,
  secondaryReturnF: Number.NaN,
  secondaryReturnSigma: Number.NaN,
  bypassF: Number.NaN,
  bypassFSigma: Number.NaN,
  primaryFlowGpm: Number.NaN,
  primaryFlowSigma: Number.NaN,
  secondaryFlowGpm: Number.NaN,
  secondaryFlowSigma: Number.NaN,
  bypassFlowGpm: Number.NaN,
  bypassFlowSigma: Number.NaN,
  bypassUnsignedGpm: Number.NaN,
  bypassUnsignedSigma: Number.NaN,
});

/** Design flow of the production side: the units' flows together. */
export function designPrimaryFlowGpm(plant: PlantModel): number {
  let total = 0;
  for (const unit of plant.units) total += unit.flowGpm;
  return total;
}

/** Root of the sum of two squares; Math.hypot is several times slower and this is the inner loop. */
export const quadrature = (a: number, b: number): number => Math.sqrt(a * a + b * b);

/** Sensor doubt and the doubt of a moving temperature, in quadrature. A missing neighbour says nothing about a ramp. */
function temperatureSigma(
  channel: Float64Array | undefined,
  slot: number,
  sigmaF: number,
  stepMinutes: number,
): number {
  if (!channel || slot === 0 || slot + 1 >= channel.length) return sigmaF;
  const rise = (channel[slot + 1] as number) - (channel[slot - 1] as number);
  if (rise !== rise) return sigmaF;
  return quadrature(sigmaF, (TRANSPORT_LAG_MINUTES * rise) / (2 * stepMinutes));
}

const flowSigma = (flowGpm: number, percent: number, floorGpm: number): number =>
  quadrature((flowGpm * percent) / 100, floorGpm);

/** Flow through one unit: its meter, else its rated flow while its pump runs. `rated` says which. */
function unitFlow(measurements: Measurements, unit: UnitModel, index: number, slot: number): number {
  if (measurements.unitFlowGpm[index]) return at(measurements.unitFlowGpm[index], slot);
  const on = pumpOn(measurements, unit, index, slot);
  return on * unit.flowGpm;
}

/** Sum over the units, metered or rated; one missing makes it missing. Rated flows share one error, so they add plainly. */
function primaryFlowFromUnits(measurements: Measurements, plant: PlantModel, slot: number, out: SlotInputs): void {
  const percent = plant.sensors.flowSigmaPercent;
  let meteredGpm = 0;
  let ratedGpm = 0;
  for (let index = 0; index < plant.units.length; index += 1) {
    const flowGpm = unitFlow(measurements, plant.units[index] as UnitModel, index, slot);
    if (measurements.unitFlowGpm[index]) meteredGpm += Math.max(0, flowGpm);
    else ratedGpm += flowGpm;
  }
  out.primaryFlowGpm = meteredGpm + ratedGpm;
  out.primaryFlowSigma = quadrature(
    flowSigma(meteredGpm, percent.primaryFlow, FLOW_FLOOR_SHARE * designPrimaryFlowGpm(plant)),
    (ratedGpm * percent.ratedFlow) / 100,
  );
}

/** Flow-weighted temperature over the units that carry water; a missing one of them makes it missing. */
function unitMixF(
  measurements: Measurements,
  plant: PlantModel,
  temperatures: readonly (Float64Array | undefined)[],
  slot: number,
): number {
  let flowSum = 0;
  let heatSum = 0;
  for (let index = 0; index < plant.units.length; index += 1) {
    const unit = plant.units[index] as UnitModel;
    const flowGpm = unitFlow(measurements, unit, index, slot);
    if (flowGpm <= FLOWING_SHARE * unit.flowGpm) continue;
    flowSum += flowGpm;
    heatSum += flowGpm * at(temperatures[index], slot);
  }
  return flowSum > 0 ? heatSum / flowSum : Number.NaN;
}

/**
 * Fills `out` with the loop's state at a slot: the loop's own sensors where they say something, else what the units'
 * sensors make of it (flow-weighted leaving and entering temperatures, summed or rated flows with the wider sigma).
 *
 * Units   deg F, gpm; sigmas in the unit of their value. Gaps: NaN where nothing says anything.
 */
export function readSlot(measurements: Measurements, plant: PlantModel, slot: number, out: SlotInputs): void {
  const step = measurements.stepMinutes;
  const sigmaF = plant.sensors.temperatureSigmaF;
  const percent = plant.sensors.flowSigmaPercent;

  out.primarySupplyF = at(measurements.primarySupplyF, slot);
  out.primarySupplySigma = temperatureSigma(measurements.primarySupplyF, slot, sigmaF.primarySupplyTemp, step);
  if (out.primarySupplyF !== out.primarySupplyF) {
    out.primarySupplyF = unitMixF(measurements, plant, measurements.unitLeavingF, slot);
    out.primarySupplySigma = sigmaF.primarySupplyTemp;
  }
  out.primaryReturnF = at(measurements.primaryReturnF, slot);
  out.primaryReturnSigma = temperatureSigma(measurements.primaryReturnF, slot, sigmaF.primaryReturnTemp, step);
  if (out.primaryReturnF !== out.primaryReturnF) {
    out.primaryReturnF = unitMixF(measurements, plant, measurements.unitEnteringF, slot);
    out.primaryReturnSigma = sigmaF.primaryReturnTemp;
  }
  out.secondarySupplyF = at(measurements.secondarySupplyF, slot);
  out.secondarySupplySigma = temperatureSigma(measurements.secondarySupplyF, slot, sigmaF.secondarySupplyTemp, step);
  out.secondaryReturnF = at(measurements.secondaryReturnF, slot);
  out.secondaryReturnSigma = temperatureSigma(measurements.secondaryReturnF, slot, sigmaF.secondaryReturnTemp, step);
  out.bypassF = at(measurements.bypassF, slot);
  out.bypassFSigma = temperatureSigma(measurements.bypassF, slot, sigmaF.bypassTemp, step);

  const primaryFlowGpm = at(measurements.primaryFlowGpm, slot);
  if (primaryFlowGpm === primaryFlowGpm) {
    out.primaryFlowGpm = Math.max(0, primaryFlowGpm);
    out.primaryFlowSigma = flowSigma(
      primaryFlowGpm,
      percent.primaryFlow,
      FLOW_FLOOR_SHARE * designPrimaryFlowGpm(plant),
    );
  } else {
    primaryFlowFromUnits(measurements, plant, slot, out);
  }
  const designFlowGpm = plant.distributionPumps.flowGpm;
  // A main cannot run backwards past its pump: a slightly negative reading is a zero error.
  out.secondaryFlowGpm = at(measurements.secondaryFlowGpm, slot);
  if (out.secondaryFlowGpm < 0) out.secondaryFlowGpm = 0;
  out.secondaryFlowSigma = flowSigma(out.secondaryFlowGpm, percent.secondaryFlow, FLOW_FLOOR_SHARE * designFlowGpm);
  out.bypassFlowGpm = at(measurements.bypassFlowGpm, slot);
  out.bypassFlowSigma = flowSigma(out.bypassFlowGpm, percent.bypassFlow, BYPASS_FLOOR_SHARE * designFlowGpm);
  out.bypassUnsignedGpm = Math.abs(at(measurements.bypassFlowUnsignedGpm, slot));
  out.bypassUnsignedSigma = flowSigma(out.bypassUnsignedGpm, percent.bypassFlow, BYPASS_FLOOR_SHARE * designFlowGpm);
}
