import { calibrationBins } from './calibration-bins';
import { describeCalibration } from './calibration-findings';
import { MIN_BINS, rescaleClass, rescaleMisfit, spreadOfStretches } from './calibration-spread';
import { objective, search } from './calibration-start';
import type { Calibration, SpotCheck } from './calibration-types';
import { HOURS_PER_COMPARISON, refit, weighBins } from './calibration-work';
import type { CalibrationWork, SpotTerm } from './calibration-work';
import { checkLengths } from './estimate';
import { judgeHeader, placeHeader } from './header-side';
import type { HeaderStretch } from './header-side';
import { readLoop } from './loop-record';
import type { LoopRecord } from './loop-record';
import { fromMixing, mixingScale } from './mixing-scale';
import type { MixingScale } from './mixing-scale';
import { recordNoise } from './record-noise';
import { parameterCount, PRIMARY_GAIN, priorCovariance } from './sensor-errors';
import { plantStates } from './state';
import { markSteady } from './steadiness';
import type { Measurements, PlantModel } from './types';
import { usualBothPrior } from './weigh-slot';

/** Passes over all bins, from the best start. */
const REFINE = [0.02, 0, 0, 0] as const;

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
  const header = judgeHeader(measurements, stretchesOf(solved.work, sized));
  const placed = placeHeader(measurements, header);
  const joins = placed.primarySupplyF !== known.primarySupplyF || placed.secondarySupplyF !== known.secondarySupplyF;
  return describe(joins ? solve(placed, plant, spotChecks) : solved, header);
}

/** What the bins say of the way, for judging where the header sensor sits. */
function stretchesOf(work: CalibrationWork, sized: boolean): HeaderStretch[] {
  const { bins } = work;
  const worth = Math.min(1, bins.hoursEach / HOURS_PER_COMPARISON);
  return Array.from({ length: bins.count }, (_, bin) => {
    const own = work.backwardShare[bin] as number;
    // Where nothing sizes this stretch's blend, the record's usual one stands for it.
    const share = sized ? (Number.isNaN(own) ? work.shareScale : own) : 0;
    return { slot: bins.slots[bin] as number, slots: bins.width, reverse: work.backward[bin] as number, share, worth };
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
    backward: new Float64Array(bins.count).fill(0.5),
    backwardShare: new Float64Array(bins.count).fill(Number.NaN),
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
  refine(work, checks);
  weighBins(work, 0);
  spreadOfStretches(work, checks);
  return { work, checks };
}

/**
 * Passes over all bins from the best start. Near a plant that hardly ever changes its way, passes can creep to where either way
 * explains everything by turns: the pass whose errors explain the record best, at what a choice is worth, is kept.
 */
function refine(work: CalibrationWork, checks: readonly SpotTerm[]): void {
  let best = objective(work, checks);
  const kept = work.parameters.slice();
  for (const left of REFINE) {
    weighBins(work, left);
    refit(work, left, checks, 3);
    const reached = objective(work, checks);
    if (reached > best || left > 0) {
      best = Math.max(best, reached);
      kept.set(work.parameters);
    } else if (reached < best - WORSE) {
      work.parameters.set(kept);
    }
    rescaleClass(work);
    rescaleMisfit(work);
  }
  if (objective(work, checks) < best - WORSE) work.parameters.set(kept);
}
/** Log likelihood by which a pass has to fall short to be taken back. */
const WORSE = 0.05;

/** Spot checks as what they say of one error each. A flow reading says gain; its zero is left to the record. */
function spotTerms(spotChecks: readonly SpotCheck[], loop: LoopRecord, scale: MixingScale): SpotTerm[] {
  const terms: SpotTerm[] = [];
  for (const check of spotChecks) {
    const temperature = SPOT_TEMPERATURES.indexOf(check.role as (typeof SPOT_TEMPERATURES)[number]);
    const flow = SPOT_FLOWS.indexOf(check.role as (typeof SPOT_FLOWS)[number]);
    const channel = temperature >= 0 ? loop.temperatures[temperature] : flow >= 0 ? loop.flows[flow] : null;
    const recorded = channel?.[check.slot] ?? Number.NaN;
    const shown = Number.isFinite(check.shown)
      ? check.shown
      : temperature >= 0
        ? fromMixing(recorded, scale)
        : recorded;
    if (!Number.isFinite(shown) || !Number.isFinite(check.reading) || !(check.sigma > 0)) continue;
    if (temperature >= 0) terms.push({ place: temperature, value: shown - check.reading, variance: check.sigma ** 2 });
    else if (flow >= 0 && check.reading > 0) {
      terms.push({
        place: PRIMARY_GAIN + 2 * flow,
        value: shown / check.reading - 1,
        variance: (check.sigma / 100) ** 2,
      });
    }
  }
  return terms;
}
const SPOT_TEMPERATURES = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
  'bypassTemp',
] as const;
const SPOT_FLOWS = ['primaryFlow', 'secondaryFlow', 'bypassFlow'] as const;
