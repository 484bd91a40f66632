import { describe, expect, test } from 'vitest';
import {
  choleskyInPlace,
  choleskyInverse,
  choleskyLogDeterminant,
  choleskySolveInPlace,
  forwardSubstituteInPlace,
  inverseQuadraticForm,
  quadraticForm,
} from '@/lib/hydronics/linear-algebra';

/** The classroom matrix whose factor is whole numbers: rows 2 0 0, 6 1 0, -8 5 3. */
const WHOLE = Float64Array.of(4, 12, -16, 12, 37, -43, -16, -43, 98);
/** A well-conditioned positive definite matrix of any size, the same at every run: B B' + 1 with B from sines. */
function spd(n: number): Float64Array {
  const b = Float64Array.from({ length: n * n }, (_, at) => Math.sin(1 + 7 * at));
  const a = new Float64Array(n * n);
  for (let i = 0; i < n; i += 1) {
    for (let j = 0; j < n; j += 1) {
      let sum = i === j ? 1 : 0;
      for (let k = 0; k < n; k += 1) sum += (b[i * n + k] ?? 0) * (b[j * n + k] ?? 0);
      a[i * n + j] = sum;
    }
  }
  return a;
}
const times = (a: Float64Array, n: number, x: Float64Array) =>
  Float64Array.from({ length: n }, (_, row) => {
    let sum = 0;
    for (let k = 0; k < n; k += 1) sum += (a[row * n + k] ?? 0) * (x[k] ?? 0);
    return sum;
  });

describe('the Cholesky factor', () => {
  test('of a matrix with a whole-number factor is that factor', () => {
    const factor = WHOLE.slice();
    expect(choleskyInPlace(factor, 3)).toBe(true);
    expect([factor[0], factor[3], factor[4], factor[6], factor[7], factor[8]]).toEqual([2, 6, 1, -8, 5, 3]);
    expect(choleskyLogDeterminant(factor, 3)).toBeCloseTo(Math.log(36), 12);
  });

  test('reads the lower triangle only', () => {
    const lower = Float64Array.of(4, Number.NaN, Number.NaN, 12, 37, Number.NaN, -16, -43, 98);
    expect(choleskyInPlace(lower, 3)).toBe(true);
    expect(lower[8]).toBe(3);
  });

  test.each([
    ['an indefinite matrix', [1, 2, 2, 1]],
    ['a singular matrix', [1, 2, 2, 4]],
    ['a matrix singular but for rounding', [0.1 * 0.1, 0.1 * 0.3, 0.1 * 0.3, 0.3 * 0.3]],
    ['a zero matrix', [0, 0, 0, 0]],
    ['a gap', [1, Number.NaN, Number.NaN, 1]],
    ['an infinite element', [Infinity, 0, 0, 1]],
  ])('does not exist for %s', (_, elements) => {
    expect(choleskyInPlace(Float64Array.from(elements), 2)).toBe(false);
  });

  test('exists whatever the units: one unknown counted in billionths is no singularity', () => {
    expect(choleskyInPlace(Float64Array.of(1e-18, 0.5e-9, 0.5e-9, 1), 2)).toBe(true);
  });
});

describe.each([1, 2, 5, 14])('a system of %i unknowns', (n) => {
  const a = spd(n);
  const factor = a.slice();
  const known = Float64Array.from({ length: n }, (_, at) => at - 1.5);
  test('is solved to rounding', () => {
    expect(choleskyInPlace(factor, n)).toBe(true);
    const b = times(a, n, known);
    choleskySolveInPlace(factor, n, b);
    b.forEach((value, at) => expect(value).toBeCloseTo(known[at] ?? 0, 11));
  });

  test('has an inverse whose product with the matrix is one', () => {
    const inverse = new Float64Array(n * n);
    choleskyInverse(factor, n, inverse);
    for (let column = 0; column < n; column += 1) {
      const unit = times(a, n, inverse.slice(column * n, column * n + n));
      unit.forEach((value, row) => expect(value).toBeCloseTo(row === column ? 1 : 0, 11));
    }
  });

  test('has quadratic forms that agree: x = A z gives x A^-1 x = z A z', () => {
    const x = times(a, n, known);
    const form = quadraticForm(a, n, known);
    expect(inverseQuadraticForm(factor, n, x, new Float64Array(n)) / form).toBeCloseTo(1, 12);
    const half = x.slice();
    forwardSubstituteInPlace(factor, n, half);
    expect(half.reduce((sum, value) => sum + value * value, 0) / form).toBeCloseTo(1, 12);
  });
});

test('workspaces longer than needed are welcome, the rest stays untouched', () => {
  const roomy = new Float64Array(12).fill(7);
  roomy.set(WHOLE);
  expect(choleskyInPlace(roomy, 3)).toBe(true);
  expect(Array.from(roomy.subarray(9))).toEqual([7, 7, 7]);
});

test('arrays that are too short are refused by name', () => {
  expect(() => choleskyInPlace(new Float64Array(8), 3)).toThrow('choleskyInPlace: a has 8 elements, needs 9');
  expect(() => choleskySolveInPlace(WHOLE, 3, new Float64Array(2))).toThrow(RangeError);
  expect(() => choleskyInverse(WHOLE, 3, new Float64Array(8))).toThrow(RangeError);
  expect(() => choleskyInverse(WHOLE, 3, WHOLE)).toThrow('one array');
  expect(() => quadraticForm(WHOLE, 3, new Float64Array(2))).toThrow(RangeError);
  expect(() => inverseQuadraticForm(WHOLE, 3, new Float64Array(3), new Float64Array(2))).toThrow(RangeError);
});
