import type { PlantModel } from '@/lib/hydronics/types';
import { plantOf } from '../../hydronics/support/plants';
import { randomSource } from './random';
import type { SimulationOptions } from './types';

/** One gallon a minute and one degree carry 1/24 ton (500 Btu/h); density and specific heat are constant here. */
export const TON_GPM_F = 24;

export interface SimulatedUnit {
  tons: number;
  ratedGpm: number;
  /** Flow of its pump when it runs alone. */
  trueGpm: number;
  /** Leaving temperature above the common set-point. */
  leavingOffsetF: number;
}

/** A plant as built and as it behaves. */
export interface SimulatedDesign {
  settings: PlantModel;
  setpointF: number;
  units: SimulatedUnit[];
  primarySpeed: 'constant' | 'variable';
  /** Share of flow each pump loses for every other pump that runs. */
  flowFall: number;
  loadTons: number;
  secondaryDesignGpm: number;
  secondaryMaxGpm: number;
  /** Coil delta-T at 70 % load, and how it moves with load. */
  coilDeltaTF: number;
  coilSlope: number;
  /** Delta-T that a variable primary holds. */
  primaryDeltaTF: number;
  stageUp: number;
  stageDown: number;
  minRunMinutes: number;
  rotates: boolean;
  baseLoad: number;
  peakLoad: number;
  weekendShare: number;
  nightOff: boolean;
  /** Which side follows the other, in plants near balance. */
  follows: 'none' | 'primary' | 'secondary';
  trim: number;
  trimWander: number;
  huntingShare: number;
  huntingMinutes: number;
  returnLagMinutes: number;
}

/** Fs / Fp when a running set is fully loaded: what the balance of a plant hangs on. */
const FLOW_RATIO = {
  varied: [1.15, 1.45],
  'near-balance': [1.0, 1.2],
  'mostly-forward': [0.75, 0.95],
  'mostly-reverse': [1.5, 1.9],
} as const;

/** Draws a plant: two to four units, equal or not, their pumps, coils, schedule and staging. */
export function drawDesign(options: SimulationOptions): SimulatedDesign {
  const random = randomSource(options.seed, 'design');
  const nearBalance = options.balance === 'near-balance';
  const meteredPrimary = options.sensing === 'both-meters' || options.sensing === 'one-meter';
  const drawnSpeed = meteredPrimary && random.chance(nearBalance ? 0.6 : 0.25) ? 'variable' : 'constant';
  const primarySpeed = options.primarySpeed ?? drawnSpeed;
  const setpointF = Math.round(random.between(40, 46));
  const unitDeltaTF = random.pick([10, 12, 12, 14]);
  const count = options.units ?? random.pick([2, 2, 3, 3, 4]);
  const tons = random.pick([250, 400, 500, 650, 800]);
  const unequal = random.chance(0.35);
  const common = ((options.ratedFlowPercent ?? 5) / 5) * 0.03 * random.normal();
  const units = Array.from({ length: count }, (_, index): SimulatedUnit => {
    const unitTons = unequal && index === count - 1 ? tons / 2 : tons;
    const ratedGpm = Math.round((unitTons * TON_GPM_F) / unitDeltaTF);
    const error = common + random.within((options.ratedFlowPercent ?? 5) / 100, 0.12);
    return { tons: unitTons, ratedGpm, trueGpm: ratedGpm * (1 + error), leavingOffsetF: random.within(0.2, 0.5) };
  });
  const totalTons = units.reduce((sum, unit) => sum + unit.tons, 0);
  const loadTons = Math.round(totalTons * random.between(0.85, 1));
  const loadDeltaTF = unitDeltaTF + random.pick([0, 0, 2]);
  const secondaryDesignGpm = (loadTons * TON_GPM_F) / loadDeltaTF;
  const [low, high] = FLOW_RATIO[options.balance];
  const ratio = random.between(low, high);
  const settings = plantOf({
    design: {
      productionSupplyF: setpointF,
      loadDeltaTF,
      loadTons,
      productionUnits: units.map((unit, index) => ({
        name: `CH-${index + 1}`,
        tons: unit.tons,
        flowGpm: unit.ratedGpm,
      })),
      pumping: { speed: primarySpeed },
    },
  });
  return {
    settings,
    setpointF,
    units,
    primarySpeed,
    flowFall: random.between(0.01, 0.035),
    loadTons,
    secondaryDesignGpm,
    secondaryMaxGpm: secondaryDesignGpm * random.between(1.15, 1.35),
    coilDeltaTF: unitDeltaTF / ratio,
    coilSlope: random.between(-0.25, 0.3),
    primaryDeltaTF: unitDeltaTF * random.between(0.9, 1.05),
    stageUp: random.between(0.88, 1),
    stageDown: random.between(0.72, 0.82),
    minRunMinutes: random.between(20, 45),
    rotates: random.chance(0.4),
    baseLoad: random.between(0.22, 0.42),
    peakLoad: random.between(0.68, 0.95),
    weekendShare: random.between(0.45, 0.9),
    nightOff: options.nightOff ?? random.chance(0.2),
    follows: !nearBalance ? 'none' : primarySpeed === 'variable' ? 'primary' : 'secondary',
    trim: random.between(-0.02, 0.02),
    trimWander: random.between(0.03, 0.05),
    huntingShare: options.hunting ? random.between(0.06, 0.12) : 0,
    huntingMinutes: random.between(4, 9),
    returnLagMinutes: random.between(1, 2.5),
  };
}
