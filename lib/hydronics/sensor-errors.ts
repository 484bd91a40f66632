import type { Calibration } from './calibration-types';
import { FB, FLOWS, FP, FS, TEMPERATURES } from './loop-record';
import type { PlantModel } from './types';

/** Parameters of lasting error, in order: five offsets (F), then gain (share) and zero (share of design flow) of each meter. */
export const OFFSETS = 0;
export const PRIMARY_GAIN = 5;
export const PRIMARY_ZERO = 6;
export const SECONDARY_GAIN = 7;
export const SECONDARY_ZERO = 8;
export const BYPASS_GAIN = 9;
export const BYPASS_ZERO = 10;
/** From here on one gain for each running set of units whose rated flow stands in. */
export const SET_GAINS = 11;

/** A meter's zero as share of design flow (k = 1): cut-off and drift (common practice, no source). */
const ZERO_SHARE = 0.005;
/** The common pipe is as wide as a main and runs slowly: its meter is near cut-off more often (common practice). */
const BYPASS_ZERO_SHARE = 0.01;
/** Of the variance of a rated flow, what all running sets share (common practice: one duty point, one system curve). */
const SHARED_RATED_VARIANCE = 0.7;
/** Noise of one interval where the record has not shown it: a rated flow moves with the system (common practice). */
export const RATED_FLOW_NOISE = 0.015;

/** Lasting errors as they bear on one slot: values and covariance picked for where its primary flow comes from. */
export interface FlowErrors {
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
  offset: Float64Array;
  /** 5 x 5, F^2. */
  offsetOffset: Float64Array;
  /** Noise of one interval, F. */
  noise: Float64Array;
  metered: FlowErrors;
  /** By running set. */
  rated: FlowErrors[];
  /** Sets (bit i = unit i), in the order of `rated`. */
  sets: readonly number[];
}

/** Prior covariance over all parameters, from the sensors' classes. */
export function priorCovariance(plant: PlantModel, sets: number): Float64Array {
  const p = SET_GAINS + sets;
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
  for (let i = SET_GAINS; i < p; i += 1) {
    for (let j = SET_GAINS; j < p; j += 1) {
      covariance[i * p + j] = rated * (i === j ? 1 : SHARED_RATED_VARIANCE);
    }
  }
  return covariance;
}

function flowErrors(
  values: ArrayLike<number>,
  covariance: ArrayLike<number>,
  p: number,
  primaryGain: number,
  primaryZero: number,
  noise: readonly number[],
): FlowErrors {
  const gains = [primaryGain, SECONDARY_GAIN, BYPASS_GAIN];
  const zeros = [primaryZero, SECONDARY_ZERO, BYPASS_ZERO];
  const value = (i: number) => (i < 0 ? 0 : (values[i] as number));
  const between = (i: number, j: number) => (i < 0 || j < 0 ? 0 : (covariance[i * p + j] as number));
  const square = (a: readonly number[], b: readonly number[]) =>
    Float64Array.from({ length: FLOWS * FLOWS }, (_, k) =>
      between(a[Math.floor(k / FLOWS)] as number, b[k % FLOWS] as number),
    );
  const withOffsets = (a: readonly number[]) =>
    Float64Array.from({ length: TEMPERATURES * FLOWS }, (_, k) =>
      between(Math.floor(k / FLOWS), a[k % FLOWS] as number),
    );
  return {
    gain: Float64Array.from(gains, value),
    zero: Float64Array.from(zeros, value),
    gainGain: square(gains, gains),
    gainZero: square(gains, zeros),
    zeroZero: square(zeros, zeros),
    offsetGain: withOffsets(gains),
    offsetZero: withOffsets(zeros),
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
  const p = SET_GAINS + sets.length;
  const flowNoise = noise.slice(TEMPERATURES);
  const offsetOffset = new Float64Array(TEMPERATURES * TEMPERATURES);
  for (let i = 0; i < TEMPERATURES; i += 1) {
    for (let j = 0; j < TEMPERATURES; j += 1) offsetOffset[i * TEMPERATURES + j] = covariance[i * p + j] as number;
  }
  const ratedNoise = [RATED_FLOW_NOISE, flowNoise[FS] as number, flowNoise[FB] as number];
  return {
    offset: Float64Array.from({ length: TEMPERATURES }, (_, i) => values[i] as number),
    offsetOffset,
    noise: Float64Array.from(noise.slice(0, TEMPERATURES)),
    metered: flowErrors(values, covariance, p, PRIMARY_GAIN, PRIMARY_ZERO, [
      flowNoise[FP] as number,
      flowNoise[FS] as number,
      flowNoise[FB] as number,
    ]),
    rated: sets.map((_, k) => flowErrors(values, covariance, p, SET_GAINS + k, -1, ratedNoise)),
    sets,
  };
}

/** What the sensors' classes alone say: no known error, all doubt lasting, no noise beside it. */
export function errorsOfClass(plant: PlantModel, sets: readonly number[]): SensorErrors {
  const p = SET_GAINS + sets.length;
  return errorsOf(new Float64Array(p), priorCovariance(plant, sets.length), sets, new Array<number>(8).fill(0));
}

/** What a calibration says. Noise that the record did not show counts as none: the lasting doubt covers it. */
export function errorsOfCalibration(calibration: Calibration): SensorErrors {
  const noise = calibration.noise.map((sigma) => (Number.isFinite(sigma) ? sigma : 0));
  return errorsOf(calibration.values, calibration.covariance, calibration.sets, noise);
}
