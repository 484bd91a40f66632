import { TON_GPM_F } from './design';
import type { SimulatedDesign } from './design';
import { closing, DRIFT_MINUTES, ROOM_F } from './following';
import { PUMP_MINUTES } from './production';
import { wander } from './random';
import type { RandomSource } from './random';

/** How long the coils' valves take to answer, and the water to cross the building. */
const DEMAND_MINUTES = 3;
const BUILDING_MINUTES = 3;
/** Coils give up their load as their supply nears this. */
const COIL_PINCH_F = 72;
/** Distribution goes on for this long after a plant is shut down for the night. */
const COASTING_MINUTES = 40;
const LEAST_COIL_DELTA_T_F = 4;

/** The coils and the pumps that feed them. */
export interface Distribution {
  flowGpm: number;
  returnF: number;
  /** Heat taken in. */
  loadTons: number;
  /** Moves the flow on by one step; `followGpm` is what a flow held near balance follows, NaN for the coils' own. */
  pump: (loadShare: number, followGpm: number, awake: boolean) => void;
  /** Moves the return on by one step. */
  warm: (supplyF: number) => void;
}

export function distributionOf(design: SimulatedDesign, random: RandomSource, stepMinutes: number): Distribution {
  const coil = wander(random, random.between(0.02, 0.05), 40, stepMinutes);
  const demand = closing(stepMinutes, design.follows === 'secondary' ? PUMP_MINUTES : DEMAND_MINUTES);
  const lag = closing(stepMinutes, design.returnLagMinutes);
  const building = closing(stepMinutes, BUILDING_MINUTES);
  const drift = closing(stepMinutes, DRIFT_MINUTES);
  let inletF = design.setpointF + 1;
  let asleepMinutes = Number.POSITIVE_INFINITY;
  const distribution: Distribution = {
    flowGpm: 0.5 * design.secondaryDesignGpm,
    returnF: design.setpointF + 9,
    loadTons: 0,
    pump,
    warm,
  };

  function pump(loadShare: number, followGpm: number, awake: boolean): void {
    const wantedTons = loadShare * design.loadTons;
    const sloped = design.coilDeltaTF * (1 + design.coilSlope * (0.7 - loadShare)) * (1 + coil());
    const deltaTF = Math.max(LEAST_COIL_DELTA_T_F, sloped);
    const served = Math.min(1.05, Math.max(0, (COIL_PINCH_F - inletF) / (COIL_PINCH_F - design.setpointF)));
    distribution.loadTons = distribution.flowGpm > 0 ? wantedTons * served : 0;
    const coilsAsk = Math.min(design.secondaryMaxGpm, (wantedTons * TON_GPM_F) / deltaTF);
    asleepMinutes = awake ? 0 : asleepMinutes + stepMinutes;
    const pumped = asleepMinutes < COASTING_MINUTES;
    const asked = Number.isNaN(followGpm) ? coilsAsk : followGpm;
    distribution.flowGpm += demand * ((pumped ? asked : 0) - distribution.flowGpm);
    if (!pumped && distribution.flowGpm < 0.03 * design.secondaryDesignGpm) distribution.flowGpm = 0;
  }

  function warm(supplyF: number): void {
    inletF += building * (supplyF - inletF);
    if (distribution.flowGpm > 0.02 * design.secondaryDesignGpm) {
      const outletF = Math.min(ROOM_F + 4, inletF + (distribution.loadTons * TON_GPM_F) / distribution.flowGpm);
      distribution.returnF += lag * (outletF - distribution.returnF);
    } else distribution.returnF += drift * (ROOM_F - distribution.returnF);
  }
  return distribution;
}
