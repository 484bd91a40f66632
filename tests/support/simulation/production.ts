import { TON_GPM_F } from './design';
import type { SimulatedDesign } from './design';
import { closing, DRIFT_MINUTES, ROOM_F } from './following';
import { wander } from './random';
import type { RandomSource } from './random';
import type { Staging } from './staging';

/** How long pumps take to come up or run down, and units to reach their leaving temperature. */
export const PUMP_MINUTES = 0.6;
const UNIT_MINUTES = 2.5;
/** Least and most speed of a variable primary, as share of rated flow. */
const LEAST_SPEED = 0.5;
const MOST_SPEED = 1.2;
/** A unit makes this much of its rated tons before its supply warms. */
const OVERLOAD = 1.08;

/** The units and their pumps. */
export interface Production {
  flowGpm: number;
  /** Mixed leaving temperature; standing water drifts. */
  supplyF: number;
  unitGpm: Float64Array;
  leavingF: Float64Array;
  /** Moves the pumps on by one step; `askedGpm` is what a variable primary is asked for. */
  pump: (staging: Staging, askedGpm: number, wobble: number) => void;
  /** Mixes what the units give. */
  mix: () => void;
  /** Moves the units' temperatures on by one step. */
  cool: (staging: Staging, returnF: number) => void;
}

export function productionOf(design: SimulatedDesign, random: RandomSource, stepMinutes: number): Production {
  const { units, setpointF } = design;
  const variable = design.primarySpeed === 'variable';
  const follow = closing(stepMinutes, PUMP_MINUTES);
  const settle = closing(stepMinutes, UNIT_MINUTES);
  const drift = closing(stepMinutes, DRIFT_MINUTES);
  const commonF = wander(random, random.between(0.08, 0.3), 45, stepMinutes);
  const ownF = units.map(() => wander(random, 0.08, 30, stepMinutes));
  const unitGpm = new Float64Array(units.length);
  const leavingF = new Float64Array(units.length).fill(setpointF + 4);
  const production: Production = { flowGpm: 0, supplyF: setpointF + 1, unitGpm, leavingF, pump, mix, cool };

  function pump(staging: Staging, askedGpm: number, wobble: number): void {
    const speed = Math.min(MOST_SPEED, Math.max(LEAST_SPEED, askedGpm / Math.max(1, staging.ratedGpm)));
    const fall = 1 - design.flowFall * (staging.count - 1);
    production.flowGpm = 0;
    for (let unit = 0; unit < units.length; unit += 1) {
      const built = units[unit]!;
      const full = variable ? built.ratedGpm * speed : built.trueGpm * wobble * fall;
      unitGpm[unit]! += follow * (staging.on[unit]! * full - unitGpm[unit]!);
      if (staging.on[unit] === 0 && unitGpm[unit]! < 0.02 * built.ratedGpm) unitGpm[unit] = 0;
      production.flowGpm += unitGpm[unit]!;
    }
  }

  function mix(): void {
    if (production.flowGpm > 0) {
      let heat = 0;
      for (let unit = 0; unit < units.length; unit += 1) heat += unitGpm[unit]! * leavingF[unit]!;
      production.supplyF = heat / production.flowGpm;
    } else production.supplyF += drift * (ROOM_F - production.supplyF);
  }

  function cool(staging: Staging, returnF: number): void {
    const common = commonF();
    for (let unit = 0; unit < units.length; unit += 1) {
      const built = units[unit]!;
      const own = ownF[unit]!();
      if (staging.on[unit] === 0) {
        // Its pump stops with it; what little still passes leaves as it came.
        const idleF = unitGpm[unit]! > 0 ? returnF : ROOM_F;
        leavingF[unit]! += (unitGpm[unit]! > 0 ? settle : drift) * (idleF - leavingF[unit]!);
        continue;
      }
      const asColdF = returnF - (OVERLOAD * built.tons * TON_GPM_F) / Math.max(1, unitGpm[unit]!);
      const targetF = Math.max(setpointF + built.leavingOffsetF + common + own, asColdF);
      // Standing water is gone in a moment: a unit that starts passes on what it gets until it cools.
      const fromF = production.flowGpm > 0 ? Math.min(leavingF[unit]!, returnF) : leavingF[unit]!;
      leavingF[unit] = fromF + settle * (targetF - fromF);
    }
  }
  return production;
}
