import { toMixing } from './mixing-scale';
import type { MixingScale } from './mixing-scale';
import { at, FLOWING_SHARE, pumpOn } from './units-on';
import type { Measurements, PlantModel, UnitModel } from './types';

/** Order of the loop's temperatures in every array of the estimator. */
export const PS = 0;
export const PR = 1;
export const SS = 2;
export const SR = 3;
export const TB = 4;
export const TEMPERATURES = 5;
/** Order of its flows. */
export const FP = 0;
export const FS = 1;
export const FB = 2;
export const FLOWS = 3;

/** Most running sets of units that get a gain of their own. */
const MAX_SETS = 7;
/** Stands last among the sets, for any that was not met. */
export const ANY_SET = -1;

/**
 * A record as the estimator reads it: five temperatures on the mixing scale and three flows, whatever point they come from.
 * Arrays have length n; null where nothing at the plant measures the quantity.
 */
export interface LoopRecord {
  n: number;
  stepMinutes: number;
  temperatures: (Float64Array | null)[];
  flows: (Float64Array | null)[];
  /** True when the bypass meter gives a magnitude only. */
  bypassUnsigned: boolean;
  /** The running set of units at each slot, as index into `sets`; -1 where nothing tells. */
  set: Int8Array;
  /** Running sets (bit i = unit i) met in the record, most frequent first, then ANY_SET; empty when no errors hang on them. */
  sets: number[];
  /** 1 where primary flow is the rated flow of the running set. */
  rated: Uint8Array;
  /** 1 where primary supply is the mix of the running units' leaving sensors. */
  mixed: Uint8Array;
  /** Opening of a bypass valve, percent; null where nothing tells. */
  valve: Float64Array | null;
  designPrimaryGpm: number;
  designSecondaryGpm: number;
}

/** Design flow of the production side: the units' flows together. */
export function designPrimaryFlowGpm(plant: PlantModel): number {
  let total = 0;
  for (const unit of plant.units) total += unit.flowGpm;
  return total;
}

/** Flow through one unit: its meter, else its rated flow while its pump runs; unknown where pumps vary their speed. */
function unitFlow(measurements: Measurements, plant: PlantModel, unit: UnitModel, index: number, slot: number): number {
  if (measurements.unitFlowGpm[index]) return at(measurements.unitFlowGpm[index], slot);
  if (plant.primarySpeed === 'variable' && pumpOn(measurements, unit, index, slot) !== 0) return Number.NaN;
  return pumpOn(measurements, unit, index, slot) * unit.flowGpm;
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
    // As a weight, the rated flow of a running pump will do, also where speeds vary.
    const metered = measurements.unitFlowGpm[index];
    const flowGpm = metered ? at(metered, slot) : pumpOn(measurements, unit, index, slot) * unit.flowGpm;
    if (flowGpm <= FLOWING_SHARE * unit.flowGpm) continue;
    flowSum += flowGpm;
    heatSum += flowGpm * at(temperatures[index], slot);
  }
  return flowSum > 0 ? heatSum / flowSum : Number.NaN;
}

/** A loop temperature on the mixing scale: its own sensor, else what the units' sensors make of it (marked in `mixed`). */
function temperatureChannel(
  own: Float64Array | undefined,
  ofUnits: readonly (Float64Array | undefined)[],
  measurements: Measurements,
  plant: PlantModel,
  scale: MixingScale,
  mixed: Uint8Array,
): Float64Array | null {
  const byUnits = ofUnits.some((channel) => channel !== undefined);
  if (!own && !byUnits) return null;
  const channel = new Float64Array(measurements.n);
  for (let slot = 0; slot < measurements.n; slot += 1) {
    let tempF = own ? (own[slot] as number) : Number.NaN;
    if (byUnits && tempF !== tempF) {
      tempF = unitMixF(measurements, plant, ofUnits, slot);
      mixed[slot] = 1;
    }
    channel[slot] = Math.abs(tempF) < 1e3 ? toMixing(tempF, scale) : Number.NaN;
  }
  return channel;
}

/** A flow with what cannot be one taken out: infinite is missing, a main cannot run backwards past its pump. */
function flowChannel(source: Float64Array | undefined, negative: boolean): Float64Array | null {
  if (!source) return null;
  const channel = new Float64Array(source.length);
  for (let slot = 0; slot < source.length; slot += 1) {
    const flowGpm = source[slot] as number;
    channel[slot] = !(Math.abs(flowGpm) < 1e7) ? Number.NaN : flowGpm < 0 && !negative ? 0 : flowGpm;
  }
  return channel;
}

interface PrimaryFlow {
  flow: Float64Array | null;
  rated: Uint8Array;
}

/** Primary flow by meter, else by the units' meters and the rated flow of running pumps (marked in `rated`). */
function primaryFlow(measurements: Measurements, plant: PlantModel): PrimaryFlow {
  const n = measurements.n;
  const metered = flowChannel(measurements.primaryFlowGpm, false);
  const rated = new Uint8Array(n);
  if (!tellsUnits(measurements)) return { flow: metered, rated };
  const flow = metered ?? new Float64Array(n).fill(Number.NaN);
  let any = metered !== null;
  for (let slot = 0; slot < n; slot += 1) {
    if (flow[slot] === flow[slot]) continue;
    let sumGpm = 0;
    for (let index = 0; index < plant.units.length; index += 1) {
      const unitGpm = unitFlow(measurements, plant, plant.units[index] as UnitModel, index, slot);
      sumGpm += unitGpm > 0 || unitGpm !== unitGpm ? unitGpm : 0;
      if (!measurements.unitFlowGpm[index] && unitGpm > 0) rated[slot] = 1;
    }
    if (!(sumGpm < 1e7)) continue;
    flow[slot] = sumGpm;
    if (sumGpm > 0) any = true;
  }
  return { flow: any ? flow : null, rated };
}

/** True when any point of a unit says whether water moves through it. */
const tellsUnits = (measurements: Measurements): boolean =>
  [measurements.unitFlowGpm, measurements.primaryPumpStatus, measurements.unitStatus, measurements.unitPowerKw].some(
    (channels) => channels.some((channel) => channel !== undefined),
  );

/** Running sets of a record: the list, and each slot's place in it. */
function runningSets(
  measurements: Measurements,
  plant: PlantModel,
  given: readonly number[] | undefined,
): { set: Int8Array; sets: number[] } {
  const n = measurements.n;
  const set = new Int8Array(n).fill(-1);
  if (!tellsUnits(measurements)) return { set, sets: [...(given ?? [])] };
  const masks = new Int32Array(n);
  const counts = new Map<number, number>();
  for (let slot = 0; slot < n; slot += 1) {
    let mask = 0;
    for (let index = 0; index < plant.units.length; index += 1) {
      const unit = plant.units[index] as UnitModel;
      const metered = measurements.unitFlowGpm[index];
      const flowGpm = metered ? at(metered, slot) : pumpOn(measurements, unit, index, slot) * unit.flowGpm;
      if (flowGpm > unit.flowGpm / 2) mask |= 1 << index;
    }
    masks[slot] = mask;
    if (mask > 0) counts.set(mask, (counts.get(mask) ?? 0) + 1);
  }
  // Ties in frequency go by the mask itself, so that the order never depends on where a record starts.
  const met = [...counts]
    .sort((a, b) => b[1] - a[1] || a[0] - b[0])
    .slice(0, MAX_SETS)
    .map(([mask]) => mask);
  const sets = given ? [...given] : met.length > 0 ? [...met, ANY_SET] : [];
  if (sets.length > 0) {
    for (let slot = 0; slot < n; slot += 1) {
      const mask = masks[slot] as number;
      if (mask > 0) set[slot] = placeOfSet(sets, mask);
    }
  }
  return { set, sets };
}

/** Index of a running set; one that is not listed counts as the last, ANY_SET. */
function placeOfSet(sets: readonly number[], mask: number): number {
  for (let index = 0; index < sets.length; index += 1) if (sets[index] === mask) return index;
  return sets.length - 1;
}

/**
 * Reads a record into the estimator's form: the loop's own sensors where they say something, else what the units' sensors
 * make of it (flow-weighted leaving and entering temperatures, summed or rated flows). `sets` fixes the list of running sets
 * (a calibration's); without it those of the record are listed.
 *
 * Shapes  as Measurements. Units: deg F on the mixing scale, gpm.
 * Gaps    NaN where nothing says anything; what is not finite counts as missing.
 */
export function readLoop(
  measurements: Measurements,
  plant: PlantModel,
  scale: MixingScale,
  sets?: readonly number[],
): LoopRecord {
  const mixed = new Uint8Array(measurements.n);
  const unmarked = new Uint8Array(measurements.n);
  const channel = (
    own: Float64Array | undefined,
    ofUnits: readonly (Float64Array | undefined)[] = [],
    marks: Uint8Array = unmarked,
  ) => temperatureChannel(own, ofUnits, measurements, plant, scale, marks);
  const secondarySupply = channel(measurements.secondarySupplyF);
  // The sensor sits behind the distribution pumps: the tee sends out what it reads less their heat.
  const rise = plant.distributionRiseF ?? 0;
  if (secondarySupply && rise > 0) {
    for (let slot = 0; slot < measurements.n; slot += 1)
      secondarySupply[slot] = (secondarySupply[slot] as number) - rise;
  }
  const primary = primaryFlow(measurements, plant);
  const signed = measurements.bypassFlowGpm;
  const temperatures = [
    channel(measurements.primarySupplyF, measurements.unitLeavingF, mixed),
    channel(measurements.primaryReturnF, measurements.unitEnteringF),
    secondarySupply,
    channel(measurements.secondaryReturnF),
    channel(measurements.bypassF),
  ];
  // Without a calibration that names them, sets matter only where something hangs on them.
  const hang = sets !== undefined || primary.rated.includes(1) || mixed.includes(1);
  const running = hang
    ? runningSets(measurements, plant, sets)
    : { set: new Int8Array(measurements.n).fill(-1), sets: [] };
  return {
    n: measurements.n,
    stepMinutes: measurements.stepMinutes,
    temperatures,
    flows: [
      primary.flow,
      flowChannel(measurements.secondaryFlowGpm, false),
      signed ? flowChannel(signed, true) : flowChannel(measurements.bypassFlowUnsignedGpm, true),
    ],
    bypassUnsigned: !signed,
    ...running,
    rated: primary.rated,
    mixed,
    valve: measurements.bypassValvePercent ?? null,
    designPrimaryGpm: designPrimaryFlowGpm(plant),
    designSecondaryGpm: plant.distributionPumps.flowGpm,
  };
}
