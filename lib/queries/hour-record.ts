import type { CsvCell } from '../http/csv';
import { siColumn } from '../http/si-units';
import { isoInstant } from '../db/sql';
import type { HourRow } from '../schemas/results';
import { figure } from './figures';

/** The columns of the hour table in the contract's order: of the CSV, the workbook and (in camelCase) the JSON. */
export const HOUR_COLUMNS = [
  'hour_start',
  'low',
  'load_tons',
  'delta_t_f',
  'expected_delta_t_f',
  'production_delta_t_f',
  'reverse_minutes',
  'reverse_flow_gpm',
  'blended_supply_f',
  'blended_supply_max_f',
  'excess_flow_gpm',
  'avoidable_flow_gpm',
  'cause',
  'cause_confidence',
  'excess_energy_kwh',
  'excess_cost',
  'stranded_tons',
  'unknown_minutes',
  'quality',
] as const;
type HourColumn = (typeof HOUR_COLUMNS)[number];
type NumberColumn = Exclude<HourColumn, 'hour_start' | 'low' | 'cause' | 'reverse_minutes' | 'unknown_minutes'>;

/** A row of the hour table as SQL gives it. */
export type HourSqlRow = Record<NumberColumn, number | null> & {
  hour_start: string;
  low: boolean;
  cause: HourRow['cause'];
  reverse_minutes: number;
  unknown_minutes: number;
};

export const SELECT_HOUR = `select ${HOUR_COLUMNS.map((column) => `h.${column}`).join(', ')}`;

/** `2026-07-24T21:00:00Z`: an hour begins on a whole second. */
export const hourInstant = (text: string): string => isoInstant(text).replace('.000Z', 'Z');

/** The hour as the API shows it. */
export function hourRecord(row: HourSqlRow): HourRow {
  return {
    hourStart: hourInstant(row.hour_start),
    low: row.low ? 1 : 0,
    loadTons: figure(row.load_tons),
    deltaTF: figure(row.delta_t_f),
    expectedDeltaTF: figure(row.expected_delta_t_f),
    productionDeltaTF: figure(row.production_delta_t_f),
    reverseMinutes: row.reverse_minutes,
    reverseFlowGpm: figure(row.reverse_flow_gpm),
    blendedSupplyF: figure(row.blended_supply_f),
    blendedSupplyMaxF: figure(row.blended_supply_max_f),
    excessFlowGpm: figure(row.excess_flow_gpm),
    avoidableFlowGpm: figure(row.avoidable_flow_gpm),
    cause: row.cause,
    causeConfidence: figure(row.cause_confidence),
    excessEnergyKwh: figure(row.excess_energy_kwh),
    excessCost: figure(row.excess_cost),
    strandedTons: figure(row.stranded_tons),
    unknownMinutes: row.unknown_minutes,
    quality: figure(row.quality),
  };
}

/** Header of the table in the units asked for. */
export const hourHeader = (units: 'ip' | 'si'): string[] =>
  HOUR_COLUMNS.map((column) => (units === 'si' ? (siColumn(column)?.name ?? column) : column));

/** The hour as cells of the table. */
export function hourCells(row: HourSqlRow, units: 'ip' | 'si'): CsvCell[] {
  return HOUR_COLUMNS.map((column) => {
    const value = row[column];
    if (column === 'hour_start') return hourInstant(row.hour_start);
    if (typeof value === 'boolean') return value ? 1 : 0;
    if (typeof value !== 'number') return value;
    const si = units === 'si' ? siColumn(column) : null;
    return figure(si ? si.convert(value) : value);
  });
}
