import { errorsAt, invert, misfitOf, priorTerms, scoreBin } from './calibration-work';
import type { CalibrationWork, SpotTerm } from './calibration-work';
import { TEMPERATURES } from './loop-record';

/** Worth of the sensors' classes in judging how large this plant's offsets are, in sensors. */
const SCALE_WORTH = 3;
const MIN_SCALE = 0.7;
const MAX_SCALE = 2;
/** Hours of one kind of day: errors of the model within one are taken as one error. */
const CLUSTER_HOURS = 4;
/** Fewer bins of running record than this and the classes stand. */
export const MIN_BINS = 12;

/** How large this plant's offsets are against their class, from those that the record tells. */
export function rescaleClass(work: CalibrationWork): void {
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
export function rescaleMisfit(work: CalibrationWork): void {
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
export function spreadOfStretches(work: CalibrationWork, checks: readonly SpotTerm[]): void {
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
      for (let j = 0; j < p; j += 1)
        square += (each[i] as number) * (inverse[i * p + j] as number) * (each[j] as number);
    }
    excess += square;
    clusters += 1;
  }
  // Expected of independent bins: the trace of inverse times the data's information.
  for (let i = 0; i < p; i += 1)
    for (let j = 0; j < p; j += 1) told += (inverse[i * p + j] as number) * (normal[j * p + i] as number);
  const inflation = clusters > 2 && told > 0 ? Math.max(1, excess / told) : 1;
  for (let k = 0; k < p * p; k += 1) full[k] = (normal[k] as number) / inflation + (terms.information[k] as number);
  work.covariance.set(invert(full, p));
  for (let i = 0; i < p; i += 1) {
    const k = i * p + i;
    const misfit = work.misfitScale * misfitOf(i, work.loop.sets.length);
    work.covariance[k] = (work.covariance[k] as number) + misfit * misfit;
  }
}
