// A. Melinder, Properties of Secondary Working Fluids for Indirect Systems, IIR 2010; values in fixtures/reference/glycol.json.
import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/glycol.json';
import {
  densityLbPerGallon,
  enthalpyBtuPerLb,
  freezingPointF,
  heatFactorBtuPerHourPerGpmF,
  specificHeatBtuPerLbF,
  tempFFromEnthalpy,
} from '@/lib/hydronics/fluids';
import { inspectSensors } from '@/lib/hydronics/sensor-stretches';
import type { Fluid, FluidKind } from '@/lib/hydronics/types';
import { fahrenheitFromCelsius, GALLON_M3, POUND_KG } from '@/lib/units';
import { plantOf, recordOf } from '../hydronics/support/plants';

const fluidOf = (row: { kind: string; massPercent: number }): Fluid => ({
  kind: row.kind as FluidKind,
  massPercent: row.massPercent,
});

describe('glycol solutions', () => {
  test.each(table.points)('$kind at $massPercent % and $tempC C has the published properties', (row) => {
    const fluid = fluidOf(row);
    const tempF = fahrenheitFromCelsius(row.tempC);
    // Tolerances are half the last printed digit: the polynomials are the published ones.
    expect((densityLbPerGallon(tempF, fluid) * POUND_KG) / GALLON_M3).toBeCloseTo(row.densityKgM3, 2);
    expect(Math.abs(specificHeatBtuPerLbF(tempF, fluid) * 4186.8 - row.specificHeatJ)).toBeLessThan(0.006);
    expect(Math.abs(heatFactorBtuPerHourPerGpmF(tempF, fluid) - row.btuPerHourPerGpmF)).toBeLessThan(0.006);
  });

  test.each(table.freezing)('$kind at $massPercent % freezes at $freezingC C', (row) => {
    expect((freezingPointF(fluidOf(row)) - 32) / 1.8).toBeCloseTo(row.freezingC, 3);
  });

  test.each(table.otherCorrelations.points)(
    '$kind at $massPercent % are within what another correlation ($name) may differ by',
    (row) => {
      const fluid = fluidOf(row);
      const tempF = fahrenheitFromCelsius(row.tempC);
      const density = (densityLbPerGallon(tempF, fluid) * POUND_KG) / GALLON_M3;
      const heat = specificHeatBtuPerLbF(tempF, fluid) * 4186.8;
      // 0.2 % in density, 0.7 % when the fluid is inhibited; 2 to 2.5 % in specific heat.
      if (row.densityKgM3 !== null)
        expect(Math.abs(density / row.densityKgM3 - 1)).toBeLessThan(row.inhibited ? 7e-3 : 2e-3);
      expect(Math.abs(heat / row.specificHeatJ - 1)).toBeLessThan(0.025);
    },
  );

  test('have curves that run on below the freezing point, so that readings there are refused by their temperature', () => {
    // 20 % ethylene glycol freezes at -7.949 C (17.7 F).
    const fluid: Fluid = { kind: 'ethylene-glycol', massPercent: 20 };
    expect(specificHeatBtuPerLbF(10, fluid)).toBeGreaterThan(0.9);
    const readings = [20, 17, 16, 15, 10, 20];
    const record = recordOf(readings.length, 5, { primarySupplyF: readings });
    const { stretches } = inspectSensors(record, { ...plantOf(), fluid });
    // Two degrees are left for the sensor's own error.
    expect(stretches).toEqual([
      { channel: 'primarySupplyF', unitIndex: 0, kind: 'out-of-range', fromSlot: 3, toSlot: 5 },
    ]);
  });

  test('have an enthalpy that starts at 32 F, rises with cp and can be turned back', () => {
    const fluid: Fluid = { kind: 'propylene-glycol', massPercent: 30 };
    expect(enthalpyBtuPerLb(32, fluid)).toBeCloseTo(0, 10);
    const slope = (enthalpyBtuPerLb(50.01, fluid) - enthalpyBtuPerLb(49.99, fluid)) / 0.02;
    expect(slope).toBeCloseTo(specificHeatBtuPerLbF(50, fluid), 6);
    expect(tempFFromEnthalpy(enthalpyBtuPerLb(47.3, fluid), fluid)).toBeCloseTo(47.3, 9);
  });

  test.each([-1, 61, Number.NaN])('are refused at %f mass percent, where the fits end', (massPercent) => {
    expect(() => densityLbPerGallon(50, { kind: 'ethylene-glycol', massPercent })).toThrow(RangeError);
  });
});
