import { TON_BTU_PER_HOUR } from '../units';
import type { Calibration } from './calibration-types';
import { densityFromCurves, fluidCurves, specificHeatFromCurves } from './fluids';
import type { FluidCurves } from './fluids';
import { placeHeader } from './header-side';
import { readLoop } from './loop-record';
import type { LoopRecord } from './loop-record';
import { fromMixing, mixingScale, toMixing } from './mixing-scale';
import type { MixingScale } from './mixing-scale';
import { NINETY_PERCENT_Z } from './normal';
import { markQuality } from './quality';
import { emptySlotValues, fillReading } from './read-slot';
import { errorsAtSlot, errorsOfCalibration, errorsOfClass } from './sensor-errors';
import { emptySlotReading } from './slot-reading';
import { plantStates } from './state';
import { markSteady } from './steadiness';
import { DIRECTIONS, REASONS, RESULT_CHANNELS, STATES } from './types';
import type { Estimates, Measurements, PlantModel } from './types';
import { emptyVerdict, settleNothing } from './verdict';
import type { Verdict } from './verdict';
import { slotAverager } from './slot-average';
import { at } from './units-on';
import { emptyWeighing, usualBothPrior, weighSlot } from './weigh-slot';

const OFF = STATES.indexOf('off');
const UNKNOWN = DIRECTIONS.indexOf('unknown');
const REASON_OFF = REASONS.indexOf('off');
const codes = <Word extends string>(words: readonly Word[]) =>
  Object.fromEntries(words.map((word, code) => [word, code])) as Record<Word, number>;
const DIRECTION_CODE = codes(DIRECTIONS);
const REASON_CODE = codes(REASONS);
const UNPLACED = { side: 'unknown' as const, primaryProbability: Number.NaN };
const known = (value: number): boolean => value === value;

/** Empty result channels of a record's length: NaN everywhere. */
export function emptyEstimates(n: number): Estimates {
  const channels = RESULT_CHANNELS.map((channel) => [channel, new Float64Array(n).fill(Number.NaN)]);
  return Object.fromEntries(channels) as Estimates;
}

/** Every channel of a record has its length, or the call is wrong. */
export function checkLengths(measurements: Measurements, caller: string): void {
  const check = (name: string, channel: Float64Array | undefined) => {
    if (channel && channel.length !== measurements.n) {
      throw new RangeError(`${caller}: ${name} has length ${channel.length}, the record ${measurements.n}`);
    }
  };
  for (const [name, value] of Object.entries(measurements) as [string, unknown][]) {
    if (value instanceof Float64Array) check(name, value);
    else if (Array.isArray(value)) {
      value.forEach((channel: Float64Array | undefined, index) => check(`${name}[${index}]`, channel));
    }
  }
}

/** Turns flow and rise on the mixing scale into tons: the heat factor at the base, bent by density at the meter. */
interface HeatScale {
  tonsPerGpmF: number;
  baseF: number;
  /** Relative slope and curvature of density, 1/F and 1/F^2. */
  slope: number;
  bend: number;
}

function heatScale(scale: MixingScale, curves: FluidCurves): HeatScale {
  const { baseF } = scale;
  const reachF = 8;
  const density = densityFromCurves(baseF, curves);
  const above = densityFromCurves(baseF + reachF, curves) / density;
  const below = densityFromCurves(baseF - reachF, curves) / density;
  return {
    tonsPerGpmF: (60 * density * specificHeatFromCurves(baseF, curves)) / TON_BTU_PER_HOUR,
    baseF,
    slope: (above - below) / (2 * reachF),
    bend: (above - 2 + below) / (2 * reachF * reachF),
  };
}

/** Cooling of a flow between two temperatures of the mixing scale, its meter at the first. */
function tons(flowGpm: number, supply: number, back: number, heat: HeatScale): number {
  const away = supply - heat.baseF;
  return heat.tonsPerGpmF * (1 + away * (heat.slope + heat.bend * away)) * flowGpm * (back - supply);
}

/** Writes one slot's verdict and the temperatures and loads that follow from it. */
function writeSlot(out: Estimates, slot: number, verdict: Verdict, scale: MixingScale, heat: HeatScale): void {
  const t = verdict.temperatures;
  const primarySupplyF = fromMixing(t[0] as number, scale);
  const primaryReturnF = fromMixing(t[1] as number, scale);
  const blendF = fromMixing(t[2] as number, scale);
  const secondaryReturnF = fromMixing(t[3] as number, scale);
  const blendReachF = NINETY_PERCENT_Z * verdict.blendSigma;
  out.direction[slot] = DIRECTION_CODE[verdict.direction];
  out.reason[slot] = REASON_CODE[verdict.reason];
  out.chi_square[slot] = verdict.chiSquare;
  out.redundancy[slot] = verdict.redundancy;
  out.at_odds[slot] = verdict.atOdds;
  out.reverse_probability[slot] = verdict.reverseProbability;
  out.bypass_flow_gpm[slot] = verdict.bypassGpm;
  out.bypass_flow_lo_gpm[slot] = verdict.bypassLoGpm;
  out.bypass_flow_hi_gpm[slot] = verdict.bypassHiGpm;
  out.blended_supply_f[slot] = blendF;
  out.blended_supply_lo_f[slot] = blendF - blendReachF;
  out.blended_supply_hi_f[slot] = blendF + blendReachF;
  out.primary_flow_gpm[slot] = verdict.primaryFlowGpm;
  out.secondary_flow_gpm[slot] = verdict.secondaryFlowGpm;
  out.primary_supply_f[slot] = primarySupplyF;
  out.primary_return_f[slot] = primaryReturnF;
  out.secondary_return_f[slot] = secondaryReturnF;
  out.load_delta_t_f[slot] = secondaryReturnF - blendF;
  out.production_delta_t_f[slot] = primaryReturnF - primarySupplyF;
  const bySecondary = tons(verdict.secondaryFlowGpm, t[2] as number, t[3] as number, heat);
  // Load equals production over the whole decoupler, whichever way the common pipe runs.
  out.load_tons[slot] = known(bySecondary)
    ? bySecondary
    : tons(verdict.primaryFlowGpm, t[0] as number, t[1] as number, heat);
}

/** An idle plant: what is measured is passed on, nothing is concluded from standing water. */
function writeOff(out: Estimates, slot: number, loop: LoopRecord, scale: MixingScale): void {
  const temperature = (i: number) => {
    const channel = loop.temperatures[i];
    return channel ? fromMixing(channel[slot] as number, scale) : Number.NaN;
  };
  out.direction[slot] = UNKNOWN;
  out.reason[slot] = REASON_OFF;
  out.primary_flow_gpm[slot] = loop.flows[0]?.[slot] ?? Number.NaN;
  out.secondary_flow_gpm[slot] = loop.flows[1]?.[slot] ?? Number.NaN;
  out.primary_supply_f[slot] = temperature(0);
  out.primary_return_f[slot] = temperature(1);
  out.secondary_return_f[slot] = temperature(3);
}

/**
 * What each interval of a record says about the common pipe: direction with its probability, bypass flow and blended
 * supply with their central 90 % intervals, the loads and the plant's state. From whichever points exist; none in
 * particular is required.
 *
 * Each interval's readings are corrected by the calibration (calibrate.ts) and weighed with the full covariance of their
 * errors, so that what lasts does not average away. Without a calibration the sensors' classes stand for it. Both ways are
 * fitted (way-fit.ts), their likelihoods integrated over the share that crosses over, and mixed (verdict.ts).
 *
 * Shapes  every channel has length n; so has every result channel. Codes index DIRECTIONS, STATES and REASONS.
 * Units   as named: deg F, gpm, tons. Bypass is positive from supply to return. Mixing is in enthalpy; flows are taken at
 *         one density (their volume differs by less than 0.07 % between the tees).
 * Gaps    NaN in; what cannot be known is NaN out. Without any flow the direction is still found from temperatures and
 *         flows are NaN. While the plant is off nothing is concluded (reason 'off').
 * Throws  RangeError when a channel's length is not n, or a glycol's mass percent is outside 0 to 60.
 * Source  steady balances of mass and energy at both tees; generalized least squares; Bayes' rule.
 */
export function estimateIntervals(record: Measurements, plant: PlantModel, calibration?: Calibration): Estimates {
  checkLengths(record, 'estimateIntervals');
  const measurements = placeHeader(record, calibration?.header ?? UNPLACED);
  const out = emptyEstimates(measurements.n);
  plantStates(measurements, plant, out.state);
  markSteady(measurements, plant, out.steady);
  markQuality(record, out.quality);
  const scale = mixingScale(plant.productionSupplyF + plant.loadDeltaTF / 2, plant.fluid);
  const heat = heatScale(scale, fluidCurves(plant.fluid));
  const loop = readLoop(measurements, plant, scale, calibration?.sets);
  const errors = calibration ? errorsOfCalibration(calibration) : errorsOfClass(plant, loop.sets);
  const average = slotAverager(loop, errors, out.state);
  const values = emptySlotValues();
  const reading = emptySlotReading();
  const weighing = emptyWeighing(
    calibration?.shareScale ?? Number.POSITIVE_INFINITY,
    calibration?.swingShare ?? usualBothPrior(measurements.stepMinutes),
  );
  const verdict = emptyVerdict();
  // Slot whose values the verdict is of: neighbours that share them share it.
  let weighed = -1;
  for (let slot = 0; slot < measurements.n; slot += 1) {
    if (out.state[slot] === OFF) {
      writeOff(out, slot, loop, scale);
      continue;
    }
    const from = average(slot, values, weighed);
    if (from === weighed) {
      writeSlot(out, slot, verdict, scale, heat);
      continue;
    }
    weighed = from;
    const setpointF = at(measurements.supplySetpointF, slot);
    const supply = toMixing(setpointF > 20 && setpointF < 80 ? setpointF : plant.productionSupplyF, scale);
    const slotErrors = errorsAtSlot(loop, errors, slot);
    fillReading(loop, slot, values, slotErrors, errors, calibration !== undefined, supply, plant.loadDeltaTF, reading);
    if (weighSlot(plant.arrangement, reading, weighing, verdict)) writeSlot(out, slot, verdict, scale, heat);
    else {
      settleNothing(reading, verdict);
      writeSlot(out, slot, verdict, scale, heat);
    }
  }
  return out;
}
