import { expectedDeltaTF } from './expected-delta-t';
import type { LoadSide } from './expected-delta-t';
import type { HourNeeds } from './hour-needs';
import type { HourSums } from './hour-sums';
import type { Cause, PlantModel } from './types';

/** A saving under this share of design flow is no cause. */
const LEAST_SAVING_SHARE = 0.03;
/** Below this share of design load low delta-T is what coils, minimum flows and sensors do anyway. */
const LIGHT_LOAD_SHARE = 0.3;
/** Production supply this far above its set-point is warm; less is control. */
const WARM_SUPPLY_F = 0.5;
/** An hour whose sensors contradict each other for more than this share has no other cause. */
const DOUBT_SHARE = 0.5;

export interface HourCause {
  cause: Cause;
  /** 0 to 1; NaN with cause `none`. */
  confidence: number;
}

const NO_CAUSE: HourCause = { cause: 'none', confidence: Number.NaN };
const orZero = (value: number): number => (value > 0 ? value : 0);

/** Flow saved when coils that are fed `fromF` are fed `toF` instead, their own condition unchanged. */
function savedByColderSupply(side: LoadSide, sums: HourSums, loadShare: number, fromF: number, toF: number): number {
  if (!(fromF > toF)) return 0;
  const ratio = expectedDeltaTF(side, loadShare, fromF) / expectedDeltaTF(side, loadShare, toF);
  return orZero(sums.secondaryFlowGpm * (1 - ratio));
}

/** What curing each cause alone would save, gpm; the others held as they are. They do not add up. */
function savings(
  plant: PlantModel,
  side: LoadSide,
  sums: HourSums,
  needs: HourNeeds,
  deltaTF: number,
): [Cause, number][] {
  const loadShare = sums.loadTons / plant.loadTons;
  const blendedF = sums.blendedSupplyF;
  // A bridge is meant to blend: only what is warmer than its design blend is warm.
  const unblendedF =
    plant.blendedSupplyF === null ? sums.primarySupplyF : Math.max(sums.primarySupplyF, plant.blendedSupplyF);
  const reverse = sums.reverseMinutes > 0 ? savedByColderSupply(side, sums, loadShare, blendedF, unblendedF) : 0;
  const setpointF = Number.isNaN(sums.setpointF) ? plant.productionSupplyF : sums.setpointF;
  const aboveF = sums.primarySupplyF - setpointF;
  const warm = aboveF > WARM_SUPPLY_F ? savedByColderSupply(side, sums, loadShare, blendedF, blendedF - aboveF) : 0;
  // A load side within the plant's own limit has no fault to cure, though an ideal coil would do better still.
  const short = deltaTF < plant.lowDeltaTShare * plant.loadDeltaTF;
  const healthyF = expectedDeltaTF(side, loadShare, Number.isNaN(blendedF) ? side.designSupplyF : blendedF);
  const coil = short ? orZero(sums.secondaryFlowGpm * (1 - deltaTF / healthyF)) : 0;
  return [
    ['reverse-flow', orZero(reverse)],
    ['surplus-production', orZero(needs.surplusGpm)],
    ['warm-supply', orZero(warm)],
    [loadShare < LIGHT_LOAD_SHARE ? 'light-load' : 'coil-shortfall', coil],
  ];
}

/** How sure the hour's directions are of what the cause needs of them. */
function certainty(cause: Cause, sums: HourSums): number {
  if (cause === 'reverse-flow') return sums.reverseProbability;
  if (cause === 'surplus-production') return 1 - sums.reverseProbability;
  return sums.runningMinutes > 0 ? 1 - sums.contradictingMinutes / sums.runningMinutes : 0;
}

/**
 * The cause of a low hour: the one whose cure, alone, saves the most flow at that load, `none` when the largest saves less
 * than 3 % of design flow, `sensor-doubt` when the sensors contradict each other for most of the hour.
 *
 * reverse-flow: coil flow that the blend's warmth costs (the coil at the blended against the production temperature).
 * warm-supply: the same for production above its set-point. surplus-production: production flow that crosses over and a
 * smaller set of units would not make. coil-shortfall: flow beyond a healthy coil's at the temperature it was fed, where
 * the load-side delta-T itself is low; below 30 % load this is light-load, since nothing sure can be said of coils there.
 * Confidence = quality * best / (best + second best) * certainty of the direction that the cause rests on.
 *
 * Units   `deltaTF` is the hour's load over flow. Gaps: a saving that cannot be known counts as none.
 * Source  counterfactuals by effectiveness-NTU (lib/hydronics/coil.ts); limits: common practice, no source.
 */
export function hourCause(
  plant: PlantModel,
  side: LoadSide,
  sums: HourSums,
  needs: HourNeeds,
  deltaTF: number,
): HourCause {
  const doubtShare = sums.contradictingMinutes / sums.runningMinutes;
  if (doubtShare > DOUBT_SHARE) return { cause: 'sensor-doubt', confidence: doubtShare * sums.quality };
  const ranked = savings(plant, side, sums, needs, deltaTF).sort((a, b) => b[1] - a[1]);
  const [best, second] = ranked;
  if (!best || best[1] < LEAST_SAVING_SHARE * plant.distributionPumps.flowGpm) return NO_CAUSE;
  const dominance = best[1] / (best[1] + (second?.[1] ?? 0));
  return { cause: best[0], confidence: orZero(sums.quality * dominance * certainty(best[0], sums)) };
}
