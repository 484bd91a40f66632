// A measured laboratory plant: NIST Intelligent Building Agents Laboratory, one-minute data (doi 10.18434/mds2-3058), read
// from the open data beside the project. Minutes of each direction by flow difference with a dead band of 1 gpm, the supply
// sensors' 0.49 F and the turning point near +2 gpm: computed with numpy on the files as they are, over 88 such days.
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { calibrateRecord } from '@/lib/hydronics/calibrate';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { DIRECTIONS, STATES } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { plantOf } from '../hydronics/support/plants';

const FOLDER = path.resolve(import.meta.dirname, '../../../shared/data/nist_ibal/csv');
const DAYS = [
  'Atlanta_Mod_Default',
  'Atlanta_Shed_Default',
  'Tucson_Eff_MPC',
  'Tucson_Mod_Default',
  'Tucson_Shift_Default',
];
const SHIFT_DAY = DAYS.indexOf('Tucson_Shift_Default');
const DEAD_BAND_GPM = 1;

/** Joins the days of one channel end to end. */
const joined = (channels: readonly Float64Array[]): Float64Array =>
  Float64Array.from(channels.flatMap((channel) => [...channel]));

/** The columns of the files that the README of the data maps to the loop, all days end to end. */
function readRecord(): Measurements {
  const tables = DAYS.map((day) => {
    const [header = '', ...lines] = readFileSync(path.join(FOLDER, `${day}.csv`), 'utf8')
      .trim()
      .split(/\r?\n/);
    const names = header.split(',');
    return { names, rows: lines.map((line) => line.split(',')) };
  });
  const column = (name: string) =>
    joined(tables.map(({ names, rows }) => Float64Array.from(rows, (row) => Number(row[names.indexOf(name)]))));
  const at = (values: Float64Array, row: number) => values[row] ?? Number.NaN;
  const [unit1, unit2, secondary] = [column('ch1_f_e'), column('ch2_f_e'), column('sl_f')];
  const [coil1, coil2, supply] = [column('ahu1_f_cc'), column('ahu2_f_cc'), column('pump3_out_rtd')];
  const [leaving1, leaving2] = [column('ahu1_cc_out_rtd'), column('ahu2_cc_out_rtd')];
  const secondaryReturnF = secondary.map((flow, row) => {
    const around = flow - at(coil1, row) - at(coil2, row);
    const heat = at(coil1, row) * at(leaving1, row) + at(coil2, row) * at(leaving2, row) + around * at(supply, row);
    return flow > DEAD_BAND_GPM ? heat / flow : Number.NaN;
  });
  return {
    n: supply.length,
    stepMinutes: 1,
    primaryReturnF: column('ch1_e_in_rtd'),
    secondarySupplyF: supply,
    secondaryReturnF,
    primaryFlowGpm: unit1.map((flow, row) => flow + at(unit2, row)),
    secondaryFlowGpm: secondary,
    unitStatus: [column('ch1_on'), column('ch2_on')],
    unitFlowGpm: [unit1, unit2],
    unitLeavingF: [column('ch1_e_out_rtd'), column('ch2_e_out_rtd')],
    unitEnteringF: [],
    unitPowerKw: [],
    primaryPumpStatus: [],
  };
}

// Sensors by their class only: what the calibration has to find is not in here.
const plant = plantOf({
  fluid: { kind: 'propylene-glycol', massPercent: 30 },
  design: {
    productionSupplyF: 44,
    productionUnits: [
      { name: 'CH-1', tons: 7, flowGpm: 16 },
      { name: 'CH-2', tons: 4, flowGpm: 9 },
    ],
  },
});

describe('five measured days of a laboratory plant', () => {
  if (!existsSync(FOLDER)) {
    test('are not beside the project (shared/data/nist_ibal): nothing was compared', () => {
      expect(existsSync(FOLDER)).toBe(false);
    });
    return;
  }
  const record = readRecord();
  const calibration = calibrateRecord(record, plant);
  const estimates = estimateIntervals(record, plant, calibration);
  const found = (role: string) => calibration.findings.find((finding) => finding.role === role);
  const value = (role: string) => found(role)?.value ?? Number.NaN;

  /** Counts minutes of one day by flow difference and by the direction found. */
  const minutes: Record<string, number> = {};
  for (let slot = SHIFT_DAY * 1440; slot < (SHIFT_DAY + 1) * 1440; slot += 1) {
    const primary = record.primaryFlowGpm?.[slot] ?? 0;
    const secondary = record.secondaryFlowGpm?.[slot] ?? 0;
    const on = record.unitStatus.some((status) => status?.[slot] === 1);
    if (!on || primary <= 5 || secondary <= 5) continue;
    const gap = primary - secondary;
    const byFlow = gap > DEAD_BAND_GPM ? 'surplus' : gap < -DEAD_BAND_GPM ? 'deficit' : 'neutral';
    for (const key of [byFlow, `${byFlow} ${DIRECTIONS[estimates.direction[slot] ?? 0]}`]) {
      minutes[key] = (minutes[key] ?? 0) + 1;
    }
  }
  const counted = (key: string) => minutes[key] ?? 0;

  test('have the published minutes of surplus, neutral and deficit by flow difference (Tucson_Shift_Default)', () => {
    expect([counted('surplus'), counted('neutral'), counted('deficit')]).toEqual([197, 245, 392]);
  });

  test('show without being told that the secondary supply reads half a degree above the primary: 0.49 F', () => {
    const apartF = value('secondarySupplyTemp') - value('primarySupplyTemp');
    expect(Math.abs(apartF - 0.49)).toBeLessThan(0.15);
  });

  test('show without being told that the meters disagree: flow turns near +2 gpm of some 22, not at 0', () => {
    const ratioPercent = value('primaryFlow') - value('secondaryFlow');
    expect(ratioPercent).toBeGreaterThan(5);
    expect(ratioPercent).toBeLessThan(16);
    expect(found('primaryFlow')?.lo).toBeGreaterThan(0);
  });

  test('are judged reverse on at least 97 % of the minutes of deficit by flow difference, and never forward', () => {
    expect(counted('deficit reverse') / counted('deficit')).toBeGreaterThan(0.97);
    expect(counted('deficit forward')).toBe(0);
  });

  test('are judged forward or still where the difference is beyond the turning point by 2 gpm', () => {
    let [clear, right] = [0, 0];
    for (let slot = 0; slot < record.n; slot += 1) {
      const gap = (record.primaryFlowGpm?.[slot] ?? 0) - (record.secondaryFlowGpm?.[slot] ?? 0);
      const running = STATES[estimates.state[slot] ?? 0] === 'running' && (record.secondaryFlowGpm?.[slot] ?? 0) > 5;
      if (!running || !(gap > 4)) continue;
      clear += 1;
      const direction = DIRECTIONS[estimates.direction[slot] ?? 0];
      if (direction === 'forward' || direction === 'still') right += 1;
    }
    expect(clear).toBeGreaterThan(300);
    expect(right / clear).toBeGreaterThan(0.95);
  });

  test('temperatures alone tell the half degree too, and no longer read pump heat as reverse flow', () => {
    const { primaryFlowGpm, secondaryFlowGpm, ...rest } = record;
    const bare = { ...rest, unitFlowGpm: [] };
    const alone = calibrateRecord(bare, plant);
    const offsetF = (role: string) => alone.findings.find((finding) => finding.role === role)?.value ?? Number.NaN;
    expect(Math.abs(offsetF('secondarySupplyTemp') - offsetF('primarySupplyTemp') - 0.49)).toBeLessThan(0.15);
    const judged = estimateIntervals(bare, plant, alone);
    let [surplus, wrong] = [0, 0];
    for (let slot = 0; slot < record.n; slot += 1) {
      const gap = (primaryFlowGpm?.[slot] ?? 0) - (secondaryFlowGpm?.[slot] ?? 0);
      if (STATES[judged.state[slot] ?? 0] !== 'running' || !((secondaryFlowGpm?.[slot] ?? 0) > 5) || !(gap > 4))
        continue;
      surplus += 1;
      if (DIRECTIONS[judged.direction[slot] ?? 0] === 'reverse') wrong += 1;
    }
    expect(surplus).toBeGreaterThan(300);
    expect(wrong / surplus).toBeLessThan(0.03);
  });
});
