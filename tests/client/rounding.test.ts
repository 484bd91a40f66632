import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { closeAccount, closeSum } from '@/lib/client/rounding';

const sum = (values: readonly number[]) => values.reduce((left, right) => left + right, 0);

describe('closeSum', () => {
  test('rounds the total first and gives the remainder to the larger line', () => {
    // Rounded one by one they are 34 + 33 + 33 = 100, but the total is 101.
    expect(closeSum([34.4, 33.4, 33.2], 0)).toEqual({ parts: [35, 33, 33], total: 101 });
  });

  test('takes what is too much from the larger line', () => {
    // Rounded one by one they are 11 + 6 + 6 = 23, but the total is 22.
    expect(closeSum([10.6, 5.6, 5.6], 0)).toEqual({ parts: [10, 6, 6], total: 22 });
  });

  test('counts size without sign: the larger line may be negative', () => {
    expect(closeSum([1720.4, -2686.4], 0, -966).parts).toEqual([1720, -2686]);
    expect(closeSum([0.44, -3.44, 0.44], 1).parts).toEqual([0.4, -3.4, 0.4]);
    expect(closeSum([0.44, -3.46, 0.44], 1)).toEqual({ parts: [0.4, -3.4, 0.4], total: -2.6 });
  });

  test('a part that is not known stays unknown and counts as nothing', () => {
    expect(closeSum([1.2, Number.NaN, 2.4], 0)).toEqual({ parts: [1, Number.NaN, 3], total: 4 });
    expect(closeSum([Number.NaN], 0)).toEqual({ parts: [Number.NaN], total: Number.NaN });
  });

  test('refuses decimals that are no whole number', () => {
    expect(() => closeSum([1], 0.5)).toThrow(RangeError);
    expect(() => closeSum([1], -1)).toThrow(/-1/);
  });

  test('what is printed always adds up, and no line but one is more than half a step from its value', () => {
    const parts = fc.array(fc.double({ min: -5000, max: 5000, noNaN: true }), { minLength: 1, maxLength: 12 });
    fc.assert(
      fc.property(parts, fc.integer({ min: 0, max: 2 }), (values, decimals) => {
        const closed = closeSum(values, decimals);
        const step = 10 ** -decimals;
        expect(sum(closed.parts)).toBeCloseTo(closed.total, 6);
        expect(Math.abs(closed.total - sum(values))).toBeLessThanOrEqual(step / 2 + 1e-6);
        const moved = closed.parts.filter((part, index) => Math.abs(part - (values[index] ?? 0)) > step / 2 + 1e-6);
        expect(moved.length).toBeLessThanOrEqual(1);
      }),
    );
  });
});

describe('closeAccount', () => {
  test('leads from the one printed total to the next', () => {
    const lines = [
      { kind: 'total', amount: 14 },
      { kind: 'change', amount: -1.34 },
      { kind: 'change', amount: -1.34 },
      { kind: 'total', amount: 11.32 },
      { kind: 'change', amount: 0.54 },
      { kind: 'change', amount: -1.74 },
      { kind: 'total', amount: 10.12 },
    ] as const;
    const printed = closeAccount(lines, 1);
    expect(printed).toEqual([14, -1.4, -1.3, 11.3, 0.5, -1.7, 10.1]);
  });

  test('the ledger of an hour: 8.7 + 4.9 - 0.0 = 13.6', () => {
    const lines = [
      { kind: 'total', amount: 8.72 },
      { kind: 'change', amount: 4.93 },
      { kind: 'change', amount: -0.04 },
      { kind: 'total', amount: 13.61 },
    ] as const;
    expect(closeAccount(lines, 1)).toEqual([8.7, 4.9, 0, 13.6]);
  });

  test('a stretch to a total that is not known is left as it rounds', () => {
    const lines = [
      { kind: 'total', amount: 10.04 },
      { kind: 'change', amount: 1.26 },
      { kind: 'total', amount: Number.NaN },
    ] as const;
    expect(closeAccount(lines, 1)).toEqual([10, 1.3, Number.NaN]);
  });
});
