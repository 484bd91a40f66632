import { flowFromTonsGpm } from './design-flow';
import { expectedDeltaTF } from './expected-delta-t';
import type { LoadSide } from './expected-delta-t';
import type { HourSums } from './hour-sums';
import { productionFlowGpm, smallestSet, unitSets } from './unit-sets';
import type { UnitSet } from './unit-sets';
import type { PlantModel } from './types';

/** Without unit status a set is judged by its flow; meters agree with ratings to about this (common practice). */
const RATED_FLOW_TOLERANCE = 0.1;

/** What an hour's load needed, beside what it got. Flows in gpm, NaN where unknown. */
export interface HourNeeds {
  expectedDeltaTF: number;
  /** Flow at the expected delta-T, and at the one attainable with the set-point that was in force. */
  expectedFlowGpm: number;
  attainableFlowGpm: number;
  excessFlowGpm: number;
  /** Distribution flow beyond the attainable. */
  distributionAvoidableGpm: number;
  /** Production flow that a smaller set of units could do without, once distribution flow is as attainable. */
  productionAvoidableGpm: number;
  /** The same while distribution flow stays as it is: what curing the surplus alone saves. */
  surplusGpm: number;
  avoidableFlowGpm: number;
  /** The units that ran, and the smallest set of them that carries the load at design delta-T. */
  running: UnitSet | undefined;
  carrying: UnitSet | undefined;
  strandedTons: number;
}

/** Larger of two where either may be missing. */
const larger = (a: number, b: number): number => (Number.isNaN(a) ? b : Number.isNaN(b) ? a : Math.max(a, b));
const positive = (value: number): number => (value < 0 ? 0 : value);

export const primarySpeed = (plant: PlantModel): 'constant' | 'variable' =>
  plant.primarySpeed ?? (plant.arrangement === 'variable-primary' ? 'variable' : 'constant');

/** Production flow beyond what the smallest set needs while the distribution side takes `flowGpm`. */
function productionBeyond(plant: PlantModel, sums: HourSums, sets: readonly UnitSet[], flowGpm: number): number {
  const speed = primarySpeed(plant);
  const set = smallestSet(sets, sums.loadTons, flowGpm, speed);
  if (!set) return Number.NaN;
  const all = sums.unitsOn ? sets.at(-1) : undefined;
  if (all && speed === 'constant') {
    // By shares of the running units' ratings: a meter that reads high is no flow to be saved.
    return positive(sums.primaryFlowGpm * (1 - set.designFlowGpm / all.designFlowGpm));
  }
  const neededGpm = productionFlowGpm(set, flowGpm, speed);
  const tolerance = speed === 'constant' ? 1 + RATED_FLOW_TOLERANCE : 1;
  return sums.primaryFlowGpm > tolerance * neededGpm ? sums.primaryFlowGpm - neededGpm : 0 * sums.primaryFlowGpm;
}

/**
 * What an hour's load needed: flow at expected and at attainable delta-T, the smallest set of the running units that
 * carries it, and so what was in excess, what of that could have been avoided, and what rated tons ran for nothing.
 *
 * Units   tons, gpm, deg F.
 * Gaps    NaN where the load, a flow or the running units are not known; without unit status all units count as at hand
 *         and nothing is called stranded.
 * Source  load over delta-T; the sets: lib/hydronics/unit-sets.ts; definitions as in the hour row of the API.
 */
export function hourNeeds(plant: PlantModel, side: LoadSide, sums: HourSums): HourNeeds {
  const { loadTons } = sums;
  const loadShare = loadTons / plant.loadTons;
  const expectedF = expectedDeltaTF(side, loadShare, side.designSupplyF);
  // A deliberate reset is not avoidable: coils are asked for no more than the set-point in force lets them give.
  const setpointF = Number.isNaN(sums.setpointF) || plant.blendedSupplyF !== null ? side.designSupplyF : sums.setpointF;
  const attainableF = expectedDeltaTF(side, loadShare, Math.max(side.designSupplyF, setpointF));
  const flowFor = (deltaTF: number) => positive(flowFromTonsGpm(loadTons, deltaTF, side.designSupplyF, plant.fluid));
  const expectedFlowGpm = flowFor(expectedF);
  const attainableFlowGpm = flowFor(attainableF);
  const excessFlowGpm = positive(larger(sums.primaryFlowGpm, sums.secondaryFlowGpm) - expectedFlowGpm);
  const distributionAvoidableGpm = positive(sums.secondaryFlowGpm - attainableFlowGpm);

  const sets = unitSets(sums.unitsOn ?? plant.units);
  const productionAvoidableGpm = productionBeyond(plant, sums, sets, attainableFlowGpm);
  const surplusGpm = Math.min(
    productionBeyond(plant, sums, sets, sums.secondaryFlowGpm),
    positive(sums.primaryFlowGpm - sums.secondaryFlowGpm),
  );
  const running = sums.unitsOn ? sets.at(-1) : undefined;
  const carrying = running && smallestSet(sets, loadTons, Number.NaN, 'constant');
  const strandedTons = running && carrying ? (running.units <= 1 ? 0 : running.tons - carrying.tons) : Number.NaN;
  return {
    expectedDeltaTF: expectedF,
    expectedFlowGpm,
    attainableFlowGpm,
    excessFlowGpm,
    distributionAvoidableGpm,
    productionAvoidableGpm,
    surplusGpm,
    avoidableFlowGpm: Math.min(excessFlowGpm, larger(distributionAvoidableGpm, productionAvoidableGpm)),
    running,
    carrying,
    strandedTons: Number.isNaN(loadTons) ? Number.NaN : strandedTons,
  };
}
