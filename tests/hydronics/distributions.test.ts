import { describe, expect, test } from 'vitest';
import {
  chiSquareQuantile,
  chiSquareTail,
  incompleteBeta,
  logGamma,
  sidakLimit,
  studentTQuantile,
} from '@/lib/hydronics/distributions';
import { normalCdf, normalQuantile } from '@/lib/hydronics/normal';

test('the gamma function is the factorial, and sqrt(pi) at a half', () => {
  expect(logGamma(11)).toBeCloseTo(Math.log(3_628_800), 12);
  expect(logGamma(0.5)).toBeCloseTo(0.5 * Math.log(Math.PI), 13);
  expect(logGamma(0.25) + logGamma(0.75)).toBeCloseTo(Math.log(Math.PI * Math.SQRT2), 13);
});

test('the incomplete beta function has its closed forms', () => {
  expect(incompleteBeta(0.3, 1, 1)).toBeCloseTo(0.3, 14);
  expect(incompleteBeta(0.3, 2, 3)).toBeCloseTo(1 - 0.7 ** 4 - 4 * 0.3 * 0.7 ** 3, 13);
  expect(incompleteBeta(0.9, 40, 7) + incompleteBeta(0.1, 7, 40)).toBeCloseTo(1, 13);
  expect([incompleteBeta(0, 2, 3), incompleteBeta(1, 2, 3)]).toEqual([0, 1]);
});

describe('quantiles', () => {
  test.each([1e-12, 0.001, 0.05, 0.3, 0.5, 0.8, 0.975, 0.9999])('of the normal at %f are turned back', (p) => {
    expect(normalCdf(normalQuantile(p)) / p).toBeCloseTo(1, 10);
  });

  // Closed forms: one degree of freedom tan(pi (p - 1/2)); two (2p - 1) sqrt(2 / (1 - (2p - 1)^2)).
  test.each([0.55, 0.9, 0.975, 0.9995])('of Student’s t at %f have their closed forms', (p) => {
    expect(studentTQuantile(p, 1) / Math.tan(Math.PI * (p - 0.5))).toBeCloseTo(1, 10);
    const a = 2 * p - 1;
    expect(studentTQuantile(p, 2) / (a * Math.sqrt(2 / (1 - a * a)))).toBeCloseTo(1, 10);
  });

  // Abramowitz & Stegun, Handbook of Mathematical Functions (1964), table 26.10 (A and nu); printed to 3 decimals.
  // From memory of the table; 2.921 agrees with the 2.9208 of the end-gauge example in tests/reference/gum.test.ts.
  test.each([
    [0.975, 4, 2.776],
    [0.975, 10, 2.228],
    [0.995, 16, 2.921],
    [0.95, 30, 1.697],
  ])('of Student’s t at %f and %i degrees of freedom are as printed, %f', (p, freedom, printed) => {
    expect(studentTQuantile(p, freedom)).toBeCloseTo(printed, 3);
    expect(studentTQuantile(1 - p, freedom)).toBeCloseTo(-printed, 3);
  });

  test('of Student’s t go over into the normal, also for degrees of freedom that are no whole number', () => {
    expect(studentTQuantile(0.975, 1e6)).toBeCloseTo(normalQuantile(0.975), 5);
    expect(studentTQuantile(0.975, Infinity)).toBeCloseTo(1.959963984540054, 12);
    const [below, between, above] = [16, 16.75, 17].map((freedom) => studentTQuantile(0.975, freedom));
    expect(between).toBeLessThan(below ?? 0);
    expect(between).toBeGreaterThan(above ?? Infinity);
  });

  test('of chi-square with two degrees of freedom are -2 ln(1 - p)', () => {
    for (const p of [1e-6, 0.05, 0.5, 0.95, 0.999]) {
      expect(chiSquareQuantile(p, 2) / (-2 * Math.log1p(-p))).toBeCloseTo(1, 10);
    }
  });

  test('of chi-square with one degree of freedom are squares of the normal’s', () => {
    expect(chiSquareQuantile(0.95, 1)).toBeCloseTo(normalQuantile(0.975) ** 2, 10);
  });

  test('of chi-square are turned back by its tail', () => {
    for (const freedom of [0.5, 3, 40, 2000]) {
      expect(chiSquareTail(chiSquareQuantile(0.95, freedom), freedom)).toBeCloseTo(0.05, 10);
      expect(chiSquareTail(chiSquareQuantile(0.01, freedom), freedom)).toBeCloseTo(0.99, 10);
    }
  });

  test.each([0, 1, -1, Number.NaN])('at the probability %f are refused', (p) => {
    expect(() => studentTQuantile(p, 3)).toThrow(RangeError);
    expect(() => chiSquareQuantile(p, 3)).toThrow(RangeError);
  });

  test('without degrees of freedom are refused', () => {
    expect(() => studentTQuantile(0.9, 0)).toThrow(RangeError);
    expect(() => chiSquareQuantile(0.9, Number.NaN)).toThrow(RangeError);
  });
});

test('a limit for the largest of several tests keeps the chance of any false alarm', () => {
  expect(sidakLimit(0.05, 1)).toBeCloseTo(1.96, 3);
  const limit = sidakLimit(0.05, 6);
  expect(1 - (1 - 2 * normalCdf(-limit)) ** 6).toBeCloseTo(0.05, 10);
});
