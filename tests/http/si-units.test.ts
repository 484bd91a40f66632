import { describe, expect, it } from 'vitest';
import { inUnits, siColumn, siForm, toSi } from '@/lib/http/si-units';

describe('siForm', () => {
  // 1 US gpm = 0.0630902 L/s; 1 ton = 3.516853 kW (NIST SP 811, 2008, appendix B.8)
  it.each([
    ['bypassFlowGpm', 'bypassFlowLs', 1000, 63.0902],
    ['bypassFlowLoGpm', 'bypassFlowLoLs', -1000, -63.0902],
    ['blendedSupplyF', 'blendedSupplyC', 44, 6.66667],
    ['blendedSupplyMaxF', 'blendedSupplyMaxC', 50, 10],
    ['warmestSupplyF', 'warmestSupplyC', 32, 0],
    ['deltaTF', 'deltaTC', 12, 6.66667],
    ['loadDeltaTF', 'loadDeltaTC', 9, 5],
    ['expectedDeltaTF', 'expectedDeltaTC', 18, 10],
    ['sigmaF', 'sigmaC', 0.9, 0.5],
    ['tempPlusMinusF', 'tempPlusMinusC', 0.36, 0.2],
    ['dilutionF', 'dilutionC', 3.6, 2],
    ['loadTons', 'loadKw', 100, 351.6853],
    ['tons', 'coolingKw', 1, 3.516853],
    ['loadTonHours', 'loadCoolingKwh', 1, 3.516853],
    // 1 ft of water (39.2 F) = 2.98898 kPa, 1 m of water = 9.80665 kPa (the same appendix)
    ['headFt', 'headM', 85, 25.9072],
    ['kwPerTon', 'kwPerKw', 0.58, 0.16492],
  ])('%s becomes %s', (name, siName, value, expected) => {
    const form = siForm(name);
    expect(form?.name).toBe(siName);
    expect(form?.convert(value)).toBeCloseTo(expected, 4);
  });
  it.each([
    'excessEnergyKwh',
    'excessCost',
    'reverseMinutes',
    'quality',
    'sigmaPercent',
    'auxiliaryKw',
    'hourStart',
    'id',
  ])('%s carries no trade unit and stays', (name) => {
    expect(siForm(name)).toBeNull();
  });
});

describe('siColumn', () => {
  it.each([
    ['bypass_flow_lo_gpm', 'bypass_flow_lo_ls'],
    ['blended_supply_hi_f', 'blended_supply_hi_c'],
    ['load_delta_t_f', 'load_delta_t_c'],
    ['delta_t_f', 'delta_t_c'],
    ['stranded_tons', 'stranded_kw'],
  ])('renames the column %s to %s', (column, si) => {
    expect(siColumn(column)?.name).toBe(si);
  });
  it('takes no 32 off a difference and takes it off a temperature', () => {
    expect(siColumn('delta_t_f')?.convert(18)).toBeCloseTo(10, 12);
    expect(siColumn('primary_supply_f')?.convert(50)).toBeCloseTo(10, 12);
  });
  it('leaves a column without a unit alone', () => {
    expect(siColumn('direction')).toBeNull();
    expect(siColumn('excess_energy_kwh')).toBeNull();
  });
});

describe('toSi', () => {
  it('goes through objects and lists and keeps missing missing', () => {
    expect(
      toSi({ items: [{ blendedSupplyF: 50, bypassFlowGpm: null, cause: 'none' }], nested: { loadF: 9 }, none: null }),
    ).toEqual({ items: [{ blendedSupplyC: 10, bypassFlowLs: null, cause: 'none' }], nested: { loadC: 5 }, none: null });
  });
  it('is not applied for ip', () => {
    const answer = { blendedSupplyF: 50 };
    expect(inUnits(answer, 'ip')).toBe(answer);
    expect(inUnits(answer, 'si')).toEqual({ blendedSupplyC: 10 });
  });
});
