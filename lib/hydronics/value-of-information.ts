import type { Calibration, FurtherSensor, SensorRole } from './calibration-types';
import { placeHeader } from './header-side';
import { FB, FLOWS, FP, FS, PR, PS, readLoop, SR, SS, TB, TEMPERATURES } from './loop-record';
import { mixingScale } from './mixing-scale';
import { emptySlotValues, fillReading } from './read-slot';
import { errorsAtSlot, errorsOfCalibration } from './sensor-errors';
import { copyReading } from './set-aside';
import { slotAverager } from './slot-average';
import { emptySlotReading } from './slot-reading';
import type { SlotReading } from './slot-reading';
import { plantStates } from './state';
import { STATES } from './types';
import type { Measurements, PlantModel } from './types';
import { emptyVerdict } from './verdict';
import type { Verdict } from './verdict';
import { emptyWeighing, weighSlot } from './weigh-slot';

/** Intervals of the record that are tried with each further sensor. */
const TRIED = 240;
/** What a new sensor is supposed to be worth: class A resistance thermometer, full-bore or well-placed meter (k = 1). */
const NEW_TEMPERATURE_SIGMA_F = 0.17;
const NEW_FLOW_PERCENT = 1.5;
/** The pipe's own sensor drifts while it stands; a bypass meter is often near cut-off (common practice). */
const NEW_PIPE_SIGMA_F = 0.3;
const NEW_BYPASS_PERCENT = 3;
/** A better sensor of a kind that is there is asked for only where it is at least this much better. */
const BETTER = 0.6;
/** What narrows by less than this is not worth a trend. */
const NARROWER = 0.97;
const RUNNING = STATES.indexOf('running');

interface Candidate {
  role: SensorRole;
  index: number;
  flow: boolean;
  sigma: number;
}

const CANDIDATES: readonly Candidate[] = [
  { role: 'primarySupplyTemp', index: PS, flow: false, sigma: NEW_TEMPERATURE_SIGMA_F },
  { role: 'primaryReturnTemp', index: PR, flow: false, sigma: NEW_TEMPERATURE_SIGMA_F },
  { role: 'secondarySupplyTemp', index: SS, flow: false, sigma: NEW_TEMPERATURE_SIGMA_F },
  { role: 'secondaryReturnTemp', index: SR, flow: false, sigma: NEW_TEMPERATURE_SIGMA_F },
  { role: 'bypassTemp', index: TB, flow: false, sigma: NEW_PIPE_SIGMA_F },
  { role: 'primaryFlow', index: FP, flow: true, sigma: NEW_FLOW_PERCENT },
  { role: 'secondaryFlow', index: FS, flow: true, sigma: NEW_FLOW_PERCENT },
  { role: 'bypassFlow', index: FB, flow: true, sigma: NEW_BYPASS_PERCENT },
];

/** Puts a further sensor into a reading at the value the estimate expects there, independent of all others. */
function addSensor(reading: SlotReading, candidate: Candidate, verdict: Verdict): boolean {
  const { index, flow, sigma } = candidate;
  if (!flow) {
    const value =
      index === TB
        ? verdict.reverseProbability > 0.5
          ? (verdict.temperatures[SR] as number)
          : (verdict.temperatures[PS] as number)
        : (verdict.temperatures[index] as number);
    if (Number.isNaN(value)) return false;
    for (let j = 0; j < TEMPERATURES; j += 1) {
      reading.temperatureCovariance[index * TEMPERATURES + j] = 0;
      reading.temperatureCovariance[j * TEMPERATURES + index] = 0;
    }
    for (let j = 0; j < FLOWS; j += 1) reading.crossCovariance[index * FLOWS + j] = 0;
    reading.temperatures[index] = value;
    reading.measured[index] = 1;
    reading.temperatureCovariance[index * TEMPERATURES + index] = sigma * sigma;
    return true;
  }
  const value = index === FP ? verdict.primaryFlowGpm : index === FS ? verdict.secondaryFlowGpm : verdict.bypassGpm;
  if (Number.isNaN(value)) return false;
  for (let j = 0; j < FLOWS; j += 1) {
    reading.flowCovariance[index * FLOWS + j] = 0;
    reading.flowCovariance[j * FLOWS + index] = 0;
  }
  for (let i = 0; i < TEMPERATURES; i += 1) reading.crossCovariance[i * FLOWS + index] = 0;
  const floorGpm = index === FB ? 0.01 * Math.max(verdict.primaryFlowGpm, verdict.secondaryFlowGpm) : 0;
  reading.flows[index] = value;
  reading.flowCovariance[index * FLOWS + index] = ((sigma / 100) * value) ** 2 + floorGpm ** 2;
  if (index === FB) reading.bypassUnsigned = false;
  return true;
}

/** What a record's intervals know: mean half-width of the bypass interval, and how many have no direction. */
interface Knowledge {
  halfWidth: number;
  unknown: number;
  counted: number;
}

/**
 * By how much each further sensor, or a better one, would narrow this record's answer: intervals spread evenly over its
 * running time are weighed again as if the sensor had been there, reading what the estimate expects, with its usual
 * uncertainty. Ranked by what is left of the half-width, then of the unknown hours; those that would change nothing are left out.
 *
 * Shapes  as Measurements. Units: gpm; a share of the main flow where no flow is measured.
 * Gaps    no running interval: an empty list. A flow cannot be tried where no flow sets the scale: left out.
 * Throws  RangeError when a glycol's mass percent is outside 0 to 60.
 * Source  expected posterior width with the predicted reading (preposterior analysis, D. V. Lindley, Ann. Math. Stat. 27
 *         (1956) 986), at the mean of the reading.
 */
export function furtherSensors(record: Measurements, plant: PlantModel, calibration: Calibration): FurtherSensor[] {
  const measurements = placeHeader(record, calibration.header);
  const state = new Float64Array(measurements.n);
  plantStates(measurements, plant, state);
  const scale = mixingScale(plant.productionSupplyF + plant.loadDeltaTF / 2, plant.fluid);
  const loop = readLoop(measurements, plant, scale, calibration.sets);
  const errors = errorsOfCalibration(calibration);
  const average = slotAverager(loop, errors, state);
  const running: number[] = [];
  for (let slot = 0; slot < measurements.n; slot += 1) if (state[slot] === RUNNING) running.push(slot);
  const stride = Math.max(1, Math.ceil(running.length / TRIED));
  const tried = running.filter((_, index) => index % stride === 0);
  const values = emptySlotValues();
  const [reading, trial] = [emptySlotReading(), emptySlotReading()];
  const [verdict, again] = [emptyVerdict(), emptyVerdict()];
  const weighing = emptyWeighing(calibration.shareScale, calibration.swingShare);
  const inGpm = loop.flows.some((flow) => flow !== null);

  const know = (candidate: Candidate | null): Knowledge => {
    const sum: Knowledge = { halfWidth: 0, unknown: 0, counted: 0 };
    for (const slot of tried) {
      average(slot, values);
      const slotErrors = errorsAtSlot(loop, errors, slot);
      fillReading(loop, slot, values, slotErrors, errors, true, plant.productionSupplyF, plant.loadDeltaTF, reading);
      if (!weighSlot(plant.arrangement, reading, weighing, verdict)) {
        sum.unknown += 1;
        continue;
      }
      let said = verdict;
      if (candidate) {
        copyReading(reading, trial);
        if (addSensor(trial, candidate, verdict) && weighSlot(plant.arrangement, trial, weighing, again)) said = again;
      }
      if (said.direction === 'unknown') sum.unknown += 1;
      const half = inGpm
        ? (said.bypassHiGpm - said.bypassLoGpm) / 2
        : 1.645 *
          Math.sqrt(said.reverseProbability > 0.5 ? weighing.reverse.shareVariance : weighing.forward.shareVariance);
      if (!Number.isFinite(half)) continue;
      sum.halfWidth += half;
      sum.counted += 1;
    }
    return { ...sum, halfWidth: sum.counted > 0 ? sum.halfWidth / sum.counted : Number.NaN };
  };

  if (tried.length === 0) return [];
  const now = know(null);
  const hours = (count: number) => (count * stride * measurements.stepMinutes) / 60;
  const found: FurtherSensor[] = [];
  for (const candidate of CANDIDATES) {
    const kind = kindOf(candidate, calibration);
    if (!kind || (candidate.flow && !inGpm)) continue;
    const withIt = know(candidate);
    const narrows =
      withIt.halfWidth < NARROWER * now.halfWidth ||
      (withIt.unknown < now.unknown - 1 && withIt.halfWidth <= now.halfWidth);
    if (!narrows && !(Number.isNaN(now.halfWidth) && !Number.isNaN(withIt.halfWidth))) continue;
    found.push({
      role: candidate.role,
      kind,
      sigma: candidate.sigma,
      nowHalfWidth: now.halfWidth,
      withHalfWidth: withIt.halfWidth,
      unit: inGpm ? 'gpm' : 'share',
      nowUnknownHours: hours(now.unknown),
      withUnknownHours: hours(withIt.unknown),
    });
  }
  return found.sort((a, b) => a.withHalfWidth - b.withHalfWidth || a.withUnknownHours - b.withUnknownHours);
}

/** Whether a candidate would be new, better than what is there, or neither. */
function kindOf(candidate: Candidate, calibration: Calibration): 'new' | 'better' | null {
  const finding = calibration.findings.find((each) => each.role === candidate.role);
  if (!finding) return 'new';
  const sigma = (finding.hi - finding.lo) / (2 * 1.645);
  return candidate.sigma < BETTER * Math.hypot(sigma, finding.noise || 0) ? 'better' : null;
}
