import type { SensorSuspicion } from './calibration-types';
import type { PlantActivity } from './sensor-activity';
import type { SensorChannel } from './sensor-channels';
import { unitOn } from './units-on';
import type { Measurements, PlantModel, UnitModel } from './types';
import { fahrenheitFromCelsius, celsiusFromFahrenheit, gpmFromLitresPerSecond } from '../units';

/** A suspicion about the mapping rests on the whole record; this many of its running intervals, evenly spread, tell enough. */
const SAMPLES = 20_000;
/** Least running record that a suspicion needs. */
const LEAST_MINUTES = 240;
const LEAST_SAMPLES = 4;
/** Share of the intervals that must say so. */
const SWAPPED_SHARE = 0.8;
const UNIT_SHARE = 0.9;
/** A supply and a return this close say nothing about which is which. */
const TOO_CLOSE_F = 0.5;
/** Two sensors of one stream differ by more than this only when something is wrong with one (offsets of 1 F each, noise). */
const APART_F = 2.5;
const TOGETHER_F = 1.5;
/** Chilled water: from this far below to this far above design supply. */
const COLDER_THAN_DESIGN_F = 10;
const WARMER_THAN_DESIGN_F = 35;
/** Flow of a running pump against its rating, once the unit is right (common practice, no source). */
const RATED_TOLERANCE = 0.3;
/** Quantile of a distribution flow that comes near design in any record that spans warm weather. */
const HIGH_QUANTILE = 0.95;

/** Running slots, at most SAMPLES of them, evenly spread over the record. */
function runningSample(measurements: Measurements, activity: PlantActivity): Int32Array {
  const stride = Math.max(1, Math.ceil(measurements.n / SAMPLES));
  const slots: number[] = [];
  for (let slot = 0; slot < measurements.n; slot += stride) {
    if (activity.isRunning(slot)) slots.push(slot);
  }
  const minutes = slots.length * stride * measurements.stepMinutes;
  return minutes >= LEAST_MINUTES && slots.length >= LEAST_SAMPLES ? Int32Array.from(slots) : new Int32Array(0);
}

/** Supply warmer than return of one pair, in most of the intervals in which they differ at all. */
function pairSwapped(
  measurements: Measurements,
  sample: Int32Array,
  supply: 'primarySupplyF' | 'secondarySupplyF',
  other: 'primaryReturnF' | 'secondaryReturnF',
): SensorSuspicion | undefined {
  const [cold, warm] = [measurements[supply], measurements[other]];
  if (!cold || !warm) return undefined;
  let differing = 0;
  let inverted = 0;
  for (const slot of sample) {
    const rise = (warm[slot] as number) - (cold[slot] as number);
    if (!(Math.abs(rise) > TOO_CLOSE_F)) continue;
    differing += 1;
    if (rise < 0) inverted += 1;
  }
  const share = inverted / differing;
  // Standing or mixed water in most of the record would leave the verdict to a few intervals.
  if (differing < LEAST_SAMPLES || differing < 0.1 * sample.length || !(share >= SWAPPED_SHARE)) return undefined;
  return { kind: 'swapped', channels: [supply, other], looksLike: 'supply and return exchanged', share };
}

/**
 * Two sensors of the supplies, or of the returns, on each other's side of the tee: the second stream can only be the warmer
 * (supplies; returns: the first the colder), and here it is the other way whenever they part.
 */
function sidesSwapped(
  measurements: Measurements,
  sample: Int32Array,
  cold: 'primarySupplyF' | 'primaryReturnF',
  warm: 'secondarySupplyF' | 'secondaryReturnF',
): SensorSuspicion | undefined {
  const [colder, warmer] = [measurements[cold], measurements[warm]];
  if (!colder || !warmer) return undefined;
  let [valid, together, wrong, right] = [0, 0, 0, 0];
  for (const slot of sample) {
    const rise = (warmer[slot] as number) - (colder[slot] as number);
    if (rise !== rise) continue;
    valid += 1;
    if (Math.abs(rise) < TOGETHER_F) together += 1;
    else if (rise < -APART_F) wrong += 1;
    else if (rise > APART_F) right += 1;
  }
  // Without a time when they agree it may as well be an offset of one of them.
  if (valid < LEAST_SAMPLES || together < 0.1 * valid || wrong < 0.1 * valid || right > 0.02 * valid) return undefined;
  const looksLike =
    cold === 'primarySupplyF' ? 'sides of the supply tee exchanged' : 'sides of the return tee exchanged';
  return { kind: 'swapped', channels: [cold, warm], looksLike, share: wrong / valid };
}

/** Temperatures that are chilled water only when read in another unit. */
const TEMPERATURE_UNITS: readonly { looksLike: string; toF: (shown: number) => number }[] = [
  { looksLike: 'degC read as degF', toF: fahrenheitFromCelsius },
  { looksLike: 'degF read as degC', toF: celsiusFromFahrenheit },
  { looksLike: 'K read as degF', toF: (shown) => fahrenheitFromCelsius(shown - 273.15) },
];

function wrongTemperatureUnit(
  channel: SensorChannel,
  sample: Int32Array,
  plant: PlantModel,
): SensorSuspicion | undefined {
  const lo = plant.productionSupplyF - COLDER_THAN_DESIGN_F;
  const hi = plant.productionSupplyF + WARMER_THAN_DESIGN_F;
  const counts = TEMPERATURE_UNITS.map(() => 0);
  let valid = 0;
  for (const slot of sample) {
    const shown = channel.values[slot] as number;
    if (shown !== shown) continue;
    valid += 1;
    // A reading that makes sense as it is speaks for no other unit.
    if (shown >= lo && shown <= hi) continue;
    TEMPERATURE_UNITS.forEach(({ toF }, unit) => {
      if (toF(shown) >= lo && toF(shown) <= hi) counts[unit] = (counts[unit] as number) + 1;
    });
  }
  const best = counts.indexOf(Math.max(...counts));
  const share = (counts[best] as number) / valid;
  if (valid < LEAST_SAMPLES || !(share >= UNIT_SHARE)) return undefined;
  const looksLike = (TEMPERATURE_UNITS[best] as { looksLike: string }).looksLike;
  return { kind: 'wrong-unit', channels: [channel.name], looksLike, share };
}

/** gpm shown for each gpm that flows, when the column came in another unit. */
const FLOW_UNITS: readonly { looksLike: string; ratio: number }[] = [
  { looksLike: 'L/s read as gpm', ratio: 1 / gpmFromLitresPerSecond(1) },
  { looksLike: 'm3/h read as gpm', ratio: 3.6 / gpmFromLitresPerSecond(1) },
  { looksLike: 'L/min read as gpm', ratio: 60 / gpmFromLitresPerSecond(1) },
  { looksLike: 'gpm read as L/s', ratio: gpmFromLitresPerSecond(1) },
  { looksLike: 'gpm read as m3/h', ratio: gpmFromLitresPerSecond(1) / 3.6 },
];

/** Rated flow of the running units at a slot, gpm. */
function ratedGpm(measurements: Measurements, plant: PlantModel, slot: number): number {
  let total = 0;
  plant.units.forEach((unit: UnitModel, index) => {
    const on = unitOn(measurements, unit, index, slot);
    total += on * unit.flowGpm;
  });
  return total;
}

/** Shares of what a primary meter should show, or of design for a distribution meter; ascending. */
function flowShares(channel: SensorChannel, sample: Int32Array, expected: (slot: number) => number): Float64Array {
  const shares: number[] = [];
  for (const slot of sample) {
    const share = (channel.values[slot] as number) / expected(slot);
    if (share > 0 && share < Infinity) shares.push(share);
  }
  return Float64Array.from(shares).sort();
}

function wrongFlowUnit(
  channel: SensorChannel,
  sample: Int32Array,
  measurements: Measurements,
  plant: PlantModel,
): SensorSuspicion | undefined {
  const constant = channel.name === 'primaryFlowGpm' && plant.primarySpeed === 'constant';
  const shares = constant
    ? flowShares(channel, sample, (slot) => ratedGpm(measurements, plant, slot))
    : flowShares(channel, sample, () => channel.designGpm);
  if (shares.length < LEAST_SAMPLES) return undefined;
  const typical = shares[Math.floor((shares.length - 1) * (constant ? 0.5 : HIGH_QUANTILE))] as number;
  for (const { looksLike, ratio } of FLOW_UNITS) {
    // A distribution flow at a quarter of design is a mild season as soon as cubic metres; only the far units are told.
    if (!constant && ratio > 0.1 && ratio < 10) continue;
    if (!isNear(typical / ratio, constant)) continue;
    const near = shares.filter((share) => isNear(share / ratio, constant) || (!constant && share < typical)).length;
    return { kind: 'wrong-unit', channels: [channel.name], looksLike, share: near / shares.length };
  }
  return undefined;
}

/** A constant-speed flow keeps to its rating; a varying one's high quantile may stay at half of design. */
const isNear = (share: number, constant: boolean): boolean =>
  share > (constant ? 1 - RATED_TOLERANCE : 0.5) && share < 1 + RATED_TOLERANCE;

/**
 * What the whole record says against the mapping: a supply warmer than its return, sensors on each other's side of a tee,
 * values that are chilled water or a pump's flow only in another unit.
 *
 * Gaps    less than four running hours: nothing is suspected.
 * Source  energy balance at the tees; limits above are common practice, no source.
 */
export function suspicionsOf(
  measurements: Measurements,
  plant: PlantModel,
  channels: readonly SensorChannel[],
  activity: PlantActivity,
): SensorSuspicion[] {
  const sample = runningSample(measurements, activity);
  if (sample.length === 0) return [];
  const own = channels.filter((channel) => channel.unitIndex === 0);
  const suspicions = [
    pairSwapped(measurements, sample, 'primarySupplyF', 'primaryReturnF'),
    pairSwapped(measurements, sample, 'secondarySupplyF', 'secondaryReturnF'),
    sidesSwapped(measurements, sample, 'primarySupplyF', 'secondarySupplyF'),
    sidesSwapped(measurements, sample, 'primaryReturnF', 'secondaryReturnF'),
    ...own.map((channel) => {
      if (channel.quantity === 'temperature') return wrongTemperatureUnit(channel, sample, plant);
      return channel.place === 'main' ? wrongFlowUnit(channel, sample, measurements, plant) : undefined;
    }),
  ];
  return suspicions.filter((suspicion) => suspicion !== undefined);
}
