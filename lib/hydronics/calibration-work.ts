import { emptyBothWays } from './both-ways';
import { readBin } from './calibration-bins';
import type { CalibrationBins } from './calibration-bins';
import { minimise } from './least-squares';
import { choleskyInPlace, choleskyInverse } from './linear-algebra';
import { PS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { emptySlotValues, fillReading } from './read-slot';
import type { RecordNoise } from './record-noise';
import {
  errorsAtSlot,
  errorsOf,
  MISFIT_F,
  MISFIT_FLOW,
  PRIMARY_GAIN,
  PRIMARY_ZERO,
  SET_GAINS,
  setOffset,
} from './sensor-errors';
import { emptySlotReading } from './slot-reading';
import type { PlantModel } from './types';
import { emptyWayFit, partsOf } from './contrasts';
import type { WayFit } from './contrasts';
import { fitWay } from './way-fit';
import { profileScore } from './way-score';
import type { PrimaryPlaces } from './way-score';
import { bothProbability, usualBothPrior } from './weigh-slot';

/** Neighbouring readings err together: a record is worth one independent comparison in this many hours. */
export const HOURS_PER_COMPARISON = 1;
/** Degrees of freedom of the robust loss: beyond a few sigma a bin says less the further it is off. */
const LOSS_FREEDOM = 5;
/** Beyond this a bin is no reading of two ideal tees at all. */
const OUTLIER_CHI_SQUARE = 40;
/**
 * While sensors are judged, any share is as likely as another: the record's own spread as prior would make every plant's
 * meters agree that nothing crosses over.
 */
export const OPEN_SHARE = Number.POSITIVE_INFINITY;

/** All that one calibration works on. */
export interface CalibrationWork {
  loop: LoopRecord;
  plant: PlantModel;
  bins: CalibrationBins;
  seen: RecordNoise;
  prior: Float64Array;
  parameters: Float64Array;
  covariance: Float64Array;
  /** By bin: weight of forward and of reverse, robust and normalised. */
  forward: Float64Array;
  reverse: Float64Array;
  /** By bin: probability of reverse, and the share of secondary flow that then comes back; NaN where nothing sizes it. */
  backward: Float64Array;
  backwardShare: Float64Array;
  /** By bin: chi-square of the likelier way and comparisons beyond the unknowns. */
  chiSquare: Float64Array;
  redundancy: Float64Array;
  shareScale: number;
  /** How far this plant's offsets exceed their class. */
  classScale: number;
  /** How far this plant departs from two ideal tees, against the usual. */
  misfitScale: number;
  /** Share of the bins in which the pipe ran both ways. */
  swingShare: number;
}

/** Scratch of one bin after another. */
export const reading = emptySlotReading();
const values = emptySlotValues();
export const forwardFit = emptyWayFit('forward');
export const reverseFit = emptyWayFit('reverse');

/** Doubt that stays on a parameter whatever the record: offsets in F, gains as share of flow, zeros none of their own. */
export function misfitOf(parameter: number, sets: number): number {
  if (parameter < TEMPERATURES || parameter >= SET_GAINS + sets) return MISFIT_F;
  return parameter % 2 === 1 || parameter >= SET_GAINS ? MISFIT_FLOW : 0;
}

/** Errors as one pass takes them: the parameters known, what is left of the prior as doubt, noise as seen. */
export function errorsAt(work: CalibrationWork, parameters: Float64Array, left: number) {
  const p = parameters.length;
  const covariance = new Float64Array(p * p);
  for (let i = 0; i < p * p; i += 1) covariance[i] = left * (work.prior[i] as number);
  for (let i = 0; i < p; i += 1) {
    const k = i * p + i;
    const misfit = work.misfitScale * misfitOf(i, work.loop.sets.length);
    covariance[k] = (covariance[k] as number) + misfit * misfit;
  }
  const noise = Array.from(work.seen.noise, (sigma) => (Number.isFinite(sigma) ? sigma : 0));
  return { ...errorsOf(parameters, covariance, work.loop.sets, noise), trustSetpoint: false };
}

type Errors = ReturnType<typeof errorsAt>;

/** Reads a bin into the shared reading. */
export function readInto(work: CalibrationWork, errors: Errors, bin: number): void {
  const { loop, bins, plant } = work;
  readBin(bins, bin, values);
  const slot = bins.slots[bin] as number;
  const slotErrors = errorsAtSlot(loop, errors, slot);
  fillReading(loop, slot, values, slotErrors, errors, false, plant.productionSupplyF, plant.loadDeltaTF, reading);
}

/**
 * Weight of a way in a bin. A way whose share is free never opposes the other, so that even a trace of an improbable way, bin
 * after bin, would draw an offset to where it becomes probable: what is improbable counts for nothing.
 */
const weightOf = (probability: number): number =>
  probability < IMPROBABLE ? 0 : probability > 1 - IMPROBABLE ? 1 : probability;
const IMPROBABLE = 0.1;

/** Comparisons of the shared reading beyond the unknowns, a temperature that nothing measures counted as one of these. */
function comparisonsLeft(fit: WayFit): number {
  const { pure, mate, far, mix } = partsOf(fit.way);
  const { rows } = fit;
  const guessed = (index: number, row: number) => (row >= 0 && !reading.measured[index] ? 1 : 0);
  const guesses =
    guessed(pure, Math.max(rows.mate, rows.mix)) +
    guessed(mate, rows.mate) +
    guessed(far, rows.mix) +
    guessed(mix, rows.mix);
  return fit.count - guesses - (Number.isNaN(fit.share) ? 0 : 1);
}

/** What the usual prior of a swing is worth, in bins. */
const SWING_WORTH = 20;
const bothWays = emptyBothWays();

/** How likely each way is in each bin, and how far the bin is to be trusted: the E step. */
export function weighBins(work: CalibrationWork, left: number): void {
  const errors = errorsAt(work, work.parameters, left);
  let shares = 0.02;
  let weights = 1;
  let swings = 0;
  const oneWay = work.plant.arrangement === 'variable-primary';
  for (let bin = 0; bin < work.bins.count; bin += 1) {
    readInto(work, errors, bin);
    fitWay(reading, forwardFit, OPEN_SHARE);
    fitWay(reading, reverseFit, OPEN_SHARE);
    const pReverse = oneWay ? 0 : 1 / (1 + Math.exp(forwardFit.logEvidence - reverseFit.logEvidence));
    const worth = Math.min(1, work.bins.hoursEach / HOURS_PER_COMPARISON);
    // A way that nothing checks says nothing of the sensors, also where its share is held at zero.
    const trust = (fit: typeof forwardFit) =>
      comparisonsLeft(fit) < 1 || fit.chiSquare > OUTLIER_CHI_SQUARE
        ? 0
        : (worth * (LOSS_FREEDOM + fit.redundancy)) / (LOSS_FREEDOM + fit.chiSquare);
    work.backward[bin] = pReverse;
    work.backwardShare[bin] = Math.min(1, Math.max(0, reverseFit.share));
    work.forward[bin] = weightOf(1 - pReverse) * trust(forwardFit);
    work.reverse[bin] = weightOf(pReverse) * trust(reverseFit);
    const closest = pReverse > 0.5 ? reverseFit : forwardFit;
    work.chiSquare[bin] = closest.chiSquare;
    work.redundancy[bin] = closest.redundancy;
    const both = oneWay ? 0 : bothProbability(reading, forwardFit, reverseFit, work.swingShare, bothWays);
    swings += both;
    work.forward[bin] = (work.forward[bin] as number) * (1 - both);
    work.reverse[bin] = (work.reverse[bin] as number) * (1 - both);
    const share = closest.share;
    if (share === share && closest.shareVariance < 0.04) {
      shares += Math.min(1, Math.max(0, share));
      weights += 1;
    }
  }
  const usual = usualBothPrior(work.loop.stepMinutes);
  work.swingShare = Math.min(0.8, (swings + SWING_WORTH * usual) / (work.bins.count + SWING_WORTH));
  work.shareScale = Math.min(1, Math.max(0.03, shares / weights));
}

const places: PrimaryPlaces = { supply: PS, gain: PRIMARY_GAIN, zero: PRIMARY_ZERO };

/** Where a bin's primary supply and flow keep their errors. */
function placesOf(loop: LoopRecord, slot: number): PrimaryPlaces {
  const set = loop.set[slot] as number;
  const rated = set >= 0 && loop.rated[slot] === 1;
  places.supply = set >= 0 && loop.mixed[slot] === 1 ? setOffset(loop.sets.length, set) : PS;
  places.gain = rated ? SET_GAINS + set : PRIMARY_GAIN;
  places.zero = rated ? -1 : PRIMARY_ZERO;
  return places;
}

/** A way that weighs less than this in a bin is not scored. */
const NEGLIGIBLE_WEIGHT = 1e-6;

/** Adds one bin's score under both ways at the given errors. */
export function scoreBin(
  work: CalibrationWork,
  errors: Errors,
  bin: number,
  normal: Float64Array,
  gradient: Float64Array,
): number {
  const { loop } = work;
  readInto(work, errors, bin);
  const where = placesOf(loop, work.bins.slots[bin] as number);
  let cost = 0;
  for (const fit of [forwardFit, reverseFit]) {
    const weight = (fit === forwardFit ? work.forward : work.reverse)[bin] as number;
    if (weight < NEGLIGIBLE_WEIGHT) continue;
    fitWay(reading, fit, OPEN_SHARE);
    cost += profileScore(reading, fit, where, loop.designPrimaryGpm, loop.designSecondaryGpm, weight, normal, gradient);
  }
  return cost;
}

/** Prior and spot checks as quadratic terms: information matrix and the values it pulls towards. */
interface PriorTerms {
  information: Float64Array;
  pull: Float64Array;
  /** Cost at no error at all: what the spot checks disagree with it. */
  constant: number;
}

/** Adds the quadratic terms at the given errors to the normal equations; returns their cost, half the sum of squares. */
export function addPrior(
  terms: PriorTerms,
  parameters: Float64Array,
  normal: Float64Array,
  gradient: Float64Array,
): number {
  const p = parameters.length;
  let cost = terms.constant;
  for (let i = 0; i < p; i += 1) {
    let slope = -(terms.pull[i] as number);
    for (let j = 0; j < p; j += 1) {
      const k = i * p + j;
      slope += (terms.information[k] as number) * (parameters[j] as number);
      normal[k] = (normal[k] as number) + (terms.information[k] as number);
    }
    gradient[i] = (gradient[i] as number) + slope;
    cost += 0.5 * (parameters[i] as number) * (slope - (terms.pull[i] as number));
  }
  return cost;
}

/**
 * Inverse of a covariance or information matrix of the errors, p x p row-major.
 *
 * Throws  RangeError when it is not positive definite.
 */
export function invert(matrix: Float64Array, p: number): Float64Array {
  const factor = matrix.slice();
  const inverse = new Float64Array(p * p);
  if (!choleskyInPlace(factor, p)) throw new RangeError('calibrateRecord: a covariance of sensor errors is singular');
  choleskyInverse(factor, p, inverse);
  return inverse;
}

/** Prior of the classes, the offsets scaled as this plant's turn out, with the spot checks. */
export function priorTerms(work: CalibrationWork, checks: readonly SpotTerm[]): PriorTerms {
  const p = work.parameters.length;
  const scaled = work.prior.slice();
  const square = work.classScale ** 2;
  const sets = work.loop.sets.length;
  for (let i = 0; i < TEMPERATURES; i += 1) scaled[i * p + i] = (scaled[i * p + i] as number) * square;
  for (let i = SET_GAINS + sets; i < p; i += 1) {
    for (let j = SET_GAINS + sets; j < p; j += 1) scaled[i * p + j] = (scaled[i * p + j] as number) * square;
  }
  const information = invert(scaled, p);
  const pull = new Float64Array(p);
  let constant = 0;
  for (const check of checks) {
    const weight = 1 / check.variance;
    constant += 0.5 * weight * check.value * check.value;
    const k = check.place * p + check.place;
    information[k] = (information[k] as number) + weight;
    pull[check.place] = (pull[check.place] as number) + weight * check.value;
  }
  return { information, pull, constant };
}

/** A spot check as a direct reading of one lasting error. */
export interface SpotTerm {
  place: number;
  value: number;
  variance: number;
}

/** One pass: the errors that fit the bins best as they are weighed now (the M step, Gauss-Newton). */
export function refit(work: CalibrationWork, left: number, checks: readonly SpotTerm[], iterations: number): void {
  const terms = priorTerms(work, checks);
  const found = minimise(
    work.parameters,
    (parameters, normal, gradient) => {
      const errors = errorsAt(work, parameters, left);
      let cost = addPrior(terms, parameters, normal, gradient);
      for (let bin = 0; bin < work.bins.count; bin += 1) cost += scoreBin(work, errors, bin, normal, gradient);
      return cost;
    },
    { maxIterations: iterations, damping: 1e-9, scoring: true },
  );
  work.parameters.set(found.parameters);
  work.covariance.set(found.covariance);
}
