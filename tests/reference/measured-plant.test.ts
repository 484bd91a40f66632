// A measured laboratory plant: NIST Intelligent Building Agents Laboratory, one-minute data (doi 10.18434/mds2-3058), read
// from the open data beside the project. Minutes of each direction by flow difference with a dead band of 1 gpm:
// computed with numpy on the file as it is.
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { DIRECTIONS } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { plantOf } from '../hydronics/support/plants';

const FILE = path.resolve(import.meta.dirname, '../../../shared/data/nist_ibal/csv/Tucson_Shift_Default.csv');
const DEAD_BAND_GPM = 1;

/** The columns of the file that the README of the data maps to the loop. */
function readPlant() {
  const [header = '', ...lines] = readFileSync(FILE, 'utf8').trim().split(/\r?\n/);
  const names = header.split(',');
  const rows = lines.map((line) => line.split(','));
  const column = (name: string) => Float64Array.from(rows, (row) => Number(row[names.indexOf(name)]));
  const zip = (calculate: (row: number) => number) => Float64Array.from(rows, (_, row) => calculate(row));
  const at = (values: Float64Array, row: number) => values[row] ?? Number.NaN;
  const [unit1, unit2, secondary] = [column('ch1_f_e'), column('ch2_f_e'), column('sl_f')];
  const [coil1, coil2, supply] = [column('ahu1_f_cc'), column('ahu2_f_cc'), column('pump3_out_rtd')];
  const [leaving1, leaving2] = [column('ahu1_cc_out_rtd'), column('ahu2_cc_out_rtd')];
  const secondaryReturnF = zip((row) => {
    const around = at(secondary, row) - at(coil1, row) - at(coil2, row);
    const heat = at(coil1, row) * at(leaving1, row) + at(coil2, row) * at(leaving2, row) + around * at(supply, row);
    return at(secondary, row) > DEAD_BAND_GPM ? heat / at(secondary, row) : Number.NaN;
  });
  const [on1, on2] = [column('ch1_on'), column('ch2_on')];
  const record: Measurements = {
    n: rows.length,
    stepMinutes: 1,
    primaryReturnF: column('ch1_e_in_rtd'),
    secondarySupplyF: supply,
    secondaryReturnF,
    primaryFlowGpm: zip((row) => at(unit1, row) + at(unit2, row)),
    secondaryFlowGpm: secondary,
    unitStatus: [on1, on2],
    unitFlowGpm: [unit1, unit2],
    unitLeavingF: [column('ch1_e_out_rtd'), column('ch2_e_out_rtd')],
    unitEnteringF: [],
    unitPowerKw: [],
    primaryPumpStatus: [],
  };
  return { record, on: zip((row) => (at(on1, row) || at(on2, row) ? 1 : 0)) };
}

const plant = plantOf({
  fluid: { kind: 'propylene-glycol', massPercent: 30 },
  design: {
    productionSupplyF: 44,
    productionUnits: [
      { name: 'CH-1', tons: 7, flowGpm: 16 },
      { name: 'CH-2', tons: 4, flowGpm: 9 },
    ],
  },
  // Stated: 5 and 3.5 % of reading for the evaporators, 0.85 gpm of 20 to 30 for the loop, 0.2 F; the supply sensor sits
  // after the pump and carries its heat.
  sensors: {
    primaryFlow: { sigmaPercent: 3 },
    secondaryFlow: { sigmaPercent: 3 },
    secondarySupplyTemp: { sigmaF: 0.4 },
  },
});

/** Minutes by direction of the flow difference and direction of the estimate. */
function compare() {
  const { record, on } = readPlant();
  const estimates = estimateIntervals(record, plant);
  const minutes: Record<string, number> = {};
  for (let slot = 0; slot < record.n; slot += 1) {
    const primary = record.primaryFlowGpm?.[slot] ?? 0;
    const secondary = record.secondaryFlowGpm?.[slot] ?? 0;
    if (!on[slot] || primary <= 5 || secondary <= 5) continue;
    const gap = primary - secondary;
    const byFlow = gap > DEAD_BAND_GPM ? 'surplus' : gap < -DEAD_BAND_GPM ? 'deficit' : 'neutral';
    const found = DIRECTIONS[estimates.direction[slot] ?? 0];
    for (const key of [byFlow, `${byFlow} ${found}`]) minutes[key] = (minutes[key] ?? 0) + 1;
  }
  return (key: string) => minutes[key] ?? 0;
}

describe('a measured day of a laboratory plant (Tucson_Shift_Default)', () => {
  if (!existsSync(FILE)) {
    test('is not beside the project (shared/data/nist_ibal): nothing was compared', () => {
      expect(existsSync(FILE)).toBe(false);
    });
    return;
  }
  const minutes = compare();

  test('has the published minutes of surplus, neutral and deficit by flow difference', () => {
    expect([minutes('surplus'), minutes('neutral'), minutes('deficit')]).toEqual([197, 245, 392]);
  });

  test('is judged reverse on at least 97 % of the deficit minutes, and never forward', () => {
    expect(minutes('deficit reverse') / minutes('deficit')).toBeGreaterThan(0.97);
    expect(minutes('deficit forward')).toBe(0);
  });

  test('is judged forward on at least 97 % of the surplus minutes, and never reverse', () => {
    expect(minutes('surplus forward') / minutes('surplus')).toBeGreaterThan(0.97);
    expect(minutes('surplus reverse')).toBe(0);
  });
});
