import { describe, expect, test } from 'vitest';
import { estimateOne, plantOf, recordOf, rowOf, TWO_UNITS } from './support/plants';

const REVERSE = { primarySupplyF: 44, secondarySupplyF: 46, secondaryReturnF: 56, primaryReturnF: 56 };

describe('with the units’ points alone', () => {
  const temperatures = { secondarySupplyF: 46, secondaryReturnF: 56, secondaryFlowGpm: 1080 };

  test('running units times rated flow stand in for the primary meter, with a wider sigma', () => {
    const rated = rowOf(recordOf(1, 5, { secondaryFlowGpm: 1200 }, { unitStatus: [1, 0] }));
    const metered = estimateOne({ primaryFlowGpm: 900, secondaryFlowGpm: 1200 });
    expect(rated.primary_flow_gpm).toBeCloseTo(900, 0);
    expect(rated.direction).toBe('reverse');
    const width = (row: typeof rated) => row.bypass_flow_hi_gpm - row.bypass_flow_lo_gpm;
    expect(width(rated)).toBeGreaterThan(1.5 * width(metered));
  });

  test('pump status goes before unit status', () => {
    const record = recordOf(1, 5, { secondaryFlowGpm: 1200 }, { unitStatus: [1, 0], primaryPumpStatus: [1, 1] });
    expect(Math.abs(rowOf(record).primary_flow_gpm - 1800)).toBeLessThan(1);
  });

  test('a missing status makes the sum missing, never the sum of the rest', () => {
    const record = recordOf(1, 5, { secondaryFlowGpm: 1200 }, { unitStatus: [1, Number.NaN] });
    expect(rowOf(record).primary_flow_gpm).toBeNaN();
    expect(rowOf(record).bypass_flow_gpm).toBeNaN();
  });

  test('leaving temperatures count while water flows, weighted by flow', () => {
    const record = recordOf(1, 5, temperatures, {
      unitStatus: [1, 0],
      unitFlowGpm: [900, 0],
      unitLeavingF: [44, 61],
      unitEnteringF: [56, 61],
    });
    const row = rowOf(record);
    expect(row.primary_supply_f).toBeCloseTo(44, 1);
    expect(row.primary_return_f).toBeCloseTo(56, 1);
    expect(row.direction).toBe('reverse');
    expect(Math.abs(row.bypass_flow_gpm + 180)).toBeLessThan(3);
  });

  test('a stopped unit that still passes water warms the header', () => {
    const record = recordOf(1, 5, temperatures, {
      unitStatus: [1, 0],
      unitFlowGpm: [900, 300],
      unitLeavingF: [44, 56],
      unitEnteringF: [56, 56],
    });
    // 47 F by the units; the balance, with 46 F sent out at nearly the same flow, pulls it down within its doubt.
    const row = rowOf(record);
    expect(row.primary_supply_f).toBeGreaterThan(46);
    expect(row.primary_supply_f).toBeLessThan(47.1);
  });
});

describe('other arrangements', () => {
  test('a variable-primary plant never runs backwards: slight shortage is still or undecided', () => {
    const plant = plantOf(TWO_UNITS, 'variable-primary');
    const row = estimateOne({ primaryFlowGpm: 1000, secondaryFlowGpm: 1020 }, plant);
    expect(row.reverse_probability).toBe(0);
    expect(['still', 'unknown']).toContain(row.direction);
    expect(row.bypass_flow_gpm).toBeGreaterThanOrEqual(0);
    expect(estimateOne({ primaryFlowGpm: 1000, bypassFlowGpm: 300 }, plant).direction).toBe('forward');
  });

  test('a variable-primary plant that reads clear reverse flow contradicts itself', () => {
    const plant = plantOf(TWO_UNITS, 'variable-primary');
    const row = estimateOne({ primaryFlowGpm: 1000, secondaryFlowGpm: 1400 }, plant);
    expect(row).toMatchObject({ direction: 'unknown', reason: 'sensors contradict' });
  });

  test('a variable-primary plant whose bypass nothing measures has no direction', () => {
    const plant = plantOf(TWO_UNITS, 'variable-primary');
    const row = estimateOne({ primarySupplyF: 44, primaryReturnF: 54, primaryFlowGpm: 1000 }, plant);
    expect(row).toMatchObject({ direction: 'unknown', reason: 'no data' });
    // Load is known all the same: it equals production.
    expect(row.load_tons).toBeGreaterThan(400);
  });

  test('a building bridge is weighed as the two tees it is', () => {
    const settings = { ...TWO_UNITS, design: { ...TWO_UNITS.design, blendedSupplyF: 46 } };
    const row = estimateOne({ ...REVERSE, secondaryFlowGpm: 1200 }, plantOf(settings, 'building-bridge'));
    expect(row.direction).toBe('reverse');
    expect(Math.abs(row.bypass_flow_gpm + 200)).toBeLessThan(2);
  });

  test('glycol is mixed by its own enthalpy and carries less heat', () => {
    const settings = { ...TWO_UNITS, fluid: { kind: 'propylene-glycol' as const, massPercent: 30 } };
    const row = estimateOne({ ...REVERSE, primaryFlowGpm: 1000, secondaryFlowGpm: 1200 }, plantOf(settings));
    expect(row.direction).toBe('reverse');
    expect(row.load_tons).toBeCloseTo(470.9, 0);
  });
});
