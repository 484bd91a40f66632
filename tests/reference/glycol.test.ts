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
import type { Fluid, FluidKind } from '@/lib/hydronics/types';
import { fahrenheitFromCelsius, GALLON_M3, POUND_KG } from '@/lib/units';

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
