import type { Cause, HourResult } from '../hydronics/types';

/** Column of the hour table for each number of an HourResult, in the order of the table. */
export const HOUR_COLUMNS = {
  running_minutes: 'runningMinutes',
  load_tons: 'loadTons',
  delta_t_f: 'deltaTF',
  expected_delta_t_f: 'expectedDeltaTF',
  production_delta_t_f: 'productionDeltaTF',
  primary_flow_gpm: 'primaryFlowGpm',
  secondary_flow_gpm: 'secondaryFlowGpm',
  bypass_flow_gpm: 'bypassFlowGpm',
  primary_supply_f: 'primarySupplyF',
  reverse_minutes: 'reverseMinutes',
  forward_minutes: 'forwardMinutes',
  still_minutes: 'stillMinutes',
  unknown_minutes: 'unknownMinutes',
  reverse_flow_gpm: 'reverseFlowGpm',
  reverse_flow_max_gpm: 'reverseFlowMaxGpm',
  blended_supply_f: 'blendedSupplyF',
  blended_supply_max_f: 'blendedSupplyMaxF',
  excess_flow_gpm: 'excessFlowGpm',
  avoidable_flow_gpm: 'avoidableFlowGpm',
  cause_confidence: 'causeConfidence',
  excess_energy_kwh: 'excessEnergyKwh',
  excess_cost: 'excessCost',
  stranded_tons: 'strandedTons',
  units_running: 'unitsRunning',
  quality: 'quality',
} as const satisfies Record<string, keyof HourResult>;
export type HourColumn = keyof typeof HOUR_COLUMNS;
export const HOUR_COLUMN_NAMES = Object.keys(HOUR_COLUMNS) as HourColumn[];

/** A row of the hour table as SQL gives it; numbers null where unknown. */
export type HourRecord = Record<HourColumn, number | null> & {
  hour_start: string;
  local_day: string;
  low: boolean;
  cause: Cause;
};

/** A stored hour back in the kernel's form. */
export function hourResultOf(record: HourRecord, hourStartMs: number): HourResult {
  const numbers = Object.fromEntries(HOUR_COLUMN_NAMES.map((column) => [HOUR_COLUMNS[column], record[column] ?? NaN]));
  return { ...(numbers as unknown as HourResult), hourStartMs, low: record.low, cause: record.cause };
}
