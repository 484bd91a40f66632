import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { coilFromDesign, counterflowEffectiveness, waterFractionForLoad } from '@/lib/hydronics/coil';
import { expectedDeltaTF, loadSide, MAX_EXPECTED_SHARE } from '@/lib/hydronics/expected-delta-t';
import { plantOf, TWO_UNITS } from './support/plants';

const side = loadSide(plantOf());

describe('expectedDeltaTF', () => {
  test('is the design delta-T at design load and supply', () => {
    expect(expectedDeltaTF(side, 1, 44)).toBeCloseTo(12, 6);
  });

  test('rises a little at part load and is never promised above 1.2 of design', () => {
    expect(expectedDeltaTF(side, 0.75, 44)).toBeCloseTo(12.8552, 3);
    expect(expectedDeltaTF(side, 0.5, 44)).toBeCloseTo(14.0612, 3);
    expect(expectedDeltaTF(side, 0.25, 44)).toBeCloseTo(12 * MAX_EXPECTED_SHARE, 9);
    expect(expectedDeltaTF(side, 0.01, 44)).toBeCloseTo(12 * MAX_EXPECTED_SHARE, 9);
  });

  test('falls when the coils are fed warmer water, also where the promise is bounded', () => {
    expect(expectedDeltaTF(side, 1, 46)).toBeCloseTo(9.8219, 3);
    // The ratio of the flows at 46 and 44 F is the coil's, the level is the bounded one.
    expect(expectedDeltaTF(side, 0.25, 46)).toBeCloseTo((14.4 * 0.18619) / 0.2189, 3);
  });

  test('with water too warm for the air, the valve stands open at twice design flow', () => {
    expect(expectedDeltaTF(side, 1, 60)).toBeCloseTo(6, 9);
  });

  test('never rises with supply temperature', () => {
    const load = fc.double({ min: 0, max: 1.5, noNaN: true });
    const supply = fc.double({ min: 36, max: 60, noNaN: true });
    fc.assert(
      fc.property(load, supply, supply, (loadShare, one, other) => {
        const colder = expectedDeltaTF(side, loadShare, Math.min(one, other));
        expect(expectedDeltaTF(side, loadShare, Math.max(one, other))).toBeLessThanOrEqual(colder + 1e-6);
      }),
    );
  });

  test('passes missing inputs on', () => {
    expect(expectedDeltaTF(side, Number.NaN, 44)).toBeNaN();
    expect(expectedDeltaTF(side, 0.5, Number.NaN)).toBeNaN();
  });

  test('of a building bridge starts from the blend it is built to make', () => {
    const settings = { ...TWO_UNITS, design: { ...TWO_UNITS.design, blendedSupplyF: 48 } };
    expect(expectedDeltaTF(loadSide(plantOf(settings, 'building-bridge')), 1, 48)).toBeCloseTo(12, 6);
  });
});

describe('coil', () => {
  test('refuses a design that no counterflow coil can be', () => {
    const design = {
      heatBtuPerHour: 1,
      enteringAirF: 80,
      leavingAirF: 55,
      enteringWaterF: 44,
      airResistanceShare: 0.5,
    };
    expect(() => coilFromDesign({ ...design, waterDeltaTF: 36 })).toThrow(RangeError);
    expect(() => coilFromDesign({ ...design, waterDeltaTF: 12, leavingAirF: 43 })).toThrow(RangeError);
  });

  test('effectiveness at equal capacity rates is NTU / (1 + NTU), and continuous there', () => {
    expect(counterflowEffectiveness(2, 1)).toBeCloseTo(2 / 3, 12);
    expect(counterflowEffectiveness(2, 1 - 1e-7)).toBeCloseTo(2 / 3, 7);
    expect(() => counterflowEffectiveness(1, 1.1)).toThrow(RangeError);
  });

  test('has no flow for water warmer than the air it should cool', () => {
    expect(waterFractionForLoad(side.coil, 0.5, 81)).toBeNaN();
    expect(waterFractionForLoad(side.coil, 0, 44)).toBeNaN();
  });
});
