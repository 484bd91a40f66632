import { MISFIT_F, MISFIT_FLOW } from './sensor-errors';
import { MIN_BINS } from './calibration-spread';
import type { CalibrationWork, SpotTerm } from './calibration-work';
import { CONTRASTS } from './contrasts';
import { chiSquareQuantile } from './distributions';
import type { Calibration, CalibrationLimit, SensorFinding, SensorRole, SensorTie } from './calibration-types';
import { FB, FP, FS, PR, PS, SR, SS, TB, TEMPERATURES } from './loop-record';
import type { LoopRecord } from './loop-record';
import { NINETY_PERCENT_Z } from './normal';
import { medianOf } from './record-noise';
import { BYPASS_GAIN, PRIMARY_GAIN, SECONDARY_GAIN, SET_GAINS, setOffset } from './sensor-errors';
import { KERNEL_VERSION } from './types';

/** 0.95 points of chi-square by degrees of freedom, for 0 (as for 1) to the most comparisons that one interval holds. */
const CHI_SQUARE_95 = Array.from({ length: CONTRASTS + 1 }, (_, freedom) =>
  chiSquareQuantile(0.95, Math.max(1, freedom)),
);
/** Below this share of prior variance taken away, a record has not told a sensor's error. */
const TOLD_LEAST = 0.1;
const TEMPERATURE_ROLES = [
  'primarySupplyTemp',
  'primaryReturnTemp',
  'secondarySupplyTemp',
  'secondaryReturnTemp',
  'bypassTemp',
] as const;

/** Hours of the record that lie clearly on one side. */
interface Hours {
  forward: number;
  reverse: number;
}

function clearHours(work: CalibrationWork): Hours {
  let forward = 0;
  let reverse = 0;
  for (let bin = 0; bin < work.bins.count; bin += 1) {
    const backward = work.backward[bin] as number;
    if (backward < 0.1) forward += work.bins.hoursEach;
    else if (backward > 0.9) reverse += work.bins.hoursEach;
  }
  return { forward, reverse };
}

function tieOf(place: number, work: CalibrationWork, hours: Hours, told: number): { tie: SensorTie; hours: number } {
  const { temperatures, flows } = work.loop;
  if (told < TOLD_LEAST) return { tie: 'none', hours: 0 };
  const both = hours.forward + hours.reverse;
  if (place === PS || place === SS) {
    if (temperatures[PS] && temperatures[SS] && hours.forward > 0)
      return { tie: 'supplies-agree', hours: hours.forward };
  } else if (place === PR || place === SR) {
    if (temperatures[PR] && temperatures[SR] && hours.reverse > 0)
      return { tie: 'returns-agree', hours: hours.reverse };
  } else if (place !== TB && flows[FB] && flows[FP] && flows[FS]) return { tie: 'flow-balance', hours: both };
  return { tie: 'energy-balance', hours: both };
}

/** Slots from which a meter counts as there. */
const METERED_SLOTS = 20;

/** Whether a meter gives primary flow, if only now and then; and whether units' sensors make the primary supply, mostly. */
function sourcesOf(loop: LoopRecord): { metered: boolean; mixed: boolean } {
  const [flow, supply] = [loop.flows[FP], loop.temperatures[PS]];
  let [meterSlots, mixedSlots, supplySlots] = [0, 0, 0];
  for (let slot = 0; slot < loop.n; slot += 1) {
    if (flow && (flow[slot] as number) > 0 && loop.rated[slot] === 0) meterSlots += 1;
    if (supply && supply[slot] === supply[slot]) {
      supplySlots += 1;
      mixedSlots += loop.mixed[slot] as number;
    }
  }
  return { metered: meterSlots >= METERED_SLOTS, mixed: 2 * mixedSlots > supplySlots };
}

/** What a calibration says, sensor by sensor, with what no record of its kind can tell. */
export function describeCalibration(
  work: CalibrationWork,
  checks: readonly SpotTerm[],
  header: Calibration['header'],
): Calibration {
  const { loop, parameters, covariance, prior, seen, bins } = work;
  const p = parameters.length;
  const hours = clearHours(work);
  const findings: SensorFinding[] = [];
  const describe = (role: SensorRole, kind: 'offset' | 'gain', place: number, channel: number) => {
    if (!((seen.noise[channel] as number) >= 0)) return;
    const unit = kind === 'offset' ? 1 : 100;
    const k = place * p + place;
    const classVariance = (prior[k] as number) * (kind === 'offset' ? work.classScale ** 2 : 1);
    const sigma = Math.sqrt(covariance[k] as number);
    const told = Math.min(1, Math.max(0, 1 - (covariance[k] as number) / classVariance));
    const checked = checks.some((check) => check.place === place);
    const { tie, hours: evidenceHours } = checked
      ? { tie: 'spot-check' as const, hours: 0 }
      : tieOf(place, work, hours, told);
    const value = unit * (parameters[place] as number);
    findings.push({
      role,
      kind,
      value,
      lo: value - NINETY_PERCENT_Z * unit * sigma,
      hi: value + NINETY_PERCENT_Z * unit * sigma,
      prior: unit * Math.sqrt(prior[k] as number),
      told,
      tie,
      evidenceHours,
      noise: (kind === 'offset' ? 1 : 100) * (seen.noise[channel] as number),
      increment: seen.increment[channel] as number,
    });
  };
  const { metered, mixed } = sourcesOf(loop);
  TEMPERATURE_ROLES.forEach((role, place) => {
    // Where units' leaving sensors stand in, the most frequent set speaks for the supply.
    const own = place !== PS || !mixed || loop.sets.length === 0;
    if (loop.temperatures[place]) describe(role, 'offset', own ? place : setOffset(loop.sets.length, 0), place);
  });
  if (loop.flows[FP] && metered) describe('primaryFlow', 'gain', PRIMARY_GAIN, TEMPERATURES + FP);
  if (loop.flows[FS]) describe('secondaryFlow', 'gain', SECONDARY_GAIN, TEMPERATURES + FS);
  if (loop.flows[FB]) describe('bypassFlow', 'gain', BYPASS_GAIN, TEMPERATURES + FB);
  if (loop.rated.includes(1)) describe('ratedFlow', 'gain', SET_GAINS, TEMPERATURES + FP);

  return {
    kernelVersion: KERNEL_VERSION,
    intervals: bins.count,
    values: [...parameters],
    covariance: [...covariance],
    sets: [...loop.sets],
    noise: [...seen.noise],
    shareScale: work.shareScale,
    swingShare: work.swingShare,
    misfit: { temperatureF: MISFIT_F * work.misfitScale, flowShare: MISFIT_FLOW * work.misfitScale },
    header,
    findings,
    limits: limitsOf(work, hours, checks),
    chiSquare: fitOf(work),
  };
}

function limitsOf(work: CalibrationWork, hours: Hours, checks: readonly SpotTerm[]): CalibrationLimit[] {
  const { loop, bins } = work;
  const limits: CalibrationLimit[] = [];
  if (bins.count < MIN_BINS) limits.push('too-short');
  const flows = [FP, FS, FB].filter((flow) => loop.flows[flow]);
  if (flows.length === 0) limits.push('no-flow');
  if (loop.temperatures.some((channel) => channel) && !checks.some((check) => check.place < TEMPERATURES))
    limits.push('common-offset');
  if (flows.length > 0 && !checks.some((check) => check.place >= PRIMARY_GAIN)) limits.push('common-gain');
  const checked = (...places: number[]) => checks.some((check) => places.includes(check.place));
  const mixes = (loop.temperatures[PS] ?? loop.temperatures[SS]) && (loop.temperatures[PR] ?? loop.temperatures[SR]);
  if (mixes && flows.length < 2 && !(checked(PS, SS) && checked(PR, SR))) limits.push('span');
  const total = hours.forward + hours.reverse;
  if (total > 0 && Math.min(hours.forward, hours.reverse) < 0.02 * total) limits.push('one-way-only');
  return limits;
}

/** How well the record's intervals fit: median chi-square, its limit at the usual redundancy, share within. */
function fitOf(work: CalibrationWork): Calibration['chiSquare'] {
  const { chiSquare, redundancy, bins } = work;
  if (bins.count === 0) return { median: Number.NaN, limit: Number.NaN, shareWithin: Number.NaN };
  let within = 0;
  for (let bin = 0; bin < bins.count; bin += 1) {
    const limit = CHI_SQUARE_95[Math.min(CONTRASTS, redundancy[bin] as number)] as number;
    if ((chiSquare[bin] as number) <= limit) within += 1;
  }
  const usual = medianOf(redundancy.slice(), bins.count);
  return {
    median: medianOf(chiSquare.slice(), bins.count),
    limit: CHI_SQUARE_95[Math.min(CONTRASTS, Math.round(usual))] as number,
    shareWithin: within / bins.count,
  };
}
