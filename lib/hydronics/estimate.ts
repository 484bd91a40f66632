import { TON_BTU_PER_HOUR } from '../units';
import { densityFromCurves, enthalpyFromCurves, fluidCurves, specificHeatFromCurves, tempFFromCurves } from './fluids';
import type { FluidCurves } from './fluids';
import { markQuality } from './quality';
import { emptySlotInputs, readSlot } from './slot-inputs';
import type { SlotInputs } from './slot-inputs';
import { plantStates } from './state';
import { markSteady } from './steadiness';
import { DIRECTIONS, REASONS, RESULT_CHANNELS, STATES } from './types';
import type { Estimates, Measurements, PlantModel } from './types';
import { emptyStreams, emptyWayEvidence, readStreams, weighWay } from './way-evidence';
import { DECIDED_PROBABILITY, emptyVerdict, ninetyPercent, weighDirections } from './weigh-directions';
import type { Verdict } from './weigh-directions';

const OFF = STATES.indexOf('off');
const REASON_OFF = REASONS.indexOf('off');
const known = (value: number): boolean => value === value;

/** Empty result channels of a record's length: NaN everywhere. */
export function emptyEstimates(n: number): Estimates {
  const channels = RESULT_CHANNELS.map((channel) => [channel, new Float64Array(n).fill(Number.NaN)]);
  return Object.fromEntries(channels) as Estimates;
}

/** Every channel of a record has its length, or the call is wrong. */
function checkLengths(measurements: Measurements): void {
  const check = (name: string, channel: Float64Array | undefined) => {
    if (channel && channel.length !== measurements.n) {
      throw new RangeError(`estimateIntervals: ${name} has length ${channel.length}, the record ${measurements.n}`);
    }
  };
  for (const [name, value] of Object.entries(measurements) as [string, unknown][]) {
    if (value instanceof Float64Array) check(name, value);
    else if (Array.isArray(value)) {
      value.forEach((channel: Float64Array | undefined, index) => check(`${name}[${index}]`, channel));
    }
  }
}

/** Cooling of a flow between two enthalpies, its meter at `meterF`. */
const tons = (flowGpm: number, meterF: number, rise: number, curves: FluidCurves): number =>
  (60 * densityFromCurves(meterF, curves) * flowGpm * rise) / TON_BTU_PER_HOUR;

/** Return temperatures that no sensor gives but the balance does: equal in reverse flow, mixed at the tee in forward. */
function fillReturns(inputs: SlotInputs, verdict: Verdict, curves: FluidCurves): void {
  const { bypassGpm, primaryFlowGpm, secondaryFlowGpm, reverseProbability } = verdict;
  const reverse = reverseProbability >= DECIDED_PROBABILITY;
  const forward = reverseProbability <= 1 - DECIDED_PROBABILITY;
  if (!known(inputs.primaryReturnF)) {
    if (reverse) inputs.primaryReturnF = inputs.secondaryReturnF;
    else if (forward && primaryFlowGpm > 0) {
      const warm = enthalpyFromCurves(inputs.secondaryReturnF, curves);
      const share = Math.max(0, bypassGpm) / primaryFlowGpm;
      inputs.primaryReturnF = tempFFromCurves(warm - share * (warm - verdict.blend), curves);
    }
  }
  if (!known(inputs.secondaryReturnF)) {
    if (reverse) inputs.secondaryReturnF = inputs.primaryReturnF;
    else if (forward && secondaryFlowGpm > 0) {
      const mix = enthalpyFromCurves(inputs.primaryReturnF, curves);
      const share = Math.max(0, bypassGpm) / secondaryFlowGpm;
      inputs.secondaryReturnF = tempFFromCurves(mix + share * (mix - verdict.blend), curves);
    }
  }
}

/** Writes one slot's verdict and the temperatures and loads that follow from it. */
function writeSlot(out: Estimates, slot: number, inputs: SlotInputs, verdict: Verdict, curves: FluidCurves): void {
  const blendF = tempFFromCurves(verdict.blend, curves);
  const blendReachF = ninetyPercent(verdict.blendSigma) / specificHeatFromCurves(blendF, curves);
  if (!known(inputs.primarySupplyF) && verdict.reverseProbability <= 1 - DECIDED_PROBABILITY) {
    inputs.primarySupplyF = blendF;
  }
  fillReturns(inputs, verdict, curves);
  const bypassReach = ninetyPercent(verdict.bypassSigma);
  out.direction[slot] = DIRECTIONS.indexOf(verdict.direction);
  out.reason[slot] = REASONS.indexOf(verdict.reason);
  out.reverse_probability[slot] = verdict.reverseProbability;
  out.bypass_flow_gpm[slot] = verdict.bypassGpm;
  out.bypass_flow_lo_gpm[slot] = verdict.bypassGpm - bypassReach;
  out.bypass_flow_hi_gpm[slot] = verdict.bypassGpm + bypassReach;
  out.blended_supply_f[slot] = blendF;
  out.blended_supply_lo_f[slot] = blendF - blendReachF;
  out.blended_supply_hi_f[slot] = blendF + blendReachF;
  out.primary_flow_gpm[slot] = verdict.primaryFlowGpm;
  out.secondary_flow_gpm[slot] = verdict.secondaryFlowGpm;
  out.primary_supply_f[slot] = inputs.primarySupplyF;
  out.primary_return_f[slot] = inputs.primaryReturnF;
  out.secondary_return_f[slot] = inputs.secondaryReturnF;
  out.load_delta_t_f[slot] = inputs.secondaryReturnF - blendF;
  out.production_delta_t_f[slot] = inputs.primaryReturnF - inputs.primarySupplyF;

  const loadRise = enthalpyFromCurves(inputs.secondaryReturnF, curves) - verdict.blend;
  const bySecondary = tons(verdict.secondaryFlowGpm, blendF, loadRise, curves);
  if (known(bySecondary)) {
    out.load_tons[slot] = bySecondary;
  } else {
    // Load equals production over the whole decoupler, whichever way the common pipe runs.
    const productionRise =
      enthalpyFromCurves(inputs.primaryReturnF, curves) - enthalpyFromCurves(inputs.primarySupplyF, curves);
    out.load_tons[slot] = tons(verdict.primaryFlowGpm, inputs.primarySupplyF, productionRise, curves);
  }
}

/** An idle plant: what is measured is passed on, nothing is concluded from standing water. */
function writeOff(out: Estimates, slot: number, inputs: SlotInputs): void {
  out.direction[slot] = DIRECTIONS.indexOf('unknown');
  out.reason[slot] = REASON_OFF;
  out.primary_flow_gpm[slot] = inputs.primaryFlowGpm;
  out.secondary_flow_gpm[slot] = inputs.secondaryFlowGpm;
  out.primary_supply_f[slot] = inputs.primarySupplyF;
  out.primary_return_f[slot] = inputs.primaryReturnF;
  out.secondary_return_f[slot] = inputs.secondaryReturnF;
}

/**
 * What each interval of a record says about the common pipe: direction with its probability, bypass flow and blended
 * supply with their central 90 % intervals, the loads and the plant's state. From whichever points exist; none in
 * particular is required. First-order uncertainty; sensors' lasting offsets are not yet estimated.
 *
 * Both directions are weighed (way-evidence.ts) and mixed by their probability (weigh-directions.ts). Flows are taken at
 * one density: their volume differs by less than 0.07 % between the tees, far below any meter's doubt; the mixing of
 * temperatures is exact in enthalpy. Intervals are widened by what the measurements disagree; where they fit neither
 * direction, it is unknown with the reason 'sensors contradict', and flows and supply are passed on as measured.
 *
 * Shapes  every channel has length n; so has every result channel. Codes index DIRECTIONS, STATES and REASONS.
 * Units   as named: deg F, gpm, tons. Bypass is positive from supply to return.
 * Gaps    NaN in; what cannot be known is NaN out. Without any flow the direction is still found from temperatures and
 *         flows are NaN. While the plant is off nothing is concluded (reason 'off').
 * Throws  RangeError when a channel's length is not n, or a glycol's mass percent is outside 0 to 60.
 * Source  steady balances of mass and energy at both tees; JCGM 100:2008, 5.1.2; Bayes' rule with equal prior odds.
 */
export function estimateIntervals(measurements: Measurements, plant: PlantModel): Estimates {
  checkLengths(measurements);
  const out = emptyEstimates(measurements.n);
  plantStates(measurements, plant, out.state);
  markSteady(measurements, plant, out.steady);
  markQuality(measurements, out.quality);
  const curves = fluidCurves(plant.fluid);
  // Sensors' sigmas are small: one specific heat turns them into enthalpy to within 0.5 %.
  const btuPerLbF = specificHeatFromCurves(plant.productionSupplyF + plant.loadDeltaTF / 2, curves);
  const inputs = emptySlotInputs();
  const streams = emptyStreams();
  const forward = emptyWayEvidence();
  const reverse = emptyWayEvidence();
  const verdict = emptyVerdict();
  for (let slot = 0; slot < measurements.n; slot += 1) {
    readSlot(measurements, plant, slot, inputs);
    if (out.state[slot] === OFF) {
      writeOff(out, slot, inputs);
      continue;
    }
    readStreams(inputs, curves, streams);
    weighWay('forward', inputs, streams, btuPerLbF, forward);
    weighWay('reverse', inputs, streams, btuPerLbF, reverse);
    weighDirections(plant.arrangement, forward, reverse, inputs, verdict);
    writeSlot(out, slot, inputs, verdict, curves);
  }
  return out;
}
