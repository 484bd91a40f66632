import { describe, expect, test } from 'vitest';
import { correlationOf, expandedUncertainty, meansOf, propagate } from '@/lib/hydronics/propagate';
import type { Measurand } from '@/lib/hydronics/propagate';

/** Sum and difference of two inputs. */
const sumAndDifference: Measurand = ([a = 0, b = 0], values, slopes) => {
  values.set([a + b, a - b]);
  slopes.set([1, 1, 1, -1]);
};

describe('propagation of uncertainty', () => {
  test('adds independent errors in quadrature and finds what outputs have in common', () => {
    const found = propagate(
      { values: Float64Array.of(10, 4), covariance: Float64Array.of(9, 0, 0, 16) },
      2,
      sumAndDifference,
    );
    expect(Array.from(found.values)).toEqual([14, 6]);
    expect(Array.from(found.sigmas)).toEqual([5, 5]);
    expect(correlationOf(found.covariance, 2, 0, 1)).toBeCloseTo((9 - 16) / 25, 12);
    expect(Array.from(found.terms)).toEqual([3, 4, 3, -4]);
    expect(Array.from(found.freedom)).toEqual([Infinity, Infinity]);
  });

  test('lets an error that both inputs share cancel in the difference and double in the sum', () => {
    const found = propagate(
      { values: Float64Array.of(10, 4), covariance: Float64Array.of(4, 4, 4, 4) },
      2,
      sumAndDifference,
    );
    expect(Array.from(found.sigmas)).toEqual([4, 0]);
    expect(correlationOf(found.covariance, 2, 0, 1)).toBeNaN();
  });

  test('has the degrees of freedom of Welch and Satterthwaite', () => {
    const inputs = { values: Float64Array.of(10, 4), covariance: Float64Array.of(9, 0, 0, 16) };
    const both = propagate({ ...inputs, freedom: Float64Array.of(5, 10) }, 2, sumAndDifference);
    expect(both.freedom[0]).toBeCloseTo(625 / (81 / 5 + 256 / 10), 12);
    const one = propagate({ ...inputs, freedom: Float64Array.of(5, Infinity) }, 2, sumAndDifference);
    expect(one.freedom[0]).toBeCloseTo((625 / 81) * 5, 12);
  });

  test('claims no degrees of freedom where inputs are correlated: the formula does not hold', () => {
    const inputs = { values: Float64Array.of(10, 4), covariance: Float64Array.of(9, 2, 2, 16) };
    const found = propagate({ ...inputs, freedom: Float64Array.of(5, 10) }, 2, sumAndDifference);
    expect(found.freedom[0]).toBeNaN();
    expect(expandedUncertainty(found.sigmas[0] ?? 0, found.freedom[0] ?? 0, 0.95)).toBeNaN();
  });

  test('passes a missing input on as missing', () => {
    const found = propagate(
      { values: Float64Array.of(Number.NaN, 4), covariance: Float64Array.of(9, 0, 0, 16) },
      2,
      sumAndDifference,
    );
    expect(found.values[0]).toBeNaN();
  });

  test('refuses lengths that do not fit', () => {
    const values = Float64Array.of(1, 2);
    expect(() => propagate({ values, covariance: new Float64Array(3) }, 1, sumAndDifference)).toThrow(RangeError);
    expect(() =>
      propagate({ values, covariance: new Float64Array(4), freedom: new Float64Array(1) }, 1, sumAndDifference),
    ).toThrow(RangeError);
  });
});

test('an expanded uncertainty widens when little stands behind the standard uncertainty', () => {
  expect(expandedUncertainty(2, Infinity, 0.95)).toBeCloseTo(2 * 1.96, 3);
  expect(expandedUncertainty(2, 4, 0.95)).toBeCloseTo(2 * 2.776, 2);
});

describe('means of readings taken together', () => {
  test('have the scatter of a mean, not of a reading', () => {
    const { values, covariance, freedom } = meansOf([
      [1, 2, 3],
      [2, 4, 6],
    ]);
    expect(Array.from(values)).toEqual([2, 4]);
    expect(covariance[0]).toBeCloseTo(1 / 3, 12);
    expect(correlationOf(covariance, 2, 0, 1)).toBeCloseTo(1, 12);
    expect(Array.from(freedom)).toEqual([2, 2]);
  });

  test.each([
    [[[1]]],
    [
      [
        [1, 2],
        [1, 2, 3],
      ],
    ],
    [[]],
  ])('are refused for %j', (series) => {
    expect(() => meansOf(series)).toThrow(RangeError);
  });
});
