// Effectiveness-NTU check values; sources and their computation are named in fixtures/reference/coil.json.
import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/coil.json';
import {
  coilFromDesign,
  coilPoint,
  counterflowEffectiveness,
  counterflowNtu,
  waterFractionForLoad,
} from '@/lib/hydronics/coil';

const coil = coilFromDesign(table.design);

describe('counterflow coil', () => {
  test('has the published design conductance', () => {
    // Printed to three decimals of 72,014.636.
    expect(Math.abs(coil.uaDesign / table.uaDesign - 1)).toBeLessThan(1e-7);
  });

  test.each(table.points)(
    'at $waterFraction water, $airFraction air, $enteringAirF F air and $enteringWaterF F water works where published',
    (row) => {
      const point = coilPoint(coil, row.waterFraction, row.airFraction, row.enteringAirF, row.enteringWaterF);
      expect(Math.abs(point.ua - row.ua)).toBeLessThan(0.006);
      expect(point.effectiveness).toBeCloseTo(row.effectiveness, 5);
      expect(Math.abs(point.heatBtuPerHour - row.heatBtuPerHour)).toBeLessThan(0.1);
      expect(point.leavingWaterF).toBeCloseTo(row.leavingWaterF, 4);
      expect(point.leavingAirF).toBeCloseTo(row.leavingAirF, 4);
      expect(point.waterDeltaTF).toBeCloseTo(row.waterDeltaTF, 4);
      expect(counterflowEffectiveness(row.ntu, row.capacityRatio)).toBeCloseTo(row.effectiveness, 5);
      expect(counterflowNtu(point.effectiveness, row.capacityRatio)).toBeCloseTo(row.ntu, 4);
    },
  );

  test.each(table.loadCurve)('at $loadShare load and $enteringWaterF F needs $waterFraction of design flow', (row) => {
    const fraction = waterFractionForLoad(coil, row.loadShare, row.enteringWaterF);
    expect(Math.abs(fraction - row.waterFraction)).toBeLessThan(6e-6);
    expect(Math.abs((row.loadShare / fraction) * 12 - row.waterDeltaTF)).toBeLessThan(1e-4);
  });

  test.each(table.overcooling)('asked for $leavingAirF F air at design needs $waterFraction of design flow', (row) => {
    const eager = { ...coil, leavingAirF: row.leavingAirF };
    const fraction = waterFractionForLoad(eager, 1, 44);
    expect(fraction).toBeCloseTo(row.waterFraction, 4);
    expect(coilPoint(eager, fraction, 1, 80, 44).waterDeltaTF).toBeCloseTo(row.waterDeltaTF, 3);
  });
});
