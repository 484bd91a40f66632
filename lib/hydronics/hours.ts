import { TON_BTU_PER_HOUR } from '../units';
import { excessEnergyKwh } from './excess-energy';
import { loadSide } from './expected-delta-t';
import type { LoadSide } from './expected-delta-t';
import { heatFactorBtuPerHourPerGpmF } from './fluids';
import { hourCause } from './hour-cause';
import { hourNeeds } from './hour-needs';
import { sumHour } from './hour-sums';
import type { HourSums } from './hour-sums';
import { deltaTFromTonsF } from './design-flow';
import type { Estimates, HourResult, Measurements, PlantModel } from './types';

const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;
/** A local clock hour lasts at most this long (zones that shift by half an hour); a later start is a gap in the list. */
const LONGEST_HOUR_MS = 90 * MINUTE_MS;
/** Less running than this is no hour to judge (start-up and shut-down tails). */
const LEAST_RUNNING_MINUTES = 15;

/** Where the record's slots lie in time. */
export interface Slots {
  /** UTC instant of slot 0. */
  startMs: number;
  stepMinutes: number;
}

/** Load over flow on the distribution side; the plain mean of degrees when there is no flow. */
function hourDeltaTF(plant: PlantModel, sums: HourSums): number {
  if (!(sums.pairedFlowGpm > 0)) return sums.meanLoadDeltaTF;
  const supplyF = Number.isNaN(sums.blendedSupplyF) ? plant.productionSupplyF : sums.blendedSupplyF;
  const middleF = supplyF + (Number.isNaN(sums.meanLoadDeltaTF) ? plant.loadDeltaTF : sums.meanLoadDeltaTF) / 2;
  const factor = heatFactorBtuPerHourPerGpmF(middleF, plant.fluid);
  return (sums.pairedLoadTons * TON_BTU_PER_HOUR) / (factor * sums.pairedFlowGpm);
}

/** Design delta-T of the production side: all units' tons over all units' flow. */
function designProductionDeltaTF(plant: PlantModel): number {
  let tons = 0;
  let flowGpm = 0;
  for (const unit of plant.units) {
    tons += unit.tons;
    flowGpm += unit.flowGpm;
  }
  return deltaTFromTonsF(tons, flowGpm, plant.productionSupplyF, plant.fluid);
}

function hourResult(
  plant: PlantModel,
  side: LoadSide,
  productionDesignF: number,
  hourStartMs: number,
  sums: HourSums,
): HourResult {
  const deltaTF = hourDeltaTF(plant, sums);
  const needs = hourNeeds(plant, side, sums);
  const low =
    sums.runningMinutes >= LEAST_RUNNING_MINUTES &&
    sums.loadTons > plant.lowLoadShare * plant.loadTons &&
    (deltaTF < plant.lowDeltaTShare * plant.loadDeltaTF ||
      sums.productionDeltaTF < plant.lowDeltaTShare * productionDesignF);
  const { cause, confidence } = low
    ? hourCause(plant, side, sums, needs, deltaTF)
    : { cause: 'none' as const, confidence: Number.NaN };
  // An hour within the plant's own limits is not charged with what an ideal coil would have saved.
  const energyKwh = low ? excessEnergyKwh(plant, sums, needs) : 0;
  return {
    hourStartMs,
    low,
    runningMinutes: sums.runningMinutes,
    loadTons: sums.loadTons,
    deltaTF,
    expectedDeltaTF: needs.expectedDeltaTF,
    productionDeltaTF: sums.productionDeltaTF,
    primaryFlowGpm: sums.primaryFlowGpm,
    secondaryFlowGpm: sums.secondaryFlowGpm,
    bypassFlowGpm: sums.bypassFlowGpm,
    primarySupplyF: sums.primarySupplyF,
    reverseMinutes: sums.reverseMinutes,
    forwardMinutes: sums.forwardMinutes,
    stillMinutes: sums.stillMinutes,
    unknownMinutes: sums.unknownMinutes,
    reverseFlowGpm: sums.reverseFlowGpm,
    reverseFlowMaxGpm: sums.reverseFlowMaxGpm,
    blendedSupplyF: sums.blendedSupplyF,
    blendedSupplyMaxF: sums.blendedSupplyMaxF,
    excessFlowGpm: needs.excessFlowGpm,
    avoidableFlowGpm: needs.avoidableFlowGpm,
    cause,
    causeConfidence: confidence,
    excessEnergyKwh: energyKwh,
    excessCost: plant.energyPerKwh === null ? Number.NaN : energyKwh * plant.energyPerKwh,
    strandedTons: needs.strandedTons,
    unitsRunning: sums.unitsOn ? sums.unitsOn.length : Number.NaN,
    quality: sums.quality,
  };
}

/**
 * The hour table of a record: loads, delta-T against what healthy coils would make, direction minutes, excess and
 * avoidable flow, cause, energy and cost, one row a local clock hour. Only intervals in state `running` are judged;
 * `unknownMinutes` also counts those of unknown state. An hour is low when its load is above the plant's share of design
 * and its load-side or production-side delta-T is below the plant's share of design, with 15 minutes of running at least.
 *
 * Shapes  `hourStartsMs` ascending UTC instants; an hour takes the slots that start in it, up to the next start (or 60
 *         minutes when that is more than 90 away). One result a start, in order.
 * Units   as named; means over running intervals; delta-T from sums (load over flow), never a mean of ratios.
 * Gaps    slots outside the record count as missing; an hour without running intervals has NaN figures and 0 minutes.
 * Throws  RangeError when the step differs from the record's, or the estimates' length from the record's.
 * Source  definitions of the hour row in the API; formulas in the modules named.
 */
export function summariseHours(
  estimates: Estimates,
  measurements: Measurements,
  plant: PlantModel,
  slots: Slots,
  hourStartsMs: readonly number[],
): HourResult[] {
  if (slots.stepMinutes !== measurements.stepMinutes) {
    throw new RangeError(`summariseHours: step ${slots.stepMinutes} min, the record ${measurements.stepMinutes} min`);
  }
  if (estimates.state.length !== measurements.n) {
    throw new RangeError(`summariseHours: ${estimates.state.length} estimates for ${measurements.n} intervals`);
  }
  const side = loadSide(plant);
  const productionDesignF = designProductionDeltaTF(plant);
  const stepMs = slots.stepMinutes * MINUTE_MS;
  const slotAt = (ms: number) => Math.ceil((ms - slots.startMs) / stepMs);
  return hourStartsMs.map((startMs, index) => {
    const nextMs = hourStartsMs[index + 1] ?? Number.POSITIVE_INFINITY;
    const endMs = nextMs - startMs <= LONGEST_HOUR_MS ? nextMs : startMs + HOUR_MS;
    const sums = sumHour(estimates, measurements, plant, slotAt(startMs), slotAt(endMs));
    return hourResult(plant, side, productionDesignF, startMs, sums);
  });
}
