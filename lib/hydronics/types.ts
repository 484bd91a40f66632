/** The kernel's vocabulary: plain typed arrays in, plain typed arrays out. Missing is NaN. */

export type Arrangement = 'primary-secondary' | 'variable-primary' | 'building-bridge';
export type FluidKind = 'water' | 'ethylene-glycol' | 'propylene-glycol';
export interface Fluid {
  kind: FluidKind;
  /** Mass share of glycol in percent, 0 to 60; 0 for water. */
  massPercent: number;
}

/** One chiller (or other production unit), in index order; `unitIndex` 1 is element 0. */
export interface UnitModel {
  tons: number;
  flowGpm: number;
  minFlowGpm: number;
  maxFlowGpm: number;
  kwPerTon: number;
  auxiliaryKw: number;
}

export interface DistributionPumpsModel {
  flowGpm: number;
  headFt: number;
  controlHeadFt: number;
  efficiency: number;
  motorEfficiency: number;
}

/** Standard uncertainties of the sensors (k = 1). */
export interface SensorModel {
  temperatureSigmaF: Readonly<
    Record<
      'primarySupplyTemp' | 'primaryReturnTemp' | 'secondarySupplyTemp' | 'secondaryReturnTemp' | 'bypassTemp',
      number
    >
  >;
  /** Percent of reading. */
  flowSigmaPercent: Readonly<Record<'primaryFlow' | 'secondaryFlow' | 'bypassFlow' | 'ratedFlow', number>>;
}

/** Everything about the plant that the kernel needs; built from the plant's settings revision. */
export interface PlantModel {
  arrangement: Arrangement;
  fluid: Fluid;
  productionSupplyF: number;
  /** Coil-side design delta-T. */
  loadDeltaTF: number;
  loadTons: number;
  units: readonly UnitModel[];
  distributionPumps: DistributionPumpsModel;
  /** Rise through the distribution pumps, between supply tee and secondary supply sensor, F; absent: head not given. */
  distributionRiseF?: number;
  /** How the production side is pumped; absent: variable for `variable-primary`, constant otherwise. */
  primarySpeed?: 'constant' | 'variable';
  /** Only for building bridges: the blend the bridge is designed to make. */
  blendedSupplyF: number | null;
  sensors: SensorModel;
  /** Share of design load below which an hour is never called low (default 0.15). */
  lowLoadShare: number;
  /** Share of design delta-T below which an hour is low (default 0.8). */
  lowDeltaTShare: number;
  /** null: no tariff, energy only. */
  energyPerKwh: number | null;
}

/** Channels of one stretch of record on the plant's step. Absent key: the point does not exist. All arrays have length n. */
export interface Measurements {
  n: number;
  /** Minutes between slots. */
  stepMinutes: number;
  primarySupplyF?: Float64Array;
  primaryReturnF?: Float64Array;
  secondarySupplyF?: Float64Array;
  secondaryReturnF?: Float64Array;
  bypassF?: Float64Array;
  /** A supply header sensor of which nobody knows the side of the tee: the record places it. */
  headerSupplyF?: Float64Array;
  primaryFlowGpm?: Float64Array;
  secondaryFlowGpm?: Float64Array;
  /** Signed, positive forward. */
  bypassFlowGpm?: Float64Array;
  bypassFlowUnsignedGpm?: Float64Array;
  /** Opening of a minimum-flow bypass valve, 0 (shut) to 100. */
  bypassValvePercent?: Float64Array;
  /** By unit, in unit order; undefined where a unit has no such point. */
  unitStatus: readonly (Float64Array | undefined)[];
  unitFlowGpm: readonly (Float64Array | undefined)[];
  unitLeavingF: readonly (Float64Array | undefined)[];
  unitEnteringF: readonly (Float64Array | undefined)[];
  unitPowerKw: readonly (Float64Array | undefined)[];
  primaryPumpStatus: readonly (Float64Array | undefined)[];
  distributionPumpPowerKw?: Float64Array;
  plantPowerKw?: Float64Array;
  supplySetpointF?: Float64Array;
  outdoorF?: Float64Array;
}

/** Order is the stored code. Never reorder; append only. */
export const DIRECTIONS = ['unknown', 'forward', 'reverse', 'still'] as const;
export type Direction = (typeof DIRECTIONS)[number];
export const STATES = ['unknown', 'running', 'starting', 'coasting', 'off'] as const;
export type PlantState = (typeof STATES)[number];
export const REASONS = [
  '',
  'off',
  'too near balance',
  'temperatures too close',
  'sensors contradict',
  'both ways within the interval',
  'no data',
] as const;
export type Reason = (typeof REASONS)[number];
export const CAUSES = [
  'none',
  'reverse-flow',
  'surplus-production',
  'coil-shortfall',
  'valve-leakage',
  'warm-supply',
  'idle-unit-flow',
  'light-load',
  'sensor-doubt',
] as const;
export type Cause = (typeof CAUSES)[number];

/**
 * One value an interval for each channel, all of length n, NaN where unknown.
 * `direction`, `state` and `reason` hold indices into DIRECTIONS, STATES and REASONS; `steady` is 0 or 1. `chi_square` is the
 * squared disagreement of the measurements with the likelier way, `redundancy` how many comparisons it holds beyond the
 * unknowns, `at_odds` the index into SENSOR_ROLES of the measurement most at odds (-1: none stands out). The other names are the columns of result_block and of the interval row in the API.
 */
export const RESULT_CHANNELS = [
  'direction',
  'reverse_probability',
  'bypass_flow_gpm',
  'bypass_flow_lo_gpm',
  'bypass_flow_hi_gpm',
  'blended_supply_f',
  'blended_supply_lo_f',
  'blended_supply_hi_f',
  'primary_flow_gpm',
  'secondary_flow_gpm',
  'primary_supply_f',
  'primary_return_f',
  'secondary_return_f',
  'load_tons',
  'load_delta_t_f',
  'production_delta_t_f',
  'steady',
  'quality',
  'state',
  'reason',
  'chi_square',
  'redundancy',
  'at_odds',
] as const;
export type ResultChannel = (typeof RESULT_CHANNELS)[number];
export type Estimates = Record<ResultChannel, Float64Array>;

/** One local clock hour; the columns of the hour table (API names in camelCase). NaN where unknown. */
export interface HourResult {
  /** Start of the hour as a UTC instant. */
  hourStartMs: number;
  low: boolean;
  /** Minutes of the hour in state `running`. */
  runningMinutes: number;
  loadTons: number;
  deltaTF: number;
  expectedDeltaTF: number;
  productionDeltaTF: number;
  primaryFlowGpm: number;
  secondaryFlowGpm: number;
  bypassFlowGpm: number;
  primarySupplyF: number;
  reverseMinutes: number;
  forwardMinutes: number;
  stillMinutes: number;
  unknownMinutes: number;
  /** Positive magnitude, mean over the reverse minutes; NaN when there were none. */
  reverseFlowGpm: number;
  /** Largest positive magnitude over the reverse minutes; NaN when there were none. */
  reverseFlowMaxGpm: number;
  blendedSupplyF: number;
  blendedSupplyMaxF: number;
  excessFlowGpm: number;
  avoidableFlowGpm: number;
  cause: Cause;
  causeConfidence: number;
  excessEnergyKwh: number;
  /** NaN without a tariff. */
  excessCost: number;
  strandedTons: number;
  unitsRunning: number;
  quality: number;
}

/** Named by every stored result: raise it when any number of the kernel changes. */
export const KERNEL_VERSION = '0.2.1';
