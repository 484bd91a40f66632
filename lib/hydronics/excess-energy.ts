import { excessPumpPowerKw } from './pumps';
import type { HourNeeds } from './hour-needs';
import type { HourSums } from './hour-sums';
import type { PlantModel } from './types';

/**
 * Below this share of its rating a unit's kW per ton worsens; by this much of itself at no load, in a straight line
 * (common practice, no source: efficiency worsens below 25 to 30 %). Above it, two units at half load are not charged:
 * with variable speed they may well be the better choice.
 */
const PART_LOAD_SHARE = 0.3;
const PART_LOAD_PENALTY = 0.3;

const orZero = (value: number): number => (value > 0 ? value : 0);
const penalty = (loadShare: number): number =>
  (PART_LOAD_PENALTY * orZero(PART_LOAD_SHARE - loadShare)) / PART_LOAD_SHARE;

/** Rated-tons-weighted compressor power per ton of the plant's units. */
function meanKwPerTon(plant: PlantModel): number {
  let tons = 0;
  let kw = 0;
  for (const unit of plant.units) {
    tons += unit.tons;
    kw += unit.tons * unit.kwPerTon;
  }
  return tons > 0 ? kw / tons : 0;
}

/**
 * Energy that an hour's excess flow took: distribution pumping beyond the attainable flow on the system curve with its
 * control head; the auxiliaries of units that the load did not need; and the compressors' part-load penalty for sharing
 * the load among them, where it falls below 30 % of their rating.
 *
 * Units   kWh over the hour's running minutes; never negative.
 * Gaps    a part that cannot be known counts nothing; NaN when no load is known.
 * Source  lib/hydronics/pumps.ts; penalty: see PART_LOAD_SHARE.
 */
export function excessEnergyKwh(plant: PlantModel, sums: HourSums, needs: HourNeeds): number {
  if (Number.isNaN(sums.loadTons)) return Number.NaN;
  const neededGpm = Math.min(sums.secondaryFlowGpm, needs.attainableFlowGpm);
  let powerKw = orZero(excessPumpPowerKw(sums.secondaryFlowGpm, neededGpm, plant.distributionPumps));
  const { running, carrying } = needs;
  if (running && carrying && needs.strandedTons > 0) {
    powerKw += running.auxiliaryKw - carrying.auxiliaryKw;
    const worse = penalty(sums.loadTons / running.tons) - penalty(sums.loadTons / carrying.tons);
    powerKw += orZero(sums.loadTons * meanKwPerTon(plant) * worse);
  }
  return orZero(powerKw) * (sums.runningMinutes / 60);
}
