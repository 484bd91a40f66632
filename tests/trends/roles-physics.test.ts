import { describe, expect, test } from 'vitest';
import type { PreviewOptions } from '@/lib/trends';
import { sentenceOf } from '@/lib/trends/roles/suggest';
import { suggestedOf, type PanelMoment, type Value } from './roles-support';

const unit = (u: number, key: keyof PanelMoment['units'][number]) => (m: PanelMoment) => m.units[u - 1]![key];
type Columns = Readonly<Record<string, Value>>;
function suggested(columns: Columns, change: Partial<PreviewOptions> = {}) {
  const names = Object.keys(columns);
  const drafts = suggestedOf(
    names.map((name) => [name, columns[name]!] as const),
    change,
  );
  return Object.fromEntries(names.map((name, i) => [name, { ...drafts[i]!, reason: sentenceOf(drafts[i]!) }]));
}

describe('a unit’s points bear each other out', () => {
  const found = suggested({
    'CH-1 LWT': unit(1, 'leavingF'),
    'CH-1 EWT': unit(1, 'enteringF'),
    'CH-1 Status': unit(1, 'on'),
    'CH-1 kW': unit(1, 'powerKw'),
    'CH-1 % Load': unit(1, 'loadPercent'),
    'CH-1 CHW Setpoint': () => 44,
  });

  test('the entering water is warmer while the unit runs', () => {
    expect(found['CH-1 EWT']!.reason).toMatch(/[Ww]armer than "CH-1 LWT" in \d+ % of rows while it runs/);
  });
  test('the leaving water is near the set-point only while the status is on', () => {
    expect(found['CH-1 LWT']!.reason).toMatch(
      /[Nn]ear the set-point at 4[34]\.\d while "CH-1 Status" runs, at 6\d\.\d while it stands/,
    );
  });
  test('the power is nearly 0 while the status is off, and the load moves with it', () => {
    expect(found['CH-1 kW']!.reason).toMatch(/[Aa]bout 0\.4 while "CH-1 Status" is off/);
    expect(found['CH-1 % Load']!.reason).toMatch(/[Mm]oves with "CH-1 kW" \(correlation (1\.00|0\.9\d)\)/);
  });

  test('entering and leaving that are exchanged are a question for both', () => {
    const crossed = suggested({
      'CH-1 LWT': unit(1, 'enteringF'),
      'CH-1 EWT': unit(1, 'leavingF'),
      'CH-1 Status': unit(1, 'on'),
    });
    for (const name of ['CH-1 LWT', 'CH-1 EWT']) {
      expect(crossed[name]!.confidence).toBeLessThan(0.5);
      expect(crossed[name]!.reason).toContain('exchanged?');
    }
  });

  test('power that is higher while its status is off is a question', () => {
    const wrong = suggested({ 'CH-1 Status': unit(1, 'on'), 'CH-1 kW': (m) => (m.units[0]!.on ? 0.4 : 180) });
    expect(wrong['CH-1 kW']!.confidence).toBeLessThan(0.5);
    expect(wrong['CH-1 kW']!.reason).toContain('of another unit?');
  });
});

describe('an idle unit never stands for the header', () => {
  const states = { 'CH-1 Status': unit(1, 'on'), 'CH-2 Status': unit(2, 'on'), 'CH-3 Status': unit(3, 'on') };

  test('a header that warms up while one unit stands and others run is that unit’s own water', () => {
    const found = suggested({ ...states, 'Primary CHWS Temp': unit(2, 'leavingF') })['Primary CHWS Temp']!;
    expect(found).toMatchObject({ role: 'unitLeavingTemp', unitIndex: 2 });
    expect(found.confidence).toBeLessThan(0.5);
    expect(found.reason).toContain('the unit’s own water, not the header’s');
  });

  test('a true header beside the same states stays one', () => {
    const found = suggested({ ...states, 'Primary CHWS Temp': (m) => m.supplyF })['Primary CHWS Temp']!;
    expect(found.role).toBe('primarySupplyTemp');
    expect(found.confidence).toBeGreaterThan(0.8);
  });

  test.each(['CH-2 LWT', 'Chiller 2 CHW Supply Temp', 'CHLR02.ChwSupTmp', 'LWT 2', 'CHWST-2', 'Evaporator 2 Out Temp'])(
    '%s of a plant of three units is suggested for no header',
    (name) => {
      const { role, unitIndex } = suggested({ ...states, [name]: unit(2, 'leavingF') })[name]!;
      expect([role, unitIndex]).toEqual(['unitLeavingTemp', 2]);
    },
  );

  test('a header of unknown side is a header of unknown side', () => {
    const found = suggested({ ...states, 'CHW Supply Temp': (m) => m.secondarySupplyF })['CHW Supply Temp']!;
    expect(found.role).toBe('headerSupplyTemp');
    expect(found.confidence).toBeGreaterThanOrEqual(0.5);
  });
});

describe('sides that names leave open', () => {
  test('of two supplies the steadier and colder one is the primary', () => {
    const found = suggested({
      'CHW Supply Temp North': (m) => m.secondarySupplyF + 0.2,
      'CHW Supply Temp South': (m) => m.supplyF,
    });
    expect(found['CHW Supply Temp South']!.role).toBe('primarySupplyTemp');
    expect(found['CHW Supply Temp North']!.role).toBe('secondarySupplyTemp');
    expect(found['CHW Supply Temp North']!.reason).toMatch(/warmer than "CHW Supply Temp South" in \d+ % of rows/);
  });

  test('two supplies that read the same are a question for both', () => {
    const found = suggested({
      'CHW Supply Temp North': (m) => m.supplyF,
      'CHW Supply Temp South': (m) => m.supplyF + 0.1,
    });
    for (const each of Object.values(found)) expect(each.confidence).toBeLessThan(0.5);
  });

  test('the flow that steps with the number of running units is the primary flow', () => {
    const found = suggested({
      'CHW Flow 1 gpm': (m) => m.primaryGpm,
      'CH-1 Status': unit(1, 'on'),
      'CH-2 Status': unit(2, 'on'),
      'CH-3 Status': unit(3, 'on'),
    })['CHW Flow 1 gpm']!;
    expect(found.role).toBe('primaryFlow');
    expect(found.confidence).toBeGreaterThanOrEqual(0.5);
    expect(found.reason).toContain('teps with the number of running units');
  });

  test('the flow that equals the sum of the units’ flows is the primary flow', () => {
    const found = suggested({
      'CHW Flow gpm': (m) => m.primaryGpm,
      'CH-1 Flow gpm': unit(1, 'flowGpm'),
      'CH-2 Flow gpm': unit(2, 'flowGpm'),
      'CH-3 Flow gpm': unit(3, 'flowGpm'),
    })['CHW Flow gpm']!;
    expect(found).toMatchObject({ role: 'primaryFlow' });
    expect(found.reason).toMatch(/[Ee]quals the sum of 3 unit flows within 1 %/);
  });

  test('a nameless flow that moves as primary less secondary is the bypass, left to a person', () => {
    const found = suggested({
      'Pri Flow gpm': (m) => m.primaryGpm,
      'Sec Flow gpm': (m) => m.secondaryGpm,
      'FT-107 gpm': (m) => m.primaryGpm - m.secondaryGpm,
    })['FT-107 gpm']!;
    expect(found).toMatchObject({ role: 'bypassFlow', unit: 'gpm' });
    expect(found.confidence).toBeLessThan(0.5);
  });

  test('a nameless flow in L/s that equals the sum of the units’ flows in gpm keeps its unit', () => {
    const found = suggested({
      'FT-101 (L/s)': (m) => m.primaryGpm / 15.8503,
      'CH-1 Flow gpm': unit(1, 'flowGpm'),
      'CH-2 Flow gpm': unit(2, 'flowGpm'),
      'CH-3 Flow gpm': unit(3, 'flowGpm'),
    })['FT-101 (L/s)']!;
    expect(found).toMatchObject({ role: 'primaryFlow', unit: 'L/s' });
    expect(found.confidence).toBeLessThan(0.5);
  });

  test('a bypass flow whose sign is the other way round is a question', () => {
    const found = suggested({
      'Pri Flow gpm': (m) => m.primaryGpm,
      'Sec Flow gpm': (m) => m.secondaryGpm,
      'Bypass Flow gpm': (m) => m.secondaryGpm - m.primaryGpm,
    })['Bypass Flow gpm']!;
    expect(found.confidence).toBeLessThan(0.5);
    expect(found.reason).toContain('its sign is the other way round');
  });
});

describe('units that nothing names', () => {
  const panel = (flow: Value, power: Value = unit(1, 'powerKw')): Columns => ({
    'CH-1 LWT (°F)': unit(1, 'leavingF'),
    'CH-1 EWT (°F)': unit(1, 'enteringF'),
    'CH-1 Status': unit(1, 'on'),
    'CH-1 kW': power,
    'CH-1 Evap Flow': flow,
  });
  test.each([
    ['gpm', 1],
    ['L/s', 1 / 15.8503],
    ['m3/h', 1 / 4.4029],
    ['L/min', 3.78541],
  ])('a flow is told to be in %s by the energy balance with the power', (label, factor) => {
    const found = suggested(
      panel((m) => m.units[0]!.flowGpm * factor),
      { unitFlowGpm: undefined },
    )['CH-1 Evap Flow']!;
    expect(found.unit).toBe(label);
    expect(found.confidence).toBeGreaterThan(0.5);
    expect(found.reason).toMatch(/by the energy balance: 0\.\d\d kW a ton with "CH-1 kW"/);
  });

  test('power is told to be in W by the energy balance with the flow', () => {
    const { 'CH-1 kW': _, ...rest } = panel(() => 0);
    const found = suggested({
      ...rest,
      'CH-1 Power': (m) => 1000 * m.units[0]!.powerKw,
      'CH-1 Evap Flow': unit(1, 'flowGpm'),
    });
    expect(found['CH-1 Power']).toMatchObject({ role: 'unitPower', unit: 'W' });
  });

  test('a named flow unit that no machine could work with is a question', () => {
    const { 'CH-1 Evap Flow': _, ...rest } = panel(() => 0);
    const found = suggested({ ...rest, 'CH-1 Evap Flow (L/s)': unit(1, 'flowGpm') })['CH-1 Evap Flow (L/s)']!;
    expect(found.confidence).toBeLessThan(0.5);
    expect(found.reason).toMatch(/kW a ton, which no machine does: check the unit/);
  });

  test.each([
    ['L/s', 1 / 15.8503],
    ['m3/h', 1 / 4.4029],
  ])('a unit’s flow and the plant’s are told to be in %s by the design flow of a unit', (label, factor) => {
    const found = suggested({
      'Pri CHWS T (°C)': (m) => (m.supplyF - 32) / 1.8,
      'CH-1 Flow': (m) => m.units[0]!.flowGpm * factor,
      'Pri CHW Flow': (m) => m.primaryGpm * factor,
      'Sec CHW Flow': (m) => m.secondaryGpm * factor,
    });
    for (const name of ['CH-1 Flow', 'Pri CHW Flow', 'Sec CHW Flow']) {
      expect(found[name]!.unit).toBe(label);
      expect(found[name]!.confidence, found[name]!.reason).toBeGreaterThan(0.5);
    }
  });

  test('power is told to be in kW or W by the size of a unit, and left open where that is not known', () => {
    const columns: Columns = { 'CH-1 Power': unit(1, 'powerKw'), 'CH-2 Power': (m) => 1000 * m.units[1]!.powerKw };
    const found = suggested(columns);
    expect([found['CH-1 Power']!.unit, found['CH-2 Power']!.unit]).toEqual(['kW', 'W']);
    const open = suggested({ 'CH-1 Power': unit(1, 'powerKw') }, { unitFlowGpm: undefined })['CH-1 Power']!;
    expect(open.confidence).toBeLessThan(0.5);
  });

  test('a pressure difference of a metric file is in kPa, and of another is left open', () => {
    const metric = suggested({ 'Pri CHWS T (°C)': (m) => (m.supplyF - 32) / 1.8, 'CHW DP': () => 110 })['CHW DP']!;
    expect(metric.unit).toBe('kPa');
    expect(metric.confidence).toBeGreaterThan(0.5);
    expect(suggested({ 'Pri CHWS T (°F)': (m) => m.supplyF, 'CHW DP': () => 14 })['CHW DP']!.confidence).toBeLessThan(
      0.5,
    );
  });

  test('a named unit in which the water would be ice is a question', () => {
    const found = suggested({ 'Pri CHWS T (°F)': (m) => (m.supplyF - 32) / 1.8 })['Pri CHWS T (°F)']!;
    expect(found.confidence).toBeLessThan(0.5);
    expect(found.reason).toContain('is no chilled water: check the unit');
  });

  test('load from 0 to 1 is a fraction, from 0 to 100 a percentage', () => {
    const found = suggested({ 'CH-1 Load': (m) => m.units[0]!.loadPercent / 100, 'CH-2 Load': unit(2, 'loadPercent') });
    expect([found['CH-1 Load']!.unit, found['CH-2 Load']!.unit]).toEqual(['fraction', '%']);
  });

  test('a temperature that does not fit the unit of the others is a question', () => {
    const found = suggested({
      'Pri CHWS T (°F)': (m) => m.supplyF,
      'Pri CHWR T (°F)': (m) => m.returnF,
      'Sec CHWS T': (m) => (m.secondarySupplyF - 32) / 1.8,
    })['Sec CHWS T']!;
    expect(found.unit).toBe('degC');
    expect(found.confidence).toBeLessThan(0.5);
  });
});

describe('a second claim of one place', () => {
  test('is left to a person, with the name of the first', () => {
    const found = suggested({ PCHWST: (m) => m.supplyF, 'Primary Supply Temp': (m) => m.supplyF + 0.3 });
    const [first, second] = Object.values(found).sort((a, b) => b.confidence - a.confidence);
    expect(first!.confidence).toBeGreaterThan(0.5);
    expect(second!.confidence).toBeLessThan(0.5);
    expect(second!.reason).toContain(`"${first!.column}" claims the same place`);
  });

  test('a status goes before the command of the same unit', () => {
    const found = suggested({ 'CH-1 Enable': unit(1, 'on'), 'CH-1 Status': unit(1, 'on') });
    expect(found['CH-1 Status']!.confidence).toBeGreaterThan(0.8);
    expect(found['CH-1 Enable']!.confidence).toBeLessThan(0.5);
  });

  test('a total beside its parts would count twice', () => {
    const found = suggested({
      'Sec Flow A gpm': (m) => 0.4 * m.secondaryGpm,
      'Sec Flow B gpm': (m) => 0.6 * m.secondaryGpm,
      'Sec Flow Total gpm': (m) => m.secondaryGpm,
    });
    expect(found['Sec Flow Total gpm']!.confidence).toBeLessThan(0.5);
    expect(found['Sec Flow Total gpm']!.reason).toContain('would count twice');
    expect(found['Sec Flow A gpm']!.confidence).toBeGreaterThan(0.5);
  });
});
