import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { densityLbPerGallon, enthalpyBtuPerLb, tonsFromFlow } from '@/lib/hydronics/fluids';
import {
  decouplerBalance,
  forwardFraction,
  forwardSensitivity,
  fractionUncertainty,
  ratioUncertainty,
  reverseFraction,
  reverseSensitivity,
  secondaryToPrimaryRatio,
} from '@/lib/hydronics/tees';
import { WATER } from './support/plants';

const flowGpm = fc.double({ min: 50, max: 6000, noNaN: true });
const supplyF = fc.double({ min: 36, max: 50, noNaN: true });
const riseF = fc.double({ min: 1, max: 24, noNaN: true });
const share = fc.double({ min: 0, max: 1, noNaN: true });

describe('decouplerBalance', () => {
  test('keeps mass and enthalpy over both tees, whichever way the common pipe runs', () => {
    fc.assert(
      fc.property(flowGpm, flowGpm, supplyF, riseF, (primaryGpm, secondaryGpm, coldF, rise) => {
        const hotF = coldF + rise;
        const tees = decouplerBalance(primaryGpm, secondaryGpm, coldF, hotF, WATER);
        const production =
          primaryGpm *
          densityLbPerGallon(coldF, WATER) *
          (enthalpyBtuPerLb(tees.primaryReturnF, WATER) - enthalpyBtuPerLb(coldF, WATER));
        const load =
          secondaryGpm *
          densityLbPerGallon(tees.secondarySupplyF, WATER) *
          (enthalpyBtuPerLb(hotF, WATER) - enthalpyBtuPerLb(tees.secondarySupplyF, WATER));
        expect(Math.abs(production / load - 1)).toBeLessThan(1e-7);
        const throughF = tees.bypassFlowGpm < 0 ? hotF : coldF;
        const massGap =
          primaryGpm * densityLbPerGallon(coldF, WATER) -
          secondaryGpm * densityLbPerGallon(tees.secondarySupplyF, WATER) -
          tees.bypassFlowGpm * densityLbPerGallon(throughF, WATER);
        expect(Math.abs(massGap) / (8.34 * (primaryGpm + secondaryGpm))).toBeLessThan(1e-9);
      }),
    );
  });

  test('makes the load equal the production in tons', () => {
    const tees = decouplerBalance(1000, 1200, 44, 56, WATER);
    const loadTons = tonsFromFlow(1200, tees.secondarySupplyF, 56, WATER);
    expect(tonsFromFlow(1000, 44, tees.primaryReturnF, WATER)).toBeCloseTo(loadTons, 4);
  });

  test('leaves both mains unmixed at balance', () => {
    const tees = decouplerBalance(1000, 1000, 44, 56, WATER);
    expect(tees.bypassFlowGpm).toBeCloseTo(0, 9);
    expect(tees.secondarySupplyF).toBe(44);
    expect(tees.primaryReturnF).toBeCloseTo(56, 9);
  });

  test('gives a coasting loop its whole flow backwards, at return temperature', () => {
    const tees = decouplerBalance(0, 800, 44, 60, WATER);
    expect(tees.secondarySupplyF).toBeCloseTo(60, 7);
    expect(tees.bypassFlowGpm).toBeCloseTo(-800, 4);
    expect(tees.primaryReturnF).toBeNaN();
  });

  test('has no mixed temperature on a side without flow', () => {
    expect(decouplerBalance(500, 0, 44, 56, WATER).secondarySupplyF).toBeNaN();
    expect(decouplerBalance(500, 0, 44, 56, WATER).primaryReturnF).toBeCloseTo(44, 7);
    expect(decouplerBalance(0, 0, 44, 56, WATER).primaryReturnF).toBeNaN();
  });

  test('passes missing inputs on as missing', () => {
    expect(decouplerBalance(1000, Number.NaN, 44, 56, WATER).bypassFlowGpm).toBeNaN();
    expect(decouplerBalance(1000, 1200, Number.NaN, 56, WATER).secondarySupplyF).toBeNaN();
  });

  test('refuses a negative flow', () => expect(() => decouplerBalance(-1, 1, 44, 56, WATER)).toThrow(RangeError));
});

describe('fractions', () => {
  test('recover what was mixed, exactly in enthalpy', () => {
    fc.assert(
      fc.property(supplyF, riseF, share, (coldF, rise, fraction) => {
        const cold = enthalpyBtuPerLb(coldF, WATER);
        const hot = enthalpyBtuPerLb(coldF + rise, WATER);
        expect(reverseFraction(cold, hot, cold + fraction * (hot - cold))).toBeCloseTo(fraction, 9);
        expect(forwardFraction(cold, hot, hot - fraction * (hot - cold))).toBeCloseTo(fraction, 9);
      }),
    );
  });

  test('do not move when all sensors are off by the same amount', () => {
    fc.assert(
      fc.property(
        supplyF,
        riseF,
        share,
        fc.double({ min: -3, max: 3, noNaN: true }),
        (cold, rise, fraction, offset) => {
          const mixed = cold + fraction * rise;
          const moved = reverseFraction(cold + offset, cold + rise + offset, mixed + offset);
          expect(moved).toBeCloseTo(reverseFraction(cold, cold + rise, mixed), 9);
          const movedForward = forwardFraction(cold + offset, cold + rise + offset, mixed + offset);
          expect(movedForward).toBeCloseTo(forwardFraction(cold, cold + rise, mixed), 9);
        },
      ),
    );
  });

  test('have sensitivities that sum to zero and match finite differences', () => {
    fc.assert(
      fc.property(supplyF, riseF, share, (cold, rise, fraction) => {
        const hot = cold + rise;
        const mixed = cold + fraction * rise;
        for (const [slope, value] of [
          [reverseSensitivity(cold, hot, mixed), reverseFraction] as const,
          [forwardSensitivity(cold, hot, mixed), forwardFraction] as const,
        ]) {
          expect(slope.byPrimarySupply + slope.bySecondaryReturn + slope.byMixed).toBeCloseTo(0, 9);
          const step = 1e-5;
          const byCold = (value(cold + step, hot, mixed) - value(cold - step, hot, mixed)) / (2 * step);
          const byHot = (value(cold, hot + step, mixed) - value(cold, hot - step, mixed)) / (2 * step);
          expect(byCold).toBeCloseTo(slope.byPrimarySupply, 4);
          expect(byHot).toBeCloseTo(slope.bySecondaryReturn, 4);
        }
      }),
    );
  });

  test('do not exist when supply and return are equal', () => {
    expect(reverseFraction(50, 50, 50)).toBeNaN();
    expect(forwardFraction(50, 50, 50)).toBeNaN();
    expect(secondaryToPrimaryRatio(44, 56, 56, 56)).toBeNaN();
    expect(fractionUncertainty(0, 0, 0.2, 0.2, 0.2)).toBe(Number.POSITIVE_INFINITY);
  });

  test('are 1 minus the ratio of the flows when all four temperatures are there', () => {
    // 44/44/56/53: three quarters of the primary flow goes to the buildings.
    expect(1 - secondaryToPrimaryRatio(44, 53, 44, 56)).toBeCloseTo(forwardFraction(44, 56, 53), 12);
    expect(ratioUncertainty(44, 53, 44, 56, 0)).toBe(0);
  });
});
