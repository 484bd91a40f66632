import { describe, expect, test } from 'vitest';
import type { UnitModel } from '@/lib/hydronics/types';
import { productionFlowGpm, smallestSet, unitSets } from '@/lib/hydronics/unit-sets';

const unit = (tons: number): UnitModel => ({
  tons,
  flowGpm: 2 * tons,
  minFlowGpm: tons,
  maxFlowGpm: 2.4 * tons,
  kwPerTon: 0.6,
  auxiliaryKw: tons / 10,
});
const sets = unitSets([unit(300), unit(500), unit(500)]);

describe('smallestSet', () => {
  test('takes the fewest rated tons that carry the load', () => {
    expect(smallestSet(sets, 250, Number.NaN, 'constant')).toMatchObject({ tons: 300, units: 1 });
    expect(smallestSet(sets, 450, Number.NaN, 'constant')).toMatchObject({ tons: 500, units: 1 });
    expect(smallestSet(sets, 700, Number.NaN, 'constant')).toMatchObject({ tons: 800, units: 2 });
  });

  test('grows when the flow asks for more: by the units’ limit when pumps follow, by their own flow when not', () => {
    expect(smallestSet(sets, 250, 700, 'constant')).toMatchObject({ tons: 500 });
    expect(smallestSet(sets, 250, 700, 'variable')).toMatchObject({ tons: 300 });
    expect(smallestSet(sets, 250, 730, 'variable')).toMatchObject({ tons: 500 });
  });

  test('is all units when none is enough, and nothing when there are none', () => {
    expect(smallestSet(sets, 5000, Number.NaN, 'constant')).toMatchObject({ tons: 1300, units: 3 });
    expect(smallestSet([], 100, 100, 'constant')).toBeUndefined();
  });

  test('of many units takes the largest first instead of looking at a million subsets', () => {
    const many = unitSets(Array.from({ length: 25 }, (_, index) => unit(100 + index)));
    expect(many).toHaveLength(25);
    expect(smallestSet(many, 240, Number.NaN, 'constant')).toMatchObject({ tons: 247, units: 2 });
  });
});

describe('productionFlowGpm', () => {
  const one = smallestSet(sets, 450, Number.NaN, 'constant');
  test('is the pumps’ own at constant speed, and follows down to the units’ minimum at variable', () => {
    if (!one) throw new Error('a set of one unit exists');
    expect(productionFlowGpm(one, 300, 'constant')).toBe(1000);
    expect(productionFlowGpm(one, 300, 'variable')).toBe(500);
    expect(productionFlowGpm(one, 800, 'variable')).toBe(800);
  });
});
