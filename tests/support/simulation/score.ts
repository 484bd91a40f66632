import type { Calibration, SensorRole } from '@/lib/hydronics/calibration-types';
import { DIRECTIONS } from '@/lib/hydronics/types';
import type { Estimates } from '@/lib/hydronics/types';
import { measuresOf } from './measures';
import type { Measures } from './measures';
import { CALIBRATION_BINS, addTallies, emptyTally } from './tally';
import type { Tally } from './tally';
import { textbookOf } from './textbook';
import type { Group, SimulatedPlant } from './types';

/** Within this share of secondary flow of zero the common pipe is still. */
export const STILL_SHARE = 0.02;

/** The part of a calibration that is scored. */
export type CalibrationFindings = Pick<Calibration, 'findings'>;

export interface PlantScore {
  name: string;
  group: Group;
  /** What the bypass was scored in: gpm, or, where none is given, the share of the larger main flow. */
  unit: 'gpm' | 'share';
  tally: Tally;
  measures: Measures;
}

/**
 * Whether a direction is right: the sign of the true flow, or `still` where the truth is within the still band. Within
 * the band both are right; the opposite sign is wrong even there.
 */
export function directionIsRight(call: string, bypassGpm: number, secondaryGpm: number): boolean {
  if (call === 'still') return Math.abs(bypassGpm) < STILL_SHARE * secondaryGpm;
  return call === (bypassGpm < 0 ? 'reverse' : 'forward');
}

function scoreDirection(tally: Tally, call: string, bypassGpm: number, secondaryGpm: number): void {
  const size = Math.abs(bypassGpm) / secondaryGpm;
  const given = call !== 'unknown';
  const right = given && directionIsRight(call, bypassGpm, secondaryGpm) ? 1 : 0;
  if (size > 0.05) tally.running5 += 1;
  if (size > 0.1) tally.running10 += 1;
  if (given) {
    tally.directed += 1;
    tally.judged += 1;
    tally.right += right;
    if (call === 'still') {
      tally.still += 1;
      if (size <= 0.05) tally.stillNear += 1;
    } else {
      tally.signed += 1;
      tally.signedRight += right;
    }
    if (size > 0.05) {
      tally.judged5 += 1;
      tally.right5 += right;
    }
    if (size > 0.1) {
      tally.judged10 += 1;
      tally.right10 += right;
    }
  }
  if (bypassGpm >= 0) {
    tally.notReverse += 1;
    if (call === 'reverse') tally.falseReverse += 1;
    return;
  }
  tally.anyReverse += 1;
  if (call !== 'reverse') tally.anyReverseMissed += 1;
  if (size <= STILL_SHARE) return;
  tally.reverse += 1;
  if (!given) tally.unknownReverse += 1;
  else if (call !== 'reverse') tally.missedReverse += 1;
}

function scoreProbability(tally: Tally, probability: number, reverse: boolean): void {
  if (!Number.isFinite(probability)) return;
  const truth = reverse ? 1 : 0;
  const bin = Math.min(CALIBRATION_BINS - 1, Math.floor(probability * CALIBRATION_BINS));
  tally.probabilities += 1;
  tally.brier += (probability - truth) ** 2;
  tally.binCount[bin]! += 1;
  tally.binProbability[bin]! += probability;
  tally.binReverse[bin]! += truth;
}

/** Share of the larger main flow that the estimate's temperatures amount to, for records without any flow. */
function estimatedShare(estimates: Estimates, slot: number): number {
  const supplyF = estimates.primary_supply_f[slot]!;
  const returnF = estimates.secondary_return_f[slot]!;
  const span = returnF - supplyF;
  const share =
    estimates.reverse_probability[slot]! > 0.5
      ? (supplyF - estimates.blended_supply_f[slot]!) / span
      : (returnF - estimates.primary_return_f[slot]!) / span;
  return Math.min(1, Math.max(-1, share));
}

function scoreInterval(tally: Tally, low: number, high: number, truth: number, which: 'bypass' | 'blend'): boolean {
  if (!Number.isFinite(low) || !Number.isFinite(high)) return false;
  const inside = truth >= low && truth <= high ? 1 : 0;
  tally[`${which}Intervals`] += 1;
  tally[`${which}Covered`] += inside;
  return true;
}

/**
 * A kernel's estimates against what was really so. Only intervals that truly ran count. Flow errors are shares of the
 * design distribution flow, so that plants pool. Where the kernel gives no gpm (`unit` share), the bypass is the share
 * of the larger main flow times that flow as it truly was, for the estimate and the textbook alike.
 */
export function scorePlant(sim: SimulatedPlant, estimates: Estimates, calibration?: CalibrationFindings): PlantScore {
  const { truth } = sim;
  const tally = emptyTally();
  const textbook = textbookOf(sim);
  const design = sim.plant.distributionPumps.flowGpm;
  const inGpm = estimates.bypass_flow_gpm.some(Number.isFinite);
  for (let slot = 0; slot < sim.measurements.n; slot += 1) {
    if (truth.running[slot] !== 1) continue;
    tally.running += 1;
    const bypassGpm = truth.bypassGpm[slot]!;
    const secondaryGpm = truth.secondaryFlowGpm[slot]!;
    const largerGpm = Math.max(truth.primaryFlowGpm[slot]!, secondaryGpm);
    const probability = estimates.reverse_probability[slot]!;
    const estimate = inGpm ? estimates.bypass_flow_gpm[slot]! : estimatedShare(estimates, slot) * largerGpm;
    const reference = inGpm ? textbook.bypassGpm[slot]! : textbook.share[slot]! * largerGpm;
    if (Number.isFinite(sim.group.sensing === 'temperatures' ? probability : estimate)) tally.answered += 1;
    scoreDirection(tally, DIRECTIONS[estimates.direction[slot]!] ?? 'unknown', bypassGpm, secondaryGpm);
    scoreProbability(tally, probability, bypassGpm < 0);
    if (Number.isFinite(estimate)) {
      const error = (estimate - bypassGpm) / design;
      tally.bypass += 1;
      tally.bypassSquares += error * error;
      tally.bypassBias += error;
      if (Number.isFinite(reference)) {
        tally.compared += 1;
        tally.comparedSquares += error * error;
        tally.textbookSquares += ((reference - bypassGpm) / design) ** 2;
      }
    }
    const blendError = estimates.blended_supply_f[slot]! - truth.blendedSupplyF[slot]!;
    if (Number.isFinite(blendError)) {
      tally.blend += 1;
      tally.blendSquares += blendError * blendError;
    }
    const low = estimates.bypass_flow_lo_gpm[slot]!;
    const high = estimates.bypass_flow_hi_gpm[slot]!;
    if (scoreInterval(tally, low, high, bypassGpm, 'bypass')) tally.halfWidths += (high - low) / 2 / design;
    const blendTruth = truth.blendedSupplyF[slot]!;
    scoreInterval(
      tally,
      estimates.blended_supply_lo_f[slot]!,
      estimates.blended_supply_hi_f[slot]!,
      blendTruth,
      'blend',
    );
  }
  if (calibration) scoreCalibration(tally, sim, calibration);
  return { name: sim.name, group: sim.group, unit: inGpm ? 'gpm' : 'share', tally, measures: measuresOf(tally) };
}

/** The loop's four sensors: the common-pipe sensor has no part in the floors. */
const LOOP_ROLES: readonly SensorRole[] = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
];

/**
 * Lasting errors found against those put in. Offsets of the loop's temperatures with their common mean taken off (nobody
 * can tell it); gains as the ratio of the two meters, in percent. A sensor without a finding counts as found errorless.
 */
function scoreCalibration(tally: Tally, sim: SimulatedPlant, calibration: CalibrationFindings): void {
  const found = (role: SensorRole) => calibration.findings.find((finding) => finding.role === role);
  const offsets = sim.errors.filter((error) => LOOP_ROLES.includes(error.role));
  const misses = offsets.map((error) => (found(error.role)?.value ?? 0) - error.value);
  const mean = misses.reduce((sum, miss) => sum + miss, 0) / misses.length;
  if (misses.length > 1) {
    tally.offsets += misses.length;
    tally.offsetSquares += misses.reduce((sum, miss) => sum + (miss - mean) ** 2, 0);
  }
  for (const error of sim.errors) {
    const finding = found(error.role);
    if (!finding) continue;
    tally.findings += 1;
    if (error.value >= finding.lo && error.value <= finding.hi) tally.findingsCovered += 1;
  }
  const ratioMiss = (role: SensorRole): number => {
    const factor = (value: number | undefined) => (value === undefined ? Number.NaN : 1 + value / 100);
    const put = (each: SensorRole) => factor(sim.errors.find((error) => error.role === each)?.value);
    const truth = put(role) / put('secondaryFlow');
    const estimate = factor(found(role)?.value ?? 0) / factor(found('secondaryFlow')?.value ?? 0);
    return 100 * (estimate / truth - 1);
  };
  const metered = ratioMiss('primaryFlow');
  if (Number.isFinite(metered)) {
    tally.gainRatios += 1;
    tally.gainRatioSquares += metered * metered;
  }
  const rated = ratioMiss('ratedFlow');
  if (Number.isFinite(rated)) {
    tally.ratedRatios += 1;
    tally.ratedRatioSquares += rated * rated;
  }
}

/** Plants pooled: every interval counts alike. `worst5` and `worstRatio` are those of the worst plant. */
export interface PooledScore {
  plants: number;
  tally: Tally;
  measures: Measures;
  /** Lowest share of right directions beyond 5 % of any plant. */
  worst5: number;
  /** Highest RMSE against the textbook of any plant. */
  worstRatio: number;
}

export function poolScores(scores: readonly PlantScore[]): PooledScore {
  const tally = addTallies(scores.map((score) => score.tally));
  const finite = (values: number[]) => values.filter((value) => Number.isFinite(value));
  return {
    plants: scores.length,
    tally,
    measures: measuresOf(tally),
    worst5: Math.min(...finite(scores.map((score) => score.measures.directionRight5))),
    worstRatio: Math.max(...finite(scores.map((score) => score.measures.rmseRatio))),
  };
}

/** Running near balance: the group whose floors are apart. */
export const nearBalance = (score: { group: Group }): boolean => score.group.balance === 'near-balance';
