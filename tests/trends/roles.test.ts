import { describe, expect, test } from 'vitest';
import { piecesOf, sharedPrefix } from '@/lib/trends/roles/names';
import { monthFirst, previewOf, tableOf, type PlantMoment } from './preview-support';

type Column = (moment: PlantMoment, i: number) => string | number;
/** The suggestion for each column of a table, by its name. */
function suggested(
  columns: Record<string, Column>,
  options?: Parameters<typeof tableOf>[1],
  change?: Parameters<typeof previewOf>[1],
) {
  return Object.fromEntries(previewOf(tableOf(columns, options), change).columns.map((each) => [each.column, each]));
}
const celsius = (tempF: number) => (tempF - 32) / 1.8;

describe('the export of the mapping page', () => {
  const table = tableOf({
    'EEC.CHWS-P.T': (m) => m.tps,
    'EEC.CHWR-P.T': (m, i) => (i === 3 ? 'Bad Input' : m.tpr),
    'EEC.CHWS-S.T': (m) => m.tss,
    'EEC.CHWR-S.T': (m) => m.tsr,
    'EEC.P.FLOW': (m) => m.fp,
    'EEC.S.FLOW, US GPM': (m) => m.fs,
    'EEC.CH1.SS': () => 1,
    'EEC.CH2.SS': (m) => m.secondOn,
    'EEC.SP.KW': (m) => m.pumpKw,
    'EEC.DP': (m) => m.dp,
    'EEC.AI.17': (m) => m.bypassT,
    'EEC.XX.T': (_, i) => 96 + 4.9 * Math.sin(i / 300),
  });
  const preview = previewOf(`"Trend report"\n"East energy centre"\n"Printed 07/27/2026"\n${table}`);
  const of = (column: string) => preview.columns.find((each) => each.column === column)!;

  test.each([
    ['EEC.CHWS-P.T', 'primarySupplyTemp', 'degF', null],
    ['EEC.CHWR-P.T', 'primaryReturnTemp', 'degF', null],
    ['EEC.CHWS-S.T', 'secondarySupplyTemp', 'degF', null],
    ['EEC.CHWR-S.T', 'secondaryReturnTemp', 'degF', null],
    ['EEC.P.FLOW', 'primaryFlow', 'gpm', null],
    ['EEC.S.FLOW, US GPM', 'secondaryFlow', 'gpm', null],
    ['EEC.CH1.SS', 'unitStatus', 'on/off', 1],
    ['EEC.CH2.SS', 'unitStatus', 'on/off', 2],
    ['EEC.SP.KW', 'distributionPumpPower', 'kW', null],
  ])('%s is the %s in %s', (column, role, unit, unitIndex) => {
    expect(of(column)).toMatchObject({ role, unit, unitIndex });
    expect(of(column).confidence).toBeGreaterThan(0.85);
  });

  test('each reason is one sentence that names what was seen', () => {
    expect(of('EEC.CHWS-P.T').reason).toBe(
      'Coldest of four water temperatures; steady at 44.0; name holds "CHWS" and "P"; °F by its values.',
    );
    expect(of('EEC.CHWR-P.T').reason).toMatch(
      /^Below the secondary return in \d+ % of rows; name holds "CHWR" and "P"/,
    );
    expect(of('EEC.CHWS-S.T').reason).toMatch(
      /^Tracks the primary supply, above it in \d+ % of rows; name holds "CHWS" and "S"/,
    );
    expect(of('EEC.CHWR-S.T').reason).toMatch(/^Warmest of four water temperatures/);
    expect(of('EEC.P.FLOW').reason).toMatch(/^Takes steps of 8\d\d, about one unit's design flow/);
    expect(of('EEC.S.FLOW, US GPM').reason).toContain('unit "US GPM" from the heading');
    expect(of('EEC.CH1.SS').reason).toMatch(/^Only 1 so far/);
    expect(of('EEC.CH2.SS').reason).toMatch(/^0 and 1 only/);
    for (const { reason } of preview.columns) expect(reason).toMatch(/^[A-Z0-9"].*[.?]$/);
  });

  test('a pressure without a unit, and a point whose name says nothing, are left to a person', () => {
    expect(of('EEC.DP')).toMatchObject({ role: 'differentialPressure', confidence: 0.44 });
    expect(of('EEC.DP').reason).toMatch(/between 1\d\.\d and 2\d\.\d: could be psi, ft or kPa; choose the unit/);
    expect(of('EEC.AI.17')).toMatchObject({ role: 'bypassTemp', unit: 'degF', confidence: 0.35 });
    expect(of('EEC.AI.17').reason).toMatch(/now near the primary supply, now near the return: bypass temperature\?$/);
  });

  test('water that is always above 90 F is left out with its reason', () => {
    expect(of('EEC.XX.T')).toMatchObject({
      role: 'ignore',
      unit: null,
      confidence: 0.88,
      reason: 'Above 90 °F in every row: not chilled water.',
    });
  });

  test('samples, lows and highs are those of the file', () => {
    const { samples, low, high } = of('EEC.CH2.SS');
    expect(samples).toHaveLength(96);
    expect([low, high]).toEqual([0, 1]);
    expect(of('EEC.CHWR-P.T').low).toBeGreaterThan(45);
  });
});

describe('words of the trade', () => {
  const T =
    (f: (m: PlantMoment) => number): Column =>
    (m) =>
      f(m);
  test.each<[string, string, string | null, Column]>([
    ['PCHWST', 'primarySupplyTemp', 'degF', T((m) => m.tps)],
    ['PCHWS Temp (°F)', 'primarySupplyTemp', 'degF', T((m) => m.tps)],
    ['PriCHWSupTemp', 'primarySupplyTemp', 'degF', T((m) => m.tps)],
    ['Primary CHW Supply Temperature [degC]', 'primarySupplyTemp', 'degC', T((m) => celsius(m.tps))],
    ['P Sup T (F)', 'primarySupplyTemp', 'degF', T((m) => m.tps)],
    ['SCHWR-T', 'secondaryReturnTemp', 'degF', T((m) => m.tsr)],
    ['Sec_CHW_Rtn_Tmp', 'secondaryReturnTemp', 'degF', T((m) => m.tsr)],
    ['S Ret T (F)', 'secondaryReturnTemp', 'degF', T((m) => m.tsr)],
    ['Bldg CHWS Temp', 'secondarySupplyTemp', 'degF', T((m) => m.tss)],
    ['Vorlauf primär [°C]', 'primarySupplyTemp', 'degC', T((m) => celsius(m.tps))],
    // The other column is the primary supply.
    ['CHWS Temp', 'secondarySupplyTemp', 'degF', T((m) => m.tps)],
    ['Byp T (F)', 'bypassTemp', 'degF', T((m) => m.bypassT)],
    ['Decoupler Temp', 'bypassTemp', 'degF', T((m) => m.bypassT)],
    ['Byp Flow gpm', 'bypassFlow', 'gpm', T((m) => m.fp - m.fs)],
    ['Decoupler Flow (gpm)', 'bypassFlowUnsigned', 'gpm', T((m) => Math.abs(m.fp - m.fs))],
    ['CHW Bypass Valve Pos %', 'bypassValvePosition', '%', (_, i) => i % 100],
    ['Pri CHW Flow (L/s)', 'primaryFlow', 'L/s', T((m) => m.fp / 15.85)],
    ['Sec Flow m³/h', 'secondaryFlow', 'm3/h', T((m) => m.fs / 4.403)],
    ['CH-1 Status', 'unitStatus', 'on/off', () => 'On'],
    ['Chiller 2 Run', 'unitStatus', 'on/off', (m) => (m.secondOn ? 'Running' : 'Stopped')],
    ['CH1 kW', 'unitPower', 'kW', () => 250],
    ['CH-1 LWT', 'unitLeavingTemp', 'degF', T((m) => m.tps)],
    ['CH_2_EWT', 'unitEnteringTemp', 'degF', T((m) => m.tpr)],
    ['Chiller 1 Lvg CHW Temp', 'unitLeavingTemp', 'degF', T((m) => m.tps)],
    ['CH-1 Evap Flow (gpm)', 'unitFlow', 'gpm', () => 860],
    ['CH-1 % Load', 'unitLoadPercent', '%', (_, i) => 40 + (i % 50)],
    ['CH-1 RLA %', 'unitLoadPercent', '%', (_, i) => 40 + (i % 50)],
    ['CH-1 CHW Setpoint', 'unitSetpoint', 'degF', () => 44],
    ['CH-2 Iso Vlv Pos', 'unitIsolationValve', '%', (_, i) => i % 101],
    ['CH-1 Evap DP (psi)', 'unitEvaporatorDp', 'psi', () => 7.5],
    ['PCHWP-1 Status', 'primaryPumpStatus', 'on/off', () => 1],
    ['Pri Pump 2 Speed %', 'primaryPumpSpeed', '%', () => 80],
    ['SCHWP-1 kW', 'distributionPumpPower', 'kW', T((m) => m.pumpKw)],
    ['SCHWP-1 VFD Spd', 'distributionPumpSpeed', '%', (_, i) => 50 + (i % 40)],
    ['Sec CHW Pump 1 Sts', 'distributionPumpStatus', 'on/off', () => 'ON'],
    ['Plant kW', 'plantPower', 'kW', () => 600],
    ['CHWS SP', 'supplySetpoint', 'degF', () => 44],
    ['CHW DP (psi)', 'differentialPressure', 'psi', T((m) => m.dp)],
    ['CHW DP Setpt (psi)', 'differentialPressureSetpoint', 'psi', () => 14],
    ['OAT', 'outdoorTemp', 'degF', (_, i) => 70 + 15 * Math.sin(i / 40)],
    ['OA Wet Bulb F', 'outdoorWetBulb', 'degF', (_, i) => 60 + 5 * Math.sin(i / 40)],
    ['AHU-3 CHW Valve %', 'branchValvePosition', '%', (_, i) => i % 90],
    ['Bldg 4 CHW Flow gpm', 'branchFlow', 'gpm', () => 240],
  ])('%s is %s in %s', (name, role, unit, column) => {
    const found = suggested({ [name]: column, 'Other CHWS-P T': (m) => m.tps, Third: (_, i) => `n${i}` })[name]!;
    expect(found).toMatchObject({ role, unit });
    expect(found.confidence).toBeGreaterThanOrEqual(0.5);
  });

  test.each<[string, Column, RegExp]>([
    ['CWST', () => 82, /Condenser water/],
    ['CDWR Temp', () => 91.5, /Above 90|Condenser/],
    ['HWS Temp', () => 140, /Above 90|Heating/],
    ['OA RH (%)', () => 55, /Humidity/],
    ['Plant kW/ton', () => 0.62, /Efficiency/],
    ['Plant kWh', (_, i) => 10_000 + i, /total/],
    ['Total Tons', () => 800, /Cooling load/],
    ['CHW Delta-T', () => 9, /difference/],
    ['CH-1 Alarm', () => 0, /alarm/],
    ['AHU-1 SAT', () => 55, /Air/],
    ['Operator', (_, i) => `n${i}`, /words/],
    ['Trend Flags', () => '{ok}', /quality/],
    ['Spare', () => '', /no readings/],
  ])('%s is left out, with its reason', (name, column, reason) => {
    const found = suggested({ [name]: column, 'P CHWS T': (m) => m.tps, 'S CHWS T': (m) => m.tss })[name]!;
    expect(found).toMatchObject({ role: 'ignore', unit: null });
    expect(found.confidence).toBeGreaterThanOrEqual(0.5);
    expect(found.reason).toMatch(reason);
  });

  test('CH-101 and CH-102 are units 1 and 2, and CH-3 of a plant with two units is a question', () => {
    const status: Column = (m) => m.secondOn;
    const high = suggested({ 'CH-101 Status': status, 'CH-102 Status': status });
    expect([high['CH-101 Status']!.unitIndex, high['CH-102 Status']!.unitIndex]).toEqual([1, 2]);
    const third = suggested({ 'CH-1 Status': status, 'CH-2 Status': status, 'CH-3 Status': status })['CH-3 Status']!;
    expect(third.confidence).toBeLessThan(0.5);
    expect(third.reason).toContain('number 3 where the plant has 2 units');
  });
});

describe('values against names', () => {
  test('a supply warmer than a return is a question for both', () => {
    const found = suggested({ 'Pri CHWS T': (m) => m.tsr, 'Pri CHWR T': (m) => m.tps });
    expect(found['Pri CHWS T']!.confidence).toBeLessThan(0.5);
    expect(found['Pri CHWS T']!.reason).toContain('Named a supply but warmer than "Pri CHWR T", a return');
    expect(found['Pri CHWR T']!.confidence).toBeLessThan(0.5);
  });

  test('units without a name come from the values: degrees C, K, and m3/h against the design flow', () => {
    const found = suggested({
      'Pri CHWS T': (m) => celsius(m.tps),
      'Sec CHWR T': (m) => celsius(m.tsr),
      OAT: (_, i) => 22 + 6 * Math.sin(i / 40),
      'Pri Flow': (m) => m.fp / 4.403,
    });
    expect(found['Pri CHWS T']).toMatchObject({ unit: 'degC' });
    expect(found['OAT']).toMatchObject({ unit: 'degC' });
    expect(found['Pri Flow']).toMatchObject({ unit: 'm3/h' });
    expect(suggested({ 'Pri CHWS T': (m) => celsius(m.tps) + 273.15, B: () => 1 })['Pri CHWS T']).toMatchObject({
      unit: 'K',
    });
  });

  test('a unit row counts as a heading does', () => {
    const text = `Timestamp,Pri CHWS T,Pri Flow\n,degC,L/s\n${monthFirst(0)},6.5,54\n${monthFirst(5)},6.6,54.2\n`;
    const preview = previewOf(text);
    expect(preview.dialect).toMatchObject({ headerRow: 1, unitRow: 2, firstDataRow: 3 });
    expect(preview.columns.map(({ unit }) => unit)).toEqual(['degC', 'L/s']);
    expect(preview.columns[0]!.reason).toContain('unit "degC" from the unit row');
  });

  test('two columns of one role say that they are averaged or added up', () => {
    const found = suggested({
      'Pri CHWS T 1': (m) => m.tps,
      'Pri CHWS T 2': (m) => m.tps + 0.1,
      'Sec Flow A gpm': (m) => m.fs / 2,
      'Sec Flow B gpm': (m) => m.fs / 2,
    });
    expect(found['Pri CHWS T 1']!.reason).toContain('averaged with "Pri CHWS T 2"');
    expect(found['Sec Flow A gpm']!.reason).toContain('Added up with "Sec Flow B gpm"');
  });

  test('a header without a side takes the side the file leaves open', () => {
    const found = suggested({ 'CHWS Temp': (m) => m.tps, 'Sec CHWS Temp': (m) => m.tss });
    expect(found['CHWS Temp']!.role).toBe('primarySupplyTemp');
    expect(found['CHWS Temp']!.confidence).toBeCloseTo(0.6, 1);
    expect(suggested({ 'CHWS Temp': (m) => m.tps, X: () => 1 })['CHWS Temp']!.role).toBe('headerSupplyTemp');
  });

  test('a suggestion with a role always carries a unit, so that it can be confirmed as it is', () => {
    const names = ['P CHWS T', 'DP', 'Flow', 'CH-1 Power', 'Pump 1', 'X1', 'CH-2', 'CHWR', 'Speed', 'OA'];
    const columns: Record<string, Column> = {};
    names.forEach((name, n) => (columns[name] = (_, i) => 10 * n + (i % 7)));
    for (const { role, unit } of Object.values(suggested(columns))) expect(unit === null).toBe(role === 'ignore');
  });
});

test('names are parted by signs, by letter case and around numbers', () => {
  expect(piecesOf('EEC.CHWS-P.T')).toEqual(['EEC', 'CHWS', 'P', 'T']);
  expect(piecesOf('SecCHWSTemp')).toEqual(['Sec', 'CHWS', 'Temp']);
  expect(piecesOf('ch1_e_out_rtd')).toEqual(['ch', '1', 'e', 'out', 'rtd']);
  expect(piecesOf('Plant kW/ton')).toEqual(['Plant', 'KWTON']);
  expect(piecesOf('CHW dP')).toEqual(['CHW', 'DP']);
});

test('a prefix that all points share says nothing about any of them', () => {
  const names = ['Plant.A.x', 'Plant.A.y', 'Plant.A.z'].map(piecesOf);
  expect(sharedPrefix(names)).toBe(2);
  expect(sharedPrefix(names.slice(0, 2))).toBe(0);
});
