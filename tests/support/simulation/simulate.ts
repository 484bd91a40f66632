import { drawDesign } from './design';
import { runPlant } from './physics';
import type { FineRun } from './physics';
import { sensePlant } from './sense';
import { intervalMeans } from './sensors';
import type { SimulatedDesign } from './design';
import type { SimulatedPlant, SimulatedTruth, SimulationOptions } from './types';

/** Fine steps of a quarter of a minute: staging, lags and hunting happen between the record's own steps. */
const FINE_MINUTES = 0.25;
/** Flow below this share of design is no flow. */
const FLOWING_SHARE = 0.05;
const QUIET_MINUTES = 10;
const QUIET_F = 0.5;

/** Largest less smallest of a fine channel in a slot. */
function spread(fine: Float64Array, from: number, to: number): number {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let step = from; step < to; step += 1) {
    low = Math.min(low, fine[step]!);
    high = Math.max(high, fine[step]!);
  }
  return high - low;
}

function truthOf(run: FineRun, design: SimulatedDesign, perSlot: number): SimulatedTruth {
  const n = Math.floor(run.steps / perSlot);
  const running = new Float64Array(n);
  const steady = new Float64Array(n);
  const reverseShare = new Float64Array(n);
  const leastPrimaryGpm = FLOWING_SHARE * Math.min(...design.units.map((unit) => unit.ratedGpm));
  const leastSecondaryGpm = FLOWING_SHARE * design.secondaryDesignGpm;
  let sinceStaging = Number.POSITIVE_INFINITY;
  for (let slot = 0; slot < n; slot += 1) {
    const from = slot * perSlot;
    const to = from + perSlot;
    running[slot] = 1;
    let staged = false;
    for (let step = from; step < to; step += 1) {
      sinceStaging += run.stepMinutes;
      const on = run.unitOn.some((unit) => unit[step] === 1);
      if (!on || run.primaryGpm[step]! < leastPrimaryGpm || run.secondaryGpm[step]! < leastSecondaryGpm)
        running[slot] = 0;
      if (step > 0 && run.unitOn.some((unit) => unit[step] !== unit[step - 1])) sinceStaging = 0;
      if (sinceStaging < QUIET_MINUTES) staged = true;
      if (run.bypassGpm[step]! < 0) reverseShare[slot]! += 1 / perSlot;
    }
    const moved = Math.max(
      spread(run.primarySupplyF, from, to),
      spread(run.primaryReturnF, from, to),
      spread(run.secondarySupplyF, from, to),
      spread(run.secondaryReturnF, from, to),
    );
    steady[slot] = running[slot] === 1 && !staged && moved < QUIET_F ? 1 : 0;
  }
  return {
    bypassGpm: intervalMeans(run.bypassGpm, perSlot),
    blendedSupplyF: intervalMeans(run.secondarySupplyF, perSlot),
    primarySupplyF: intervalMeans(run.primarySupplyF, perSlot),
    primaryReturnF: intervalMeans(run.primaryReturnF, perSlot),
    secondaryReturnF: intervalMeans(run.secondaryReturnF, perSlot),
    primaryFlowGpm: intervalMeans(run.primaryGpm, perSlot),
    secondaryFlowGpm: intervalMeans(run.secondaryGpm, perSlot),
    loadTons: intervalMeans(run.loadTons, perSlot),
    running,
    steady,
    reverseShare,
  };
}

/**
 * A plant that never was: two to four units, constant or variable primary, coils, staging, both tees, and what its
 * sensors made of it. Nothing here is shared with the estimator; density and specific heat are constant, so that the
 * textbook formula is exact on perfect sensors in steady intervals.
 *
 * Shapes  n = 60 * 24 * days / stepMinutes. Units as named. Gaps: NaN in measurements, never in truth.
 */
export function simulatePlant(options: SimulationOptions): SimulatedPlant {
  const stepMinutes = options.stepMinutes ?? 5;
  const perSlot = Math.round(stepMinutes / FINE_MINUTES);
  const design = drawDesign(options);
  const run = runPlant(design, options.seed, (options.days ?? 7) * 1440, FINE_MINUTES);
  const { measurements, errors } = sensePlant(run, design, options, perSlot);
  return {
    name: options.name ?? `${options.sensing} ${options.balance} ${options.seed}`,
    group: { sensing: options.sensing, balance: options.balance },
    plant: design.settings,
    measurements: { ...measurements, stepMinutes },
    truth: truthOf(run, design, perSlot),
    errors,
  };
}
