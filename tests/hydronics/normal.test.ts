// Values: Abramowitz & Stegun, Handbook of Mathematical Functions (1964), tables 26.1 and 26.2.
import { describe, expect, test } from 'vitest';
import { logNormalCdf, NINETY_PERCENT_Z, normalCdf, normalDensity, truncationShift } from '@/lib/hydronics/normal';

describe('the standard normal', () => {
  test.each([
    [0, 0.5],
    [1, 0.841344746068543],
    [2, 0.97724986805182],
    [3, 0.99865010196837],
    [-1, 0.158655253931457],
    [-3, 1.349898031630095e-3],
    [-5, 2.866515718791933e-7],
  ])('is below %f with probability %f', (z, probability) => {
    expect(Math.abs(normalCdf(z) / probability - 1)).toBeLessThan(1e-12);
  });

  test('holds 90 % within 1.6449 sigma', () => {
    expect(normalCdf(NINETY_PERCENT_Z) - normalCdf(-NINETY_PERCENT_Z)).toBeCloseTo(0.9, 12);
  });

  test('has a cdf whose slope is the density, across the join of its two forms', () => {
    for (const z of [-8.2, -3.001, -2.999, 0, 2.999, 3.001, 5]) {
      const slope = (normalCdf(z + 1e-5) - normalCdf(z - 1e-5)) / 2e-5;
      expect(Math.abs(slope / normalDensity(z) - 1)).toBeLessThan(1e-4);
    }
  });

  test('keeps its logarithm where the probability itself underflows', () => {
    expect(logNormalCdf(-2)).toBeCloseTo(Math.log(normalCdf(-2)), 12);
    // Leading term of the asymptotic series at 100 sigma: -z^2/2 - ln(z sqrt(2 pi)).
    expect(logNormalCdf(-100)).toBeCloseTo(-5000 - Math.log(100 * Math.sqrt(2 * Math.PI)), 3);
  });

  test('passes a missing value on', () => {
    expect(normalCdf(Number.NaN)).toBeNaN();
    expect(truncationShift(Number.NaN)).toBeNaN();
  });

  test('cut off below zero, has its mean moved by density over probability', () => {
    expect(truncationShift(0)).toBeCloseTo(Math.sqrt(2 / Math.PI), 12);
    expect(truncationShift(20)).toBe(0);
    expect(truncationShift(-50)).toBeCloseTo(50 + 1 / 50, 3);
  });
});
