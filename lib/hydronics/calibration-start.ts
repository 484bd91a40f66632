import { readBin, thinBins } from './calibration-bins';
import {
  addPrior,
  errorsAt,
  forwardFit,
  OPEN_SHARE,
  priorTerms,
  reading,
  readInto,
  refit,
  reverseFit,
  weighBins,
} from './calibration-work';
import type { CalibrationWork, SpotTerm } from './calibration-work';
import { FP, FS, PR, PS, SR, SS } from './loop-record';
import { emptySlotValues } from './read-slot';
import { PRIMARY_GAIN, SECONDARY_GAIN, SET_GAINS } from './sensor-errors';
import { fitWay } from './way-fit';

/** Share of the prior variance that classification allows for, pass by pass: wide first, so that no wrong way is locked in. */
const ANNEAL = [2, 0.6, 0.2, 0.06, 0.02, 0] as const;
/** The same from a start that already says something: near it is what is asked. */
const NEAR = [0.02, 0, 0] as const;
/** Bins that the search for a start looks at. */
const SEARCH_BINS = 160;
/** No bin speaks against a start with more than this (log likelihood): one bad stretch does not choose it. */
const WORST_BIN = 12;
/**
 * The same when one explanation is chosen over another: near balance either way fits by turns, which flatters it in every
 * comparison, and what the sensors' classes say must not be outvoted by that.
 */
const HOURS_PER_CHOICE = 8;
const values = emptySlotValues();

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
    corner[cold] = -corner[warm];
  };
  pair(PS, SS);
  pair(PR, SR);
  starts.push(corner);
  if (!loop.flows[FP] || !loop.flows[FS]) return starts;
  for (const ratio of START_RATIOS) {
    // The corner is tried where the meters disagree much as well as where they do not.
    for (const offsets of Math.abs(ratio) < FAR_RATIO ? [asRead] : [asRead, corner]) {
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
const FAR_RATIO = 0.05;
const CORNER_QUANTILE = 0.15;

/** Log likelihood of the bins as they are weighed now, each held at WORST_BIN below the best it could be, less the prior. */
export function objective(work: CalibrationWork, checks: readonly SpotTerm[]): number {
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
export function search(work: CalibrationWork, checks: readonly SpotTerm[]): void {
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
