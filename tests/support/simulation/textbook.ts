import type { Measurements, PlantModel } from '@/lib/hydronics/types';
import type { SimulatedPlant } from './types';

/** Spans between supply and return below this say nothing. */
const LEAST_SPAN_F = 0.5;

/** What the textbook makes of a record. Positive forward; NaN where a reading it needs is missing. */
export interface TextbookEstimate {
  /** NaN throughout where the record gives no flow. */
  bypassGpm: Float64Array;
  /** Of the larger main flow, from temperatures alone. */
  share: Float64Array;
}

const clamp = (value: number, low: number, high: number): number => Math.min(high, Math.max(low, value));
const at = (channel: Float64Array | undefined, slot: number): number => channel?.[slot] ?? Number.NaN;

/** Status of a unit's pump, else of the unit: 0 to 1. */
const statusOf = (record: Measurements, unit: number, slot: number): number => {
  const pump = at(record.primaryPumpStatus[unit], slot);
  return Number.isNaN(pump) ? at(record.unitStatus[unit], slot) : pump;
};

/** Primary meter, else the rated flows of the pumps that run; a variable pump has no rated flow to go by. */
function primaryGpm(record: Measurements, plant: PlantModel, slot: number): number {
  if (record.primaryFlowGpm) return Math.max(0, at(record.primaryFlowGpm, slot));
  if (plant.primarySpeed === 'variable') return Number.NaN;
  return plant.units.reduce((sum, unit, index) => sum + unit.flowGpm * statusOf(record, index, slot), 0);
}

/** Primary supply sensor, else the mean of the running units' leaving temperatures by their rated flow. */
function primarySupplyF(record: Measurements, plant: PlantModel, slot: number): number {
  if (record.primarySupplyF) return at(record.primarySupplyF, slot);
  let flow = 0;
  let heat = 0;
  plant.units.forEach((unit, index) => {
    const gpm = unit.flowGpm * statusOf(record, index, slot);
    if (!(gpm > 0)) return;
    flow += gpm;
    heat += gpm * at(record.unitLeavingF[index], slot);
  });
  return flow > 0 ? heat / flow : Number.NaN;
}

/**
 * Signed share from temperatures: deficit beta = (Tss - Tps) / (Tsr - Tps) of the secondary flow (negative) or surplus
 * alpha = (Tsr - Tpr) / (Tsr - Tps) of the primary flow, whichever is larger, each held to 0..1. NaN without a span.
 */
export function textbookShare(supplyF: number, returnF: number, blendF: number, mixF: number): number {
  const span = returnF - supplyF;
  if (!(span > LEAST_SPAN_F)) return Number.NaN;
  const beta = clamp((blendF - supplyF) / span, 0, 1);
  const alpha = clamp((returnF - mixF) / span, 0, 1);
  if (Number.isNaN(alpha)) return -beta;
  return Number.isNaN(beta) || alpha >= beta ? alpha : -beta;
}

/**
 * The textbook formula on a record as it stands, the reference that the estimator is compared with: Fp - Fs where both
 * flows are known (rated flow times status standing in for a primary meter), else the temperatures' share times the
 * known flow, else the share alone. Held to what pipes and pumps can do, so that it is not made to look absurd: a
 * flow inferred beside a known one is at most all units' largest flow, or 1.2 times the distribution pumps' design.
 *
 * Shapes  length n. Units: gpm; a fraction of the larger main flow. Gaps: NaN where a reading is missing.
 */
export function textbookBypass(record: Measurements, plant: PlantModel): TextbookEstimate {
  const bypassGpm = new Float64Array(record.n);
  const shares = new Float64Array(record.n);
  const mostPrimaryGpm = plant.units.reduce((sum, unit) => sum + unit.maxFlowGpm, 0);
  const mostSecondaryGpm = 1.2 * plant.distributionPumps.flowGpm;
  for (let slot = 0; slot < record.n; slot += 1) {
    const primary = primaryGpm(record, plant, slot);
    const secondary = Math.max(0, at(record.secondaryFlowGpm, slot));
    const share = textbookShare(
      primarySupplyF(record, plant, slot),
      at(record.secondaryReturnF, slot),
      at(record.secondarySupplyF, slot),
      at(record.primaryReturnF, slot),
    );
    shares[slot] = share;
    if (Number.isNaN(primary)) {
      const most = Math.max(0, mostPrimaryGpm - secondary);
      bypassGpm[slot] = share >= 0 ? Math.min(most, (secondary * share) / (1 - share)) : share * secondary;
    } else if (Number.isNaN(secondary)) {
      const most = Math.max(0, mostSecondaryGpm - primary);
      bypassGpm[slot] = share >= 0 ? share * primary : Math.max(-most, (primary * share) / (1 + share));
    } else bypassGpm[slot] = primary - secondary;
  }
  return { bypassGpm, share: shares };
}

/** The textbook formula on a simulated plant's raw record. */
export const textbookOf = (sim: SimulatedPlant): TextbookEstimate => textbookBypass(sim.measurements, sim.plant);
