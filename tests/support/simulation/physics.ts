import { TON_GPM_F } from './design';
import type { SimulatedDesign } from './design';
import { distributionOf } from './distribution';
import { closing, DRIFT_MINUTES, ROOM_F } from './following';
import { loadShares, wanted } from './load';
import { productionOf } from './production';
import { randomSource, wander } from './random';
import { stagingController } from './staging';
import { mixTees } from './tees';

/** Every fine step of a plant's run, before any sensor. */
export interface FineRun {
  steps: number;
  stepMinutes: number;
  primaryGpm: Float64Array;
  secondaryGpm: Float64Array;
  bypassGpm: Float64Array;
  primarySupplyF: Float64Array;
  primaryReturnF: Float64Array;
  secondarySupplyF: Float64Array;
  secondaryReturnF: Float64Array;
  loadTons: Float64Array;
  unitOn: Float64Array[];
  unitGpm: Float64Array[];
  unitLeavingF: Float64Array[];
}

function emptyRun(steps: number, stepMinutes: number, units: number): FineRun {
  const channel = () => new Float64Array(steps);
  const perUnit = () => Array.from({ length: units }, channel);
  return {
    steps,
    stepMinutes,
    primaryGpm: channel(),
    secondaryGpm: channel(),
    bypassGpm: channel(),
    primarySupplyF: channel(),
    primaryReturnF: channel(),
    secondarySupplyF: channel(),
    secondaryReturnF: channel(),
    loadTons: channel(),
    unitOn: perUnit(),
    unitGpm: perUnit(),
    unitLeavingF: perUnit(),
  };
}

/** Runs a plant for `minutes` at fine steps: load, staging, both sides' pumps, tees, then what coils and units make of it. */
export function runPlant(design: SimulatedDesign, seed: number, minutes: number, stepMinutes: number): FineRun {
  const steps = Math.round(minutes / stepMinutes);
  const random = randomSource(seed, 'run');
  const run = emptyRun(steps, stepMinutes, design.units.length);
  const shares = loadShares(design, seed, steps, stepMinutes);
  const stage = stagingController(design, stepMinutes);
  const production = productionOf(design, random, stepMinutes);
  const distribution = distributionOf(design, random, stepMinutes);
  const trimSlow = wander(random, design.trimWander, 150, stepMinutes);
  const trimFast = wander(random, 0.012, 8, stepMinutes);
  const pumpNoise = wander(random, 0.003, 10, stepMinutes);
  const drift = closing(stepMinutes, DRIFT_MINUTES);
  const tees = { bypassGpm: 0, secondarySupplyF: design.setpointF + 1, primaryReturnF: design.setpointF + 8 };

  for (let step = 0; step < steps; step += 1) {
    const minute = step * stepMinutes;
    const wantedTons = shares[step]! * design.loadTons;
    const staging = stage(minute, wantedTons, production.supplyF - design.setpointF);
    const hunt = design.huntingShare * Math.sin((2 * Math.PI * minute) / design.huntingMinutes);
    const balance = 1 + design.trim + trimSlow() + trimFast() + hunt;
    const byDeltaT = (wantedTons * TON_GPM_F * (1 + hunt)) / design.primaryDeltaTF;
    const asked = design.follows === 'primary' ? distribution.flowGpm * balance : byDeltaT;
    production.pump(staging, asked, 1 + pumpNoise());
    const follows = design.follows === 'secondary' && production.flowGpm > 0;
    distribution.pump(shares[step]!, follows ? production.flowGpm * balance : Number.NaN, wanted(design, minute));

    production.mix();
    mixTees(production.flowGpm, distribution.flowGpm, production.supplyF, distribution.returnF, tees);
    if (distribution.flowGpm === 0) tees.secondarySupplyF += drift * (ROOM_F - tees.secondarySupplyF);
    if (production.flowGpm === 0) tees.primaryReturnF += drift * (ROOM_F - tees.primaryReturnF);

    run.primaryGpm[step] = production.flowGpm;
    run.secondaryGpm[step] = distribution.flowGpm;
    run.bypassGpm[step] = tees.bypassGpm;
    run.primarySupplyF[step] = production.supplyF;
    run.primaryReturnF[step] = tees.primaryReturnF;
    run.secondarySupplyF[step] = tees.secondarySupplyF;
    run.secondaryReturnF[step] = distribution.returnF;
    run.loadTons[step] = distribution.loadTons;
    for (let unit = 0; unit < design.units.length; unit += 1) {
      run.unitOn[unit]![step] = staging.on[unit]!;
      run.unitGpm[unit]![step] = production.unitGpm[unit]!;
      run.unitLeavingF[unit]![step] = production.leavingF[unit]!;
    }

    distribution.warm(tees.secondarySupplyF);
    production.cool(staging, tees.primaryReturnF);
  }
  return run;
}
