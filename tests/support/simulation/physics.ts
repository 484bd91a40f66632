import { TON_GPM_F } from './design';
import type { SimulatedDesign } from './design';
import { loadShares, wanted } from './load';
import { randomSource, wander } from './random';
import { stagingController } from './staging';
import { mixTees } from './tees';

/** Temperature that standing water drifts to, and over which time. */
const ROOM_F = 70;
const DRIFT_MINUTES = 720;
/** How long pumps and units take to follow. */
const PUMP_MINUTES = 0.6;
const UNIT_MINUTES = 2.5;
const DEMAND_MINUTES = 3;
/** Coils give up their load as their supply nears this. */
const COIL_PINCH_F = 72;
const COASTING_MINUTES = 40;

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

/** First-order following: the share of the gap that closes in one step. */
const closing = (stepMinutes: number, tauMinutes: number): number => 1 - Math.exp(-stepMinutes / tauMinutes);

/** Runs a plant for `minutes` at fine steps: load, coils, distribution, staging, units, tees. */
export function runPlant(design: SimulatedDesign, seed: number, minutes: number, stepMinutes: number): FineRun {
  const steps = Math.round(minutes / stepMinutes);
  const random = randomSource(seed, 'run');
  const run = emptyRun(steps, stepMinutes, design.units.length);
  const shares = loadShares(design, seed, steps, stepMinutes);
  const on = new Uint8Array(design.units.length);
  const stage = stagingController(design, stepMinutes, on);
  const supplyWander = wander(random, random.between(0.08, 0.3), 45, stepMinutes);
  const unitWander = design.units.map(() => wander(random, 0.08, 30, stepMinutes));
  const coilWander = wander(random, random.between(0.02, 0.05), 40, stepMinutes);
  const trimSlow = wander(random, design.trimWander, 150, stepMinutes);
  const trimFast = wander(random, 0.012, 8, stepMinutes);
  const pumpNoise = wander(random, 0.003, 10, stepMinutes);

  const pump = closing(stepMinutes, PUMP_MINUTES);
  const follow = closing(stepMinutes, DEMAND_MINUTES);
  const settle = closing(stepMinutes, UNIT_MINUTES);
  const lag = closing(stepMinutes, design.returnLagMinutes);
  const building = closing(stepMinutes, 3);
  const drift = closing(stepMinutes, DRIFT_MINUTES);

  const unitGpm = new Float64Array(design.units.length);
  const leavingF = new Float64Array(design.units.length).fill(design.setpointF + 4);
  const tees = { bypassGpm: 0, secondarySupplyF: design.setpointF + 1, primaryReturnF: design.setpointF + 8 };
  let secondaryGpm = 0.5 * design.secondaryDesignGpm;
  let primarySupplyF = design.setpointF + 1;
  let secondaryReturnF = design.setpointF + 9;
  let coilInletF = tees.secondarySupplyF;
  let sinceStopped = Number.POSITIVE_INFINITY;

  for (let step = 0; step < steps; step += 1) {
    const minute = step * stepMinutes;
    const awake = wanted(design, minute);
    sinceStopped = awake ? 0 : sinceStopped + stepMinutes;
    const wantedTons = shares[step]! * design.loadTons;
    stage(minute, wantedTons, primarySupplyF - design.setpointF);

    // Production flow.
    let count = 0;
    let ratedOn = 0;
    for (let unit = 0; unit < on.length; unit += 1) {
      count += on[unit]!;
      ratedOn += on[unit]! * design.units[unit]!.ratedGpm;
    }
    const trim = design.trim + trimSlow() + trimFast();
    const hunt = design.huntingShare * Math.sin((2 * Math.PI * minute) / design.huntingMinutes);
    const wobble = 1 + pumpNoise();
    let speed = 1;
    if (design.primarySpeed === 'variable') {
      const target =
        design.follows === 'primary'
          ? secondaryGpm * (1 + trim + hunt)
          : (wantedTons * TON_GPM_F * (1 + hunt)) / design.primaryDeltaTF;
      speed = Math.min(1.2, Math.max(0.5, target / Math.max(1, ratedOn)));
    }
    let primaryGpm = 0;
    for (let unit = 0; unit < on.length; unit += 1) {
      const built = design.units[unit]!;
      const full = design.primarySpeed === 'variable' ? built.ratedGpm : built.trueGpm * wobble;
      const target =
        on[unit]! * full * speed * (design.primarySpeed === 'variable' ? 1 : 1 - design.flowFall * (count - 1));
      unitGpm[unit]! += pump * (target - unitGpm[unit]!);
      if (on[unit] === 0 && unitGpm[unit]! < 0.02 * built.ratedGpm) unitGpm[unit] = 0;
      primaryGpm += unitGpm[unit]!;
    }

    // Distribution flow: what the coils ask for, or what holds the common pipe near balance.
    const shareOfDesign = shares[step]!;
    const coilDeltaTF = Math.max(
      4,
      design.coilDeltaTF * (1 + design.coilSlope * (0.7 - shareOfDesign)) * (1 + coilWander()),
    );
    const served = Math.min(1.05, Math.max(0, (COIL_PINCH_F - coilInletF) / (COIL_PINCH_F - design.setpointF)));
    const loadTons = secondaryGpm > 0 ? wantedTons * served : 0;
    const asked =
      design.follows === 'secondary' && primaryGpm > 0
        ? primaryGpm * (1 + trim + hunt)
        : Math.min(design.secondaryMaxGpm, (wantedTons * TON_GPM_F) / coilDeltaTF);
    const pumped = awake || sinceStopped < COASTING_MINUTES;
    secondaryGpm += (design.follows === 'secondary' ? pump : follow) * ((pumped ? asked : 0) - secondaryGpm);
    if (!pumped && secondaryGpm < 0.03 * design.secondaryDesignGpm) secondaryGpm = 0;

    // Supply of the units, and both tees.
    let heat = 0;
    for (let unit = 0; unit < on.length; unit += 1) heat += unitGpm[unit]! * leavingF[unit]!;
    if (primaryGpm > 0) primarySupplyF = heat / primaryGpm;
    else primarySupplyF += drift * (ROOM_F - primarySupplyF);
    mixTees(primaryGpm, secondaryGpm, primarySupplyF, secondaryReturnF, tees);
    if (secondaryGpm === 0) tees.secondarySupplyF += drift * (ROOM_F - tees.secondarySupplyF);
    if (primaryGpm === 0) tees.primaryReturnF += drift * (ROOM_F - tees.primaryReturnF);

    run.primaryGpm[step] = primaryGpm;
    run.secondaryGpm[step] = secondaryGpm;
    run.bypassGpm[step] = tees.bypassGpm;
    run.primarySupplyF[step] = primarySupplyF;
    run.primaryReturnF[step] = tees.primaryReturnF;
    run.secondarySupplyF[step] = tees.secondarySupplyF;
    run.secondaryReturnF[step] = secondaryReturnF;
    run.loadTons[step] = loadTons;
    for (let unit = 0; unit < on.length; unit += 1) {
      run.unitOn[unit]![step] = on[unit]!;
      run.unitGpm[unit]![step] = unitGpm[unit]!;
      run.unitLeavingF[unit]![step] = leavingF[unit]!;
    }

    // What follows for the next step: the building answers late, units settle, idle ones warm up.
    coilInletF += building * (tees.secondarySupplyF - coilInletF);
    if (secondaryGpm > 0.02 * design.secondaryDesignGpm) {
      const coilOutF = Math.min(ROOM_F + 4, coilInletF + (loadTons * TON_GPM_F) / secondaryGpm);
      secondaryReturnF += lag * (coilOutF - secondaryReturnF);
    } else secondaryReturnF += drift * (ROOM_F - secondaryReturnF);
    const common = supplyWander();
    for (let unit = 0; unit < on.length; unit += 1) {
      const built = design.units[unit]!;
      const own = unitWander[unit]!();
      if (on[unit] === 0) {
        // Its pump stops with it; what little still passes leaves as it came.
        const target = unitGpm[unit]! > 0 ? tees.primaryReturnF : ROOM_F;
        leavingF[unit]! += (unitGpm[unit]! > 0 ? settle : drift) * (target - leavingF[unit]!);
        continue;
      }
      const asCold = tees.primaryReturnF - (1.08 * built.tons * TON_GPM_F) / Math.max(1, unitGpm[unit]!);
      const target = Math.max(design.setpointF + built.leavingOffsetF + common + own, asCold);
      leavingF[unit]! += settle * (target - leavingF[unit]!);
    }
  }
  return run;
}
