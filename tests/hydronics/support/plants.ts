import { estimateIntervals } from '@/lib/hydronics/estimate';
import { plantModelFromSettings } from '@/lib/hydronics/plant-model';
import { DIRECTIONS, REASONS, STATES } from '@/lib/hydronics/types';
import type { Arrangement, Fluid, Measurements, PlantModel, ResultChannel } from '@/lib/hydronics/types';
import { PlantSettings } from '@/lib/schemas/plant';
import type { PlantSettingsInput } from '@/lib/schemas/plant';

export const WATER: Fluid = { kind: 'water', massPercent: 0 };

/** Two equal units of 450 tons and 900 gpm, 900 tons of coils at 12 F: 1794 gpm of distribution. */
export const TWO_UNITS: PlantSettingsInput = {
  design: {
    productionSupplyF: 44,
    loadDeltaTF: 12,
    loadTons: 900,
    productionUnits: [
      { name: 'CH-1', tons: 450, flowGpm: 900 },
      { name: 'CH-2', tons: 450, flowGpm: 900 },
    ],
  },
  tariff: { currency: 'USD', energyPerKwh: 0.14 },
  sensors: {
    primarySupplyTemp: { sigmaF: 0.25 },
    primaryReturnTemp: { sigmaF: 0.25 },
    secondarySupplyTemp: { sigmaF: 0.25 },
    secondaryReturnTemp: { sigmaF: 0.25 },
    bypassTemp: { sigmaF: 0.5 },
  },
};

export function plantOf(
  settings: PlantSettingsInput = TWO_UNITS,
  arrangement: Arrangement = 'primary-secondary',
): PlantModel {
  return plantModelFromSettings(PlantSettings.parse(settings), arrangement).model;
}

/** A record of a given length whose channels are constant numbers or arrays. */
export function recordOf(
  n: number,
  stepMinutes: number,
  channels: Partial<Record<keyof Measurements, number | readonly number[]>>,
  perUnit: Partial<
    Record<
      'unitStatus' | 'unitFlowGpm' | 'unitLeavingF' | 'unitEnteringF' | 'unitPowerKw' | 'primaryPumpStatus',
      (number | readonly number[])[]
    >
  > = {},
): Measurements {
  const channel = (value: number | readonly number[]) =>
    typeof value === 'number' ? new Float64Array(n).fill(value) : Float64Array.from(value);
  const units = (key: keyof typeof perUnit) => (perUnit[key] ?? []).map(channel);
  const loop = Object.fromEntries(Object.entries(channels).map(([key, value]) => [key, channel(value)]));
  return {
    ...loop,
    n,
    stepMinutes,
    unitStatus: units('unitStatus'),
    unitFlowGpm: units('unitFlowGpm'),
    unitLeavingF: units('unitLeavingF'),
    unitEnteringF: units('unitEnteringF'),
    unitPowerKw: units('unitPowerKw'),
    primaryPumpStatus: units('primaryPumpStatus'),
  };
}

export type Row = Record<Exclude<ResultChannel, 'direction' | 'state' | 'reason'>, number> & {
  direction: string;
  state: string;
  reason: string;
};

/** The estimate of one slot of a record, with its codes spelled out. */
export function rowOf(measurements: Measurements, plant: PlantModel = plantOf(), slot = 0): Row {
  const estimates = estimateIntervals(measurements, plant);
  const row = Object.fromEntries(Object.entries(estimates).map(([channel, values]) => [channel, values[slot]]));
  return {
    ...row,
    direction: DIRECTIONS[estimates.direction[slot] ?? 0],
    state: STATES[estimates.state[slot] ?? 0],
    reason: REASONS[estimates.reason[slot] ?? 0],
  } as Row;
}

/** The estimate of a single interval with these loop channels. */
export const estimateOne = (
  channels: Partial<Record<keyof Measurements, number>>,
  plant: PlantModel = plantOf(),
): Row => rowOf(recordOf(1, 5, channels), plant);
