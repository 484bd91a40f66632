import { calibrationBins, readBin, thinBins } from './calibration-bins';
import type { CalibrationBins } from './calibration-bins';
import type { Calibration, SpotCheck } from './calibration-types';
import { describeCalibration } from './calibration-findings';
import { checkLengths } from './estimate';
import { choleskyInPlace, choleskyInverse } from './linear-algebra';
import { minimise } from './least-squares';
import { FP, FS, PR, PS, readLoop, SR, SS, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { fromMixing, mixingScale } from './mixing-scale';
import type { MixingScale } from './mixing-scale';
import { judgeHeader, placeHeader } from './header-side';
import type { HeaderStretch } from './header-side';
import { emptySlotValues, fillReading } from './read-slot';
import { recordNoise } from './record-noise';
import type { RecordNoise } from './record-noise';
import {
  errorsAtSlot,
  errorsOf,
  MISFIT_F,
  MISFIT_FLOW,
  parameterCount,
  PRIMARY_GAIN,
  PRIMARY_ZERO,
  priorCovariance,
  SECONDARY_GAIN,
  SET_GAINS,
  setOffset,
} from './sensor-errors';
import { emptySlotReading } from './slot-reading';
import { plantStates } from './state';
import { markSteady } from './steadiness';
import type { Measurements, PlantModel } from './types';
import { emptyWayFit, fitWay } from './way-fit';
import { emptyBothWays } from './both-ways';
import { bothProbability, usualBothPrior } from './weigh-slot';
import { profileScore } from './way-score';
import type { PrimaryPlaces } from './way-score';

/** Share of the prior variance that classification allows for, pass by pass: wide first, so that no wrong way is locked in. */
const ANNEAL = [2, 0.6, 0.2, 0.06, 0.02, 0] as const;
/** The same from a start that already says something: near it is what is asked. */
const NEAR = [0.02, 0, 0] as const;
/** Passes over all bins, from the best start. */
const REFINE = [0.02, 0, 0, 0] as const;
/** Bins that the search for a start looks at. */
const SEARCH_BINS = 200;
/** No bin speaks against a start with more than this (log likelihood): one bad stretch does not choose it. */
const WORST_BIN = 12;
/** Neighbouring readings err together: a record is worth one independent comparison in this many hours. */
const HOURS_PER_COMPARISON = 1;
/**
 * The same when one explanation is chosen over another: near balance either way fits by turns, which flatters it in every
 * comparison, and what the sensors' classes say must not be outvoted by that.
 */
const HOURS_PER_CHOICE = 4;
/** Degrees of freedom of the robust loss: beyond a few sigma a bin says less the further it is off. */
const LOSS_FREEDOM = 5;
/** Beyond this a bin is no reading of two ideal tees at all. */
const OUTLIER_CHI_SQUARE = 40;
/**
 * While sensors are judged, any share is as likely as another: the record's own spread as prior would make every plant's
 * meters agree that nothing crosses over.
 */
const OPEN_SHARE = Number.POSITIVE_INFINITY;
/** Worth of the sensors' classes in judging how large this plant's offsets are, in sensors. */
const SCALE_WORTH = 3;
const MIN_SCALE = 0.7;
const MAX_SCALE = 2;
/** Hours of one kind of day: errors of the model within one are taken as one error. */
const CLUSTER_HOURS = 4;
/** Fewer bins of running record than this and the classes stand. */
const MIN_BINS = 12;

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

const reading = emptySlotReading();
const values = emptySlotValues();
const forwardFit = emptyWayFit('forward');
const reverseFit = emptyWayFit('reverse');

/** Doubt that stays on a parameter whatever the record: offsets in F, gains as share of flow, zeros none of their own. */
function misfitOf(parameter: number, sets: number): number {
  if (parameter < TEMPERATURES || parameter >= SET_GAINS + sets) return MISFIT_F;
  return parameter % 2 === 1 || parameter >= SET_GAINS ? MISFIT_FLOW : 0;
}

/** Errors as one pass takes them: the parameters known, what is left of the prior as doubt, noise as seen. */
function errorsAt(work: CalibrationWork, parameters: Float64Array, left: number) {
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
function readInto(work: CalibrationWork, errors: Errors, bin: number): void {
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

/** What the usual prior of a swing is worth, in bins. */
const SWING_WORTH = 20;
const bothWays = emptyBothWays();

/** How likely each way is in each bin, and how far the bin is to be trusted: the E step. */
function weighBins(work: CalibrationWork, left: number): void {
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
    const trust = (fit: typeof forwardFit) =>
      fit.chiSquare > OUTLIER_CHI_SQUARE ? 0 : (worth * (LOSS_FREEDOM + fit.redundancy)) / (LOSS_FREEDOM + fit.chiSquare);
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

/** Adds one bin's score under both ways at the given errors. */
function scoreBin(
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
  const forward = work.forward[bin] as number;
  if (forward > 1e-6) {
    fitWay(reading, forwardFit, OPEN_SHARE);
    cost += profileScore(reading, forwardFit, where, loop.designPrimaryGpm, loop.designSecondaryGpm, forward, normal, gradient);
  }
  const reverse = work.reverse[bin] as number;
  if (reverse > 1e-6) {
    fitWay(reading, reverseFit, OPEN_SHARE);
    cost += profileScore(reading, reverseFit, where, loop.designPrimaryGpm, loop.designSecondaryGpm, reverse, normal, gradient);
  }
  return cost;
}

/** Prior and spot checks as quadratic terms: information matrix and the values it pulls towards. */
interface PriorTerms {
  information: Float64Array;
  pull: Float64Array;
}

function addPrior(terms: PriorTerms, parameters: Float64Array, normal: Float64Array, gradient: Float64Array): number {
  const p = parameters.length;
  let cost = 0;
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

function invert(matrix: Float64Array, p: number): Float64Array {
  const factor = matrix.slice();
  const inverse = new Float64Array(p * p);
  if (!choleskyInPlace(factor, p)) throw new RangeError('calibrateRecord: a covariance of sensor errors is singular');
  choleskyInverse(factor, p, inverse);
  return inverse;
}

/** Prior of the classes, the offsets scaled as this plant's turn out, with the spot checks. */
function priorTerms(work: CalibrationWork, checks: readonly SpotTerm[]): PriorTerms {
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
  for (const check of checks) {
    const weight = 1 / check.variance;
    const k = check.place * p + check.place;
    information[k] = (information[k] as number) + weight;
    pull[check.place] = (pull[check.place] as number) + weight * check.value;
  }
  return { information, pull };
}

/** A spot check as a direct reading of one lasting error. */
export interface SpotTerm {
  place: number;
  value: number;
  variance: number;
}

/** One pass: the errors that fit the bins best as they are weighed now (the M step, Gauss-Newton). */
function refit(work: CalibrationWork, left: number, checks: readonly SpotTerm[], iterations: number): void {
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

/** How large this plant's offsets are against their class, from those that the record tells. */
function rescaleClass(work: CalibrationWork): void {
  const p = work.parameters.length;
  let squares = SCALE_WORTH;
  let sensors = SCALE_WORTH;
  for (let i = 0; i < TEMPERATURES; i += 1) {
    const prior = (work.prior[i * p + i] as number) * work.classScale ** 2;
    const left = work.covariance[i * p + i] as number;
    const told = Math.max(0, 1 - left / prior);
    if (!(told > 0.05)) continue;
    squares += told * ((work.parameters[i] as number) ** 2 / (told * (work.prior[i * p + i] as number)));
    sensors += told;
  }
  work.classScale = Math.min(MAX_SCALE, Math.max(MIN_SCALE, Math.sqrt(squares / sensors)));
}

/**
 * How far this plant departs from two ideal tees: its stretches' squared disagreement against what chance makes of their
 * redundancy, by the upper part of the distribution, where a loop that is less than ideal shows.
 */
function rescaleMisfit(work: CalibrationWork): void {
  const ratios = new Float64Array(work.bins.count);
  let count = 0;
  for (let bin = 0; bin < work.bins.count; bin += 1) {
    const freedom = work.redundancy[bin] as number;
    if (freedom < 1) continue;
    ratios[count] = (work.chiSquare[bin] as number) / upperChiSquare(freedom);
    count += 1;
  }
  if (count < MIN_BINS) return;
  const sorted = ratios.subarray(0, count).sort();
  const ratio = sorted[Math.floor(MISFIT_QUANTILE * count)] as number;
  work.misfitScale = Math.min(MAX_MISFIT, Math.max(1, work.misfitScale * Math.sqrt(ratio)));
}
const MISFIT_QUANTILE = 0.8;
const MAX_MISFIT = 8;
/** Source: E. Wilson, M. Hilferty, Proc. Nat. Acad. Sci. 17 (1931) 684; 0.8416 is the 0.8 point of the standard normal. */
const upperChiSquare = (freedom: number): number =>
  freedom * (1 - 2 / (9 * freedom) + 0.8416 * Math.sqrt(2 / (9 * freedom))) ** 3;

/**
 * Covariance of the errors with what the model leaves out: neighbouring bins err together, so the information of a record is
 * judged by how its stretches of a few hours disagree (clustered scores), never by the number of readings alone.
 */
function spreadOfStretches(work: CalibrationWork, checks: readonly SpotTerm[]): void {
  const p = work.parameters.length;
  const errors = errorsAt(work, work.parameters, 0);
  const normal = new Float64Array(p * p);
  const score = new Float64Array(p);
  let clusters = 0;
  let excess = 0;
  let told = 0;
  const perCluster = Math.max(1, Math.round(CLUSTER_HOURS / work.bins.hoursEach));
  const scores: Float64Array[] = [];
  for (let bin = 0; bin < work.bins.count; bin += 1) {
    scoreBin(work, errors, bin, normal, score);
    if ((bin + 1) % perCluster === 0 || bin + 1 === work.bins.count) {
      scores.push(score.slice());
      score.fill(0);
    }
  }
  for (let i = 0; i < p; i += 1) for (let j = 0; j < i; j += 1) normal[j * p + i] = normal[i * p + j] as number;
  const terms = priorTerms(work, checks);
  const full = new Float64Array(p * p);
  for (let k = 0; k < p * p; k += 1) full[k] = (normal[k] as number) + (terms.information[k] as number);
  const inverse = invert(full, p);
  for (const each of scores) {
    let square = 0;
    for (let i = 0; i < p; i += 1) {
      for (let j = 0; j < p; j += 1) square += (each[i] as number) * (inverse[i * p + j] as number) * (each[j] as number);
    }
    excess += square;
    clusters += 1;
  }
  // Expected of independent bins: the trace of inverse times the data's information.
  for (let i = 0; i < p; i += 1) for (let j = 0; j < p; j += 1) told += (inverse[i * p + j] as number) * (normal[j * p + i] as number);
  const inflation = clusters > 2 && told > 0 ? Math.max(1, excess / told) : 1;
  for (let k = 0; k < p * p; k += 1) full[k] = (normal[k] as number) / inflation + (terms.information[k] as number);
  work.covariance.set(invert(full, p));
  for (let i = 0; i < p; i += 1) {
    const k = i * p + i;
    const misfit = work.misfitScale * misfitOf(i, work.loop.sets.length);
    work.covariance[k] = (work.covariance[k] as number) + misfit * misfit;
  }
}

/**
 * Lasting errors of a record's sensors: an offset of each temperature, gain and zero of each meter, a gain of each running
 * set whose rated flow stands in, estimated jointly from all steady running stretches, with their covariance.
 *
 * In clear forward flow both supplies are one stream, in clear reverse flow both returns are, and load equals production
 * over both tees throughout. Each stretch is weighed under both ways; under each the share that crosses over is profiled,
 * not integrated out, which would pull offsets towards small temperature differences. Heavy tails count for little, the
 * sensors' classes are the prior, and what the record cannot tell stays where the prior has it, with the prior's doubt.
 *
 * Shapes  as Measurements; `spotChecks` are readings of a reference instrument beside a sensor.
 * Units   deg F, percent; see Calibration.
 * Gaps    with too little running record (under an hour) the classes stand and `limits` says so.
 * Throws  RangeError when a channel's length is not n, or a glycol's mass percent is outside 0 to 60.
 * Source  weighted least squares with errors in all variables; expectation and maximisation over the two ways (A. Dempster,
 *         N. Laird, D. Rubin, J. R. Stat. Soc. B 39 (1977) 1); profile likelihood; clustered covariance (K.-Y. Liang,
 *         S. Zeger, Biometrika 73 (1986) 13).
 */
export function calibrateRecord(
  measurements: Measurements,
  plant: PlantModel,
  spotChecks: readonly SpotCheck[] = [],
): Calibration {
  checkLengths(measurements, 'calibrateRecord');
  const { headerSupplyF, ...known } = measurements;
  const solved = solve(known, plant, spotChecks);
  if (!headerSupplyF) return describe(solved, { side: 'absent', primaryProbability: Number.NaN });
  // Without any flow, nothing but the supplies tells how much crosses over: staying together then says nothing.
  const sized = solved.work.loop.flows.some((flow) => flow !== null);
  const header = judgeHeader(measurements, stretchesOf(solved.work), sized ? solved.work.shareScale : 0);
  const placed = placeHeader(measurements, header);
  const joins = placed.primarySupplyF !== known.primarySupplyF || placed.secondarySupplyF !== known.secondarySupplyF;
  return describe(joins ? solve(placed, plant, spotChecks) : solved, header);
}

/** What the bins say of the way, for judging where the header sensor sits. */
function stretchesOf(work: CalibrationWork): HeaderStretch[] {
  const { bins } = work;
  const worth = Math.min(1, bins.hoursEach / HOURS_PER_COMPARISON);
  return Array.from({ length: bins.count }, (_, bin) => {
    const [forward, reverse] = [work.forward[bin] as number, work.reverse[bin] as number];
    const told = forward + reverse > 0 ? reverse / (forward + reverse) : 0.5;
    return { slot: bins.slots[bin] as number, slots: bins.width, reverse: told, worth };
  });
}

interface Solved {
  work: CalibrationWork;
  checks: SpotTerm[];
}

const describe = (solved: Solved, header: Calibration['header']): Calibration =>
  describeCalibration(solved.work, solved.checks, header);

/** The lasting errors of a record whose sensors all have their place. */
function solve(measurements: Measurements, plant: PlantModel, spotChecks: readonly SpotCheck[]): Solved {
  const state = new Float64Array(measurements.n);
  const steady = new Float64Array(measurements.n);
  plantStates(measurements, plant, state);
  markSteady(measurements, plant, steady);
  const scale = mixingScale(plant.productionSupplyF + plant.loadDeltaTF / 2, plant.fluid);
  const loop = readLoop(measurements, plant, scale);
  const bins = calibrationBins(loop, state, steady);
  const prior = priorCovariance(plant, loop.sets.length);
  const work: CalibrationWork = {
    loop,
    plant,
    bins,
    seen: recordNoise(loop, steady),
    prior,
    parameters: new Float64Array(parameterCount(loop.sets.length)),
    covariance: prior.slice(),
    forward: new Float64Array(bins.count),
    reverse: new Float64Array(bins.count),
    chiSquare: new Float64Array(bins.count),
    redundancy: new Float64Array(bins.count),
    shareScale: 0.3,
    classScale: 1,
    misfitScale: 1,
    swingShare: usualBothPrior(measurements.stepMinutes),
  };
  const checks = spotTerms(spotChecks, loop, scale);
  if (bins.count < MIN_BINS) {
    if (checks.length > 0) refit(work, 0, checks, 2);
    return { work, checks };
  }
  search(work, checks);
  for (const left of REFINE) {
    weighBins(work, left);
    refit(work, left, checks, 3);
    rescaleClass(work);
    rescaleMisfit(work);
  }
  weighBins(work, 0);
  spreadOfStretches(work, checks);
  return { work, checks };
}

/** Starting points: the sensors as they are, meters that disagree either way, supplies and returns that meet at the corner. */
function startsOf(work: CalibrationWork): Float64Array[] {
  const { loop, bins, parameters } = work;
  const asRead = new Float64Array(parameters.length);
  // Twice: the first is annealed, the second taken as it stands.
  const starts = [asRead, asRead];
  const corner = new Float64Array(parameters.length);
  const pair = (cold: number, warm: number) => {
    const apart = new Float64Array(bins.count);
    let count = 0;
    for (let bin = 0; bin < bins.count; bin += 1) {
      readBin(bins, bin, values);
      const difference = (values.values[warm] as number) - (values.values[cold] as number);
      if (difference === difference) {
        apart[count] = difference;
        count += 1;
      }
    }
    if (count === 0) return;
    const low = apart.subarray(0, count).sort()[Math.floor(CORNER_QUANTILE * count)] as number;
    corner[warm] = Math.max(-1, Math.min(1, low / 2));
    corner[cold] = -(corner[warm] as number);
  };
  pair(PS, SS);
  pair(PR, SR);
  starts.push(corner);
  if (!loop.flows[FP] || !loop.flows[FS]) return starts;
  for (const ratio of START_RATIOS) {
    for (const offsets of [asRead, corner]) {
      const start = offsets.slice();
      start[SECONDARY_GAIN] = -ratio / 2;
      start[PRIMARY_GAIN] = ratio / 2;
      for (let set = 0; set < loop.sets.length; set += 1) start[SET_GAINS + set] = ratio / 2;
      starts.push(start);
    }
  }
  return starts;
}
const START_RATIOS = [-0.07, -0.035, 0.035, 0.07] as const;
const CORNER_QUANTILE = 0.15;

/** Log likelihood of the bins as they are weighed now, each held at WORST_BIN below the best it could be, less the prior. */
function objective(work: CalibrationWork, checks: readonly SpotTerm[]): number {
  const p = work.parameters.length;
  const errors = errorsAt(work, work.parameters, 0);
  let total = 0;
  for (let bin = 0; bin < work.bins.count; bin += 1) {
    readInto(work, errors, bin);
    fitWay(reading, forwardFit, OPEN_SHARE);
    fitWay(reading, reverseFit, OPEN_SHARE);
    const high = Math.max(forwardFit.logEvidence, reverseFit.logEvidence);
    const low = Math.min(forwardFit.logEvidence, reverseFit.logEvidence);
    const closest = forwardFit.logEvidence > reverseFit.logEvidence ? forwardFit : reverseFit;
    const best = high + 0.5 * closest.chiSquare;
    total += best + Math.max(-WORST_BIN, high + Math.log1p(Math.exp(low - high)) - best);
  }
  const worth = Math.min(1, work.bins.hoursEach / HOURS_PER_CHOICE);
  const prior = addPrior(priorTerms(work, checks), work.parameters, new Float64Array(p * p), new Float64Array(p));
  return worth * total - prior;
}

/** Finds the best of several starts on a thinned record: likelihoods of two ways have more than one peak. */
function search(work: CalibrationWork, checks: readonly SpotTerm[]): void {
  const thinned: CalibrationWork = {
    ...work,
    bins: thinBins(work.bins, SEARCH_BINS),
    parameters: work.parameters.slice(),
    covariance: work.covariance.slice(),
  };
  let best = Number.NEGATIVE_INFINITY;
  for (const [index, start] of startsOf(work).entries()) {
    thinned.parameters.set(start);
    thinned.covariance.set(work.prior);
    thinned.classScale = 1;
    thinned.shareScale = 0.3;
    for (const left of index === 0 ? ANNEAL : NEAR) {
      weighBins(thinned, left);
      refit(thinned, left, checks, 2);
    }
    const reached = objective(thinned, checks);
    if (reached > best) {
      best = reached;
      work.parameters.set(thinned.parameters);
      work.shareScale = thinned.shareScale;
    }
  }
}

/** Spot checks as what they say of one error each. A flow reading says gain; its zero is left to the record. */
function spotTerms(spotChecks: readonly SpotCheck[], loop: LoopRecord, scale: MixingScale): SpotTerm[] {
  const terms: SpotTerm[] = [];
  for (const check of spotChecks) {
    const temperature = SPOT_TEMPERATURES.indexOf(check.role as (typeof SPOT_TEMPERATURES)[number]);
    const flow = SPOT_FLOWS.indexOf(check.role as (typeof SPOT_FLOWS)[number]);
    const channel = temperature >= 0 ? loop.temperatures[temperature] : flow >= 0 ? loop.flows[flow] : null;
    const recorded = channel?.[check.slot] ?? Number.NaN;
    const shown = Number.isFinite(check.shown) ? check.shown : temperature >= 0 ? fromMixing(recorded, scale) : recorded;
    if (!Number.isFinite(shown) || !(check.sigma > 0)) continue;
    if (temperature >= 0) terms.push({ place: temperature, value: shown - check.reading, variance: check.sigma ** 2 });
    else if (flow >= 0 && check.reading > 0) {
      terms.push({ place: PRIMARY_GAIN + 2 * flow, value: shown / check.reading - 1, variance: (check.sigma / 100) ** 2 });
    }
  }
  return terms;
}
const SPOT_TEMPERATURES = ['primarySupplyTemp', 'primaryReturnTemp', 'secondarySupplyTemp', 'secondaryReturnTemp', 'bypassTemp'] as const;
const SPOT_FLOWS = ['primaryFlow', 'secondaryFlow', 'bypassFlow'] as const;
