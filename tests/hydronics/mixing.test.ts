import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { densityLbPerGallon, enthalpyBtuPerLb } from '@/lib/hydronics/fluids';
import { exactMixedF, mixedTemperature } from '@/lib/hydronics/mixing';
import { WATER } from './support/plants';

const flow = fc.double({ min: 0.1, max: 10_000, noNaN: true });
const tempF = fc.double({ min: 34, max: 80, noNaN: true });

describe('mixedTemperature', () => {
  test('is halfway for equal flows', () => expect(mixedTemperature(100, 44, 100, 56)).toBe(50));
  test('is the one temperature when only one stream flows', () => expect(mixedTemperature(0, 44, 300, 56)).toBe(56));
  test('does not exist when nothing flows', () => expect(mixedTemperature(0, 44, 0, 56)).toBeNaN());
  test('is missing when an input is missing', () => expect(mixedTemperature(Number.NaN, 44, 1, 56)).toBeNaN());
  test('refuses a negative flow', () => expect(() => mixedTemperature(-1, 44, 1, 56)).toThrow(RangeError));
});

describe('exactMixedF', () => {
  test('does not exist when nothing flows', () => expect(exactMixedF(0, 44, 0, 56, WATER)).toBeNaN());
  test('refuses a negative flow', () => expect(() => exactMixedF(1, 44, -1, 56, WATER)).toThrow(RangeError));

  test('lies between its streams and keeps mass and enthalpy', () => {
    fc.assert(
      fc.property(flow, tempF, flow, tempF, (flow1, temp1, flow2, temp2) => {
        const mixF = exactMixedF(flow1, temp1, flow2, temp2, WATER);
        expect(mixF).toBeGreaterThanOrEqual(Math.min(temp1, temp2) - 1e-7);
        expect(mixF).toBeLessThanOrEqual(Math.max(temp1, temp2) + 1e-7);
        const mass1 = flow1 * densityLbPerGallon(temp1, WATER);
        const mass2 = flow2 * densityLbPerGallon(temp2, WATER);
        const heatIn = mass1 * enthalpyBtuPerLb(temp1, WATER) + mass2 * enthalpyBtuPerLb(temp2, WATER);
        const heatOut = (mass1 + mass2) * enthalpyBtuPerLb(mixF, WATER);
        expect(Math.abs(heatOut / heatIn - 1)).toBeLessThan(1e-9);
      }),
    );
  });
});
