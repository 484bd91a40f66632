import type { Calibration } from './calibration-types';
import { FB, FS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import type { PlantModel } from './types';

/** Parameters of lasting error, in order: five offsets (F), then gain (share) and zero (share of design flow) of each meter. */
export const OFFSETS = 0;
export const PRIMARY_GAIN = 5;
export const PRIMARY_ZERO = 6;
export const SECONDARY_GAIN = 7;
export const SECONDARY_ZERO = 8;
export const BYPASS_GAIN = 9;
export const BYPASS_ZERO = 10;
/** From here on a gain for each running set of units, of its rated flow; then an offset for each, of its mixed supply. */
export const SET_GAINS = 11;

/** Where the offset of a set's mixed supply stands. */
export const setOffset = (sets: number, set: number): number => SET_GAINS + sets + set;
/** Number of parameters with so many sets. */
export const parameterCount = (sets: number): number => SET_GAINS + 2 * sets;

/** A meter's zero as share of design flow (k = 1): cut-off and drift (common practice, no source). */
const ZERO_SHARE = 0.005;
/** The common pipe is as wide as a main and runs slowly: its meter is near cut-off more often (common practice). */
const BYPASS_ZERO_SHARE = 0.01;
/** The same of the supply that running units' leaving sensors make together. */
const SHARED_MIX_VARIANCE = 0.3;
/** Of the variance of a rated flow, what all running sets share (common practice: one duty point, one system curve). */
const SHARED_RATED_VARIANCE = 0.7;
/** What the model of two ideal tees leaves out, whatever the number of readings (k = 1): F, and share of flow. */
export const MISFIT_F = 0.04;
export const MISFIT_FLOW = 0.006;
/** Noise of one interval where the record has not shown it: a rated flow moves with the system (common practice). */
export const RATED_FLOW_NOISE = 0.015;

/** Lasting errors as they bear on one slot: picked for where its primary flow and its primary supply come from. */
export interface SlotErrors {
  /** F, order PS PR SS SR TB. */
  offset: Float64Array;
  /** 5 x 5, F^2. */
  offsetOffset: Float64Array;
  gain: Float64Array;
  zero: Float64Array;
  /** 3 x 3: gain with gain, gain with zero (row gain), zero with zero. */
  gainGain: Float64Array;
  gainZero: Float64Array;
  zeroZero: Float64Array;
  /** 5 x 3. */
  offsetGain: Float64Array;
  offsetZero: Float64Array;
  noise: Float64Array;
}

/** All that is known of a plant's sensors: from their class alone, or from a calibration. */
export interface SensorErrors {
  /** Noise of one interval, F; of the meters, share of reading. */
  noise: Float64Array;
  flowNoise: Float64Array;
  /** What departs from two ideal tees in each interval, however many readings are averaged: F, share of flow (k = 1). */
  misfitF: number;
  misfitShare: number;
  /** A missing supply may be taken near its set-point: not while sensors are judged, where every bin would repeat it. */
  trustSetpoint: boolean;
  /** Meters and own sensors throughout. */
  own: SlotErrors;
  /** By running set: with rated flow, with mixed supply, with both. */
  rated: SlotErrors[];
  mixed: SlotErrors[];
  both: SlotErrors[];
}

/** Prior covariance over all parameters, from the sensors' classes. */
export function priorCovariance(plant: PlantModel, sets: number): Float64Array {
  const p = parameterCount(sets);
  const covariance = new Float64Array(p * p);
  const { temperatureSigmaF, flowSigmaPercent } = plant.sensors;
  const sigmas = [
    temperatureSigmaF.primarySupplyTemp,
    temperatureSigmaF.primaryReturnTemp,
    temperatureSigmaF.secondarySupplyTemp,
    temperatureSigmaF.secondaryReturnTemp,
    temperatureSigmaF.bypassTemp,
    flowSigmaPercent.primaryFlow / 100,
    ZERO_SHARE,
    flowSigmaPercent.secondaryFlow / 100,
    ZERO_SHARE,
    flowSigmaPercent.bypassFlow / 100,
    BYPASS_ZERO_SHARE,
  ];
  sigmas.forEach((sigma, i) => (covariance[i * p + i] = sigma * sigma));
  const rated = (flowSigmaPercent.ratedFlow / 100) ** 2;
  const supply = temperatureSigmaF.primarySupplyTemp ** 2;
  for (let i = 0; i < sets; i += 1) {
    for (let j = 0; j < sets; j += 1) {
      covariance[(SET_GAINS + i) * p + SET_GAINS + j] = rated * (i === j ? 1 : SHARED_RATED_VARIANCE);
      covariance[setOffset(sets, i) * p + setOffset(sets, j)] = supply * (i === j ? 1 : SHARED_MIX_VARIANCE);
    }
  }
  return covariance;
}

/** Picks the errors of one kind of slot out of all parameters: where its offset of PS and its primary gain and zero stand. */
function slotErrors(
  values: ArrayLike<number>,
  covariance: ArrayLike<number>,
  p: number,
  supply: number,
  primaryGain: number,
  primaryZero: number,
  noise: ArrayLike<number>,
): SlotErrors {
  const offsets = [supply, 1, 2, 3, 4];
  const gains = [primaryGain, SECONDARY_GAIN, BYPASS_GAIN];
  const zeros = [primaryZero, SECONDARY_ZERO, BYPASS_ZERO];
  const value = (i: number) => (i < 0 ? 0 : (values[i] as number));
  const table = (rows: readonly number[], columns: readonly number[]) =>
    Float64Array.from({ length: rows.length * columns.length }, (_, k) => {
      const i = rows[Math.floor(k / columns.length)] as number;
      const j = columns[k % columns.length] as number;
      return i < 0 || j < 0 ? 0 : (covariance[i * p + j] as number);
    });
  return {
    offset: Float64Array.from(offsets, value),
    offsetOffset: table(offsets, offsets),
    gain: Float64Array.from(gains, value),
    zero: Float64Array.from(zeros, value),
    gainGain: table(gains, gains),
    gainZero: table(gains, zeros),
    zeroZero: table(zeros, zeros),
    offsetGain: table(offsets, gains),
    offsetZero: table(offsets, zeros),
    noise: Float64Array.from(noise),
  };
}

/** Errors from their values and covariance over all parameters; `noise` in the order of Calibration. */
export function errorsOf(
  values: ArrayLike<number>,
  covariance: ArrayLike<number>,
  sets: readonly number[],
  noise: readonly number[],
): SensorErrors {
  const p = parameterCount(sets.length);
  const meters = noise.slice(TEMPERATURES);
  const rated = [RATED_FLOW_NOISE, meters[FS] as number, meters[FB] as number];
  const pick = (supply: number, gain: number, zero: number, flowNoise: readonly number[]) =>
    slotErrors(values, covariance, p, supply, gain, zero, flowNoise);
  return {
    noise: Float64Array.from(noise.slice(0, TEMPERATURES)),
    flowNoise: Float64Array.from(meters),
    misfitF: 0,
    misfitShare: 0,
    trustSetpoint: true,
    own: pick(OFFSETS, PRIMARY_GAIN, PRIMARY_ZERO, meters),
    rated: sets.map((_, k) => pick(OFFSETS, SET_GAINS + k, -1, rated)),
    mixed: sets.map((_, k) => pick(setOffset(sets.length, k), PRIMARY_GAIN, PRIMARY_ZERO, meters)),
    both: sets.map((_, k) => pick(setOffset(sets.length, k), SET_GAINS + k, -1, rated)),
  };
}

/** The errors that bear on one slot of a record. */
export function errorsAtSlot(loop: LoopRecord, errors: SensorErrors, slot: number): SlotErrors {
  const set = loop.set[slot] as number;
  if (set < 0) return errors.own;
  const rated = loop.rated[slot] === 1;
  const mixed = loop.mixed[slot] === 1;
  const list = rated ? (mixed ? errors.both : errors.rated) : mixed ? errors.mixed : null;
  return list?.[set] ?? errors.own;
}

/** What the sensors' classes alone say: no known error, all doubt lasting, no noise beside it. */
export function errorsOfClass(plant: PlantModel, sets: readonly number[]): SensorErrors {
  const p = parameterCount(sets.length);
  return errorsOf(new Float64Array(p), priorCovariance(plant, sets.length), sets, new Array<number>(8).fill(0));
}

/** What a calibration says. Noise that the record did not show counts as none: the lasting doubt covers it. */
export function errorsOfCalibration(calibration: Calibration): SensorErrors {
  const noise = calibration.noise.map((sigma) => (Number.isFinite(sigma) ? sigma : 0));
  const errors = errorsOf(calibration.values, calibration.covariance, calibration.sets, noise);
  errors.misfitF = calibration.misfit.temperatureF;
  errors.misfitShare = calibration.misfit.flowShare;
  return errors;
}
