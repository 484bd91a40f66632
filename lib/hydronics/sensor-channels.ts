import { freezingPointF } from './fluids';
import type { Measurements, PlantModel } from './types';

/** Chilled water below its freezing point by more than this is a wrong reading (allowance for the sensor's own error). */
const BELOW_FREEZING_F = 2;
/** Loops stand warm when plants are off; above this it is no loop (common practice, no source). */
const HIGHEST_TEMP_F = 110;
/** A meter may read this share of design below zero by its zero error (common practice, no source). */
const ZERO_ERROR_SHARE = 0.05;
/** No pump drives more than this times design flow through its loop (common practice, no source). */
const HIGHEST_FLOW_SHARE = 2.5;

/** Temperatures of the loop's own points and of the units. */
const LOOP_TEMPERATURES = {
  primarySupplyF: 'supply',
  primaryReturnF: 'return',
  secondarySupplyF: 'supply',
  secondaryReturnF: 'return',
  bypassF: 'bypass',
} as const;
const LOOP_FLOWS = {
  primaryFlowGpm: 'main',
  secondaryFlowGpm: 'main',
  bypassFlowGpm: 'bypass',
  bypassFlowUnsignedGpm: 'bypass',
} as const;

/** One sensor's channel with what it can show at all. */
export interface SensorChannel {
  /** Key of Measurements. */
  name: keyof Measurements;
  /** 1-based; 0 for the loop's own points. */
  unitIndex: number;
  quantity: 'temperature' | 'flow';
  place: 'supply' | 'return' | 'bypass' | 'main' | 'unit';
  values: Float64Array;
  /** Readings outside lo..hi, both included, cannot be; deg F or gpm. */
  lo: number;
  hi: number;
  /** Design flow at a flow meter, gpm; NaN for temperatures. */
  designGpm: number;
}

export const designPrimaryGpm = (plant: PlantModel): number =>
  plant.units.reduce((total, unit) => total + unit.flowGpm, 0);

/** Design flow at one of the loop's meters; the common pipe is as wide as the wider main. */
function designFlowGpm(plant: PlantModel, name: keyof typeof LOOP_FLOWS): number {
  if (name === 'primaryFlowGpm') return designPrimaryGpm(plant);
  if (name === 'secondaryFlowGpm') return plant.distributionPumps.flowGpm;
  return Math.max(designPrimaryGpm(plant), plant.distributionPumps.flowGpm);
}

function flowChannel(
  name: keyof Measurements,
  unitIndex: number,
  place: SensorChannel['place'],
  values: Float64Array,
  designGpm: number,
): SensorChannel {
  const hi = HIGHEST_FLOW_SHARE * designGpm;
  // Only the signed bypass meter may read well below zero.
  const lo = name === 'bypassFlowGpm' ? -hi : -ZERO_ERROR_SHARE * designGpm;
  return { name, unitIndex, quantity: 'flow', place, values, lo, hi, designGpm };
}

/**
 * The channels that carry a sensor of the loop or of a unit: temperatures and flows, of those that exist.
 *
 * Throws  RangeError when a channel has another length than the record, or the fluid's share of glycol is out of range.
 */
export function sensorChannels(measurements: Measurements, plant: PlantModel): SensorChannel[] {
  const channels: SensorChannel[] = [];
  const lo = freezingPointF(plant.fluid) - BELOW_FREEZING_F;
  const temperature = (
    name: keyof Measurements,
    unitIndex: number,
    place: SensorChannel['place'],
    values?: Float64Array,
  ) => {
    const range = { lo, hi: HIGHEST_TEMP_F, designGpm: Number.NaN };
    if (values) channels.push({ name, unitIndex, quantity: 'temperature', place, values, ...range });
  };
  for (const [name, place] of Object.entries(LOOP_TEMPERATURES) as [keyof typeof LOOP_TEMPERATURES, 'supply'][]) {
    temperature(name, 0, place, measurements[name]);
  }
  for (const [name, place] of Object.entries(LOOP_FLOWS) as [keyof typeof LOOP_FLOWS, 'main'][]) {
    const values = measurements[name];
    if (values) channels.push(flowChannel(name, 0, place, values, designFlowGpm(plant, name)));
  }
  plant.units.forEach((unit, index) => {
    temperature('unitLeavingF', index + 1, 'supply', measurements.unitLeavingF[index]);
    temperature('unitEnteringF', index + 1, 'return', measurements.unitEnteringF[index]);
    const flow = measurements.unitFlowGpm[index];
    if (flow) channels.push(flowChannel('unitFlowGpm', index + 1, 'unit', flow, unit.flowGpm));
  });
  for (const { name, values } of channels) {
    if (values.length !== measurements.n) {
      throw new RangeError(`sensorChannels: ${name} has length ${values.length}, the record ${measurements.n}`);
    }
  }
  return channels;
}
