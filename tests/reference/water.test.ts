// IAPWS R7-97(2012), region 1: program check values of its table 5; properties at one atmosphere from an independent
// implementation (fixtures/reference/water.json names it).
import { describe, expect, test } from 'vitest';
import verification from '@/fixtures/reference/if97-verification.json';
import { ATMOSPHERE_MPA, if97Region1, waterFits } from '@/fixtures/reference/if97';
import mixing from '@/fixtures/reference/water-mixing.json';
import table from '@/fixtures/reference/water.json';
import {
  densityLbPerGallon,
  enthalpyBtuPerLb,
  heatFactorBtuPerHourPerGpmF,
  specificHeatBtuPerLbF,
  tempFFromEnthalpy,
  tonsFromFlow,
} from '@/lib/hydronics/fluids';
import { exactMixedF, mixedTemperature } from '@/lib/hydronics/mixing';
import type { Fluid } from '@/lib/hydronics/types';
import { fahrenheitFromCelsius, GALLON_M3, POUND_KG } from '@/lib/units';

const WATER: Fluid = { kind: 'water', massPercent: 0 };
/** The requirement on a property routine: relative error below 1e-4. */
const PROPERTY_TOLERANCE = 1e-4;
const relative = (value: number, truth: number) => Math.abs(value / truth - 1);
const densityKgM3 = (tempF: number) => (densityLbPerGallon(tempF, WATER) * POUND_KG) / GALLON_M3;

describe('the IF97 formulation used as the yardstick', () => {
  test.each(verification.points)('gives the published check values at $tempK K and $pressureMpa MPa', (point) => {
    const water = if97Region1(point.tempK, point.pressureMpa);
    // The release prints nine digits.
    expect(relative(water.volumeM3Kg, point.volume)).toBeLessThan(5e-9);
    expect(relative(water.enthalpyKjKg, point.enthalpy)).toBeLessThan(5e-9);
    expect(relative(water.specificHeatKjKgK, point.specificHeat)).toBeLessThan(5e-9);
  });
});

describe('water properties', () => {
  test.each(table.ip)('at $tempF F agree with the published table within 1e-4', (row) => {
    expect(relative(densityLbPerGallon(row.tempF, WATER), row.lbPerGallon)).toBeLessThan(PROPERTY_TOLERANCE);
    expect(relative(densityKgM3(row.tempF), row.densityKgM3)).toBeLessThan(PROPERTY_TOLERANCE);
    expect(relative(specificHeatBtuPerLbF(row.tempF, WATER) * 4.1868, row.specificHeatKj)).toBeLessThan(
      PROPERTY_TOLERANCE,
    );
    expect(relative(enthalpyBtuPerLb(row.tempF, WATER) * 2.326, row.enthalpyKj)).toBeLessThan(PROPERTY_TOLERANCE);
    expect(relative(heatFactorBtuPerHourPerGpmF(row.tempF, WATER), row.btuPerHourPerGpmF)).toBeLessThan(
      PROPERTY_TOLERANCE,
    );
  });

  test.each(table.si)('at $tempC C agree with the published table within 1e-4', (row) => {
    const tempF = fahrenheitFromCelsius(row.tempC);
    expect(relative(densityKgM3(tempF), row.densityKgM3)).toBeLessThan(PROPERTY_TOLERANCE);
    expect(relative(specificHeatBtuPerLbF(tempF, WATER) * 4.1868, row.specificHeatKj)).toBeLessThan(PROPERTY_TOLERANCE);
    expect(relative(enthalpyBtuPerLb(tempF, WATER) * 2.326, row.enthalpyKj)).toBeLessThan(PROPERTY_TOLERANCE);
    const heatKjM3 = densityKgM3(tempF) * specificHeatBtuPerLbF(tempF, WATER) * 4.1868;
    expect(relative(heatKjM3, row.densityTimesHeatKj)).toBeLessThan(PROPERTY_TOLERANCE);
  });

  test.each(table.si)('at $tempC C and 0.6 MPa are those of the formulation, to the last printed digit', (row) => {
    const water = if97Region1(row.tempC + 273.15, 0.6);
    expect(1 / water.volumeM3Kg).toBeCloseTo(row.at600kPa.densityKgM3, 3);
    expect(water.specificHeatKjKgK).toBeCloseTo(row.at600kPa.specificHeatKj, 5);
    expect(water.enthalpyKjKg).toBeCloseTo(row.at600kPa.enthalpyKj, 3);
  });

  test.each(table.ip)('at $tempF F move the trade factor by at most 0.035 % from one atmosphere to 0.6 MPa', (row) => {
    // Printed as 0.03 %; the largest in the table is 0.031 %, at 35 F.
    const change = relative(heatFactorBtuPerHourPerGpmF(row.tempF, WATER), row.at600kPa.btuPerHourPerGpmF);
    expect(change).toBeGreaterThan(1e-4);
    expect(change).toBeLessThan(3.5e-4);
    expect(relative(specificHeatBtuPerLbF(row.tempF, WATER) * 4.1868, row.at600kPa.specificHeatKj)).toBeLessThan(6e-4);
  });

  test('agree with the formulation itself over 0 to 30 C within 1e-4, at every tenth of a degree', () => {
    let worst = 0;
    for (let tenth = 0; tenth <= 300; tenth += 1) {
      const tempC = tenth / 10;
      const tempF = fahrenheitFromCelsius(tempC);
      const truth = if97Region1(tempC + 273.15, ATMOSPHERE_MPA);
      worst = Math.max(
        worst,
        relative(densityKgM3(tempF), 1 / truth.volumeM3Kg),
        relative(specificHeatBtuPerLbF(tempF, WATER) * 4.1868, truth.specificHeatKjKgK),
        // Enthalpy passes through zero near 0 C, so its error is judged as heat over one degree.
        Math.abs(enthalpyBtuPerLb(tempF, WATER) * 2.326 - truth.enthalpyKjKg) / 4.2,
      );
    }
    expect(worst).toBeLessThan(PROPERTY_TOLERANCE);
  });

  test('come from fits that the script beside the tables reproduces', () => {
    const fits = waterFits();
    for (const tempF of [32, 44, 56, 75, 110]) {
      const powers = (coefficients: number[]) =>
        coefficients.reduce((sum, value, power) => sum + value * ((tempF - 60) / 30) ** power, 0);
      expect(relative(densityKgM3(tempF), powers(fits.densityKgM3))).toBeLessThan(1e-9);
      expect(relative(specificHeatBtuPerLbF(tempF, WATER), powers(fits.specificHeatBtu))).toBeLessThan(1e-8);
    }
    expect(enthalpyBtuPerLb(60, WATER)).toBeCloseTo(fits.enthalpyAtBaseBtu, 8);
  });

  test('have an enthalpy whose slope is the specific heat', () => {
    for (const tempF of [34, 44, 56, 70, 90]) {
      const slope = (enthalpyBtuPerLb(tempF + 0.01, WATER) - enthalpyBtuPerLb(tempF - 0.01, WATER)) / 0.02;
      expect(slope).toBeCloseTo(specificHeatBtuPerLbF(tempF, WATER), 6);
    }
  });

  test('turn back from enthalpy to temperature', () => {
    for (const tempF of [32, 44.3, 56.7, 80, 110]) {
      expect(tempFFromEnthalpy(enthalpyBtuPerLb(tempF, WATER), WATER)).toBeCloseTo(tempF, 7);
    }
  });
});

describe('the rule of 500', () => {
  test.each(table.ip)('is within 1 % of the trade factor at $tempF F', ({ tempF }) => {
    expect(relative(500, heatFactorBtuPerHourPerGpmF(tempF, WATER))).toBeLessThan(0.01);
  });

  test('makes 1000 gpm from 44 to 56 F 500 tons, within 1 %', () => {
    expect(relative(tonsFromFlow(1000, 44, 56, WATER), 500)).toBeLessThan(0.01);
    // Half a percent up from 500 by real properties: 501.74 with the meter in the supply.
    expect(tonsFromFlow(1000, 44, 56, WATER)).toBeCloseTo(501.744, 2);
  });
});

describe('mixing of water', () => {
  test.each(mixing.cases)('$flow1Gpm gpm at $temp1F F with $flow2Gpm at $temp2F F is $exactF F exactly', (mixed) => {
    const { flow1Gpm, temp1F, flow2Gpm, temp2F } = mixed;
    // The table prints four decimals.
    expect(exactMixedF(flow1Gpm, temp1F, flow2Gpm, temp2F, WATER)).toBeCloseTo(mixed.exactF, 3);
    expect(mixedTemperature(flow1Gpm, temp1F, flow2Gpm, temp2F)).toBeCloseTo(mixed.volumeWeightedF, 10);
  });
});
