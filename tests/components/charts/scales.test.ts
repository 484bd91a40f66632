import fc from 'fast-check';
import { expect, test } from 'vitest';
import { niceTicks, nudgeApart, tickLabel } from '@/components/charts/scales';

test.each([
  [-1190, 1170, [-800, -400, 0, 400, 800]],
  [43.2, 57.9, [44, 48, 52, 56]],
  [0.05, 0.35, [0.1, 0.2, 0.3]],
])('ticks of %d to %d stand at round numbers', (lo, hi, ticks) => {
  expect(niceTicks(lo, hi)).toEqual(ticks);
});

test('an empty or unbounded range has no ticks', () => {
  expect(niceTicks(1, 1)).toEqual([]);
  expect(niceTicks(0, Number.POSITIVE_INFINITY)).toEqual([]);
  expect(niceTicks(Number.NaN, 3)).toEqual([]);
});

test('ticks lie inside the range, are no more than asked for, and there are always some', () => {
  const range = fc.tuple(
    fc.double({ min: -1e5, max: 1e5, noNaN: true }),
    fc.double({ min: 0.01, max: 1e5, noNaN: true }),
  );
  fc.assert(
    fc.property(range, ([lo, length]) => {
      const ticks = niceTicks(lo, lo + length);
      expect(ticks.length).toBeGreaterThanOrEqual(1);
      expect(ticks.length).toBeLessThanOrEqual(5);
      for (const tick of ticks) {
        expect(tick).toBeGreaterThanOrEqual(lo - length * 1e-6);
        expect(tick).toBeLessThanOrEqual(lo + length * (1 + 1e-6));
      }
    }),
  );
});

test('labels too near are moved apart in their own order', () => {
  const placed = nudgeApart([100, 102, 40], 15);
  expect(placed[2]).toBe(40);
  expect((placed[1] ?? 0) - (placed[0] ?? 0)).toBeCloseTo(15, 6);
});

test('a round number on the axis carries no needless decimals', () => {
  expect(tickLabel(400, 'ip')).toBe('+400');
  expect(tickLabel(40 / 0.0630901964, 'si')).toBe('+40');
});
