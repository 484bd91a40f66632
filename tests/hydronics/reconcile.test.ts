import { describe, expect, test } from 'vitest';
import { normal } from '@/fixtures/demo/noise';
import { diagonalCovariance, linearConstraints, reconcile } from '@/lib/hydronics/reconcile';
import type { Constraints } from '@/lib/hydronics/reconcile';

const NaNs = (...values: (number | null)[]) => Float64Array.from(values, (value) => value ?? Number.NaN);
/** a = b + c. */
const SUM = linearConstraints(Float64Array.of(1, -1, -1), 3);
/** a = b + c and c = d: d repeats c. */
const CHAIN = linearConstraints(Float64Array.of(1, -1, -1, 0, 0, 0, 1, -1), 4);

describe('linear reconciliation', () => {
  test('shares a closure error by variance: the loosest instrument moves most', () => {
    const { x, adjustments, chiSquare, degreesOfFreedom } = reconcile({
      measured: Float64Array.of(106, 60, 40),
      covariance: diagonalCovariance([2, 1, 1]),
      constraintCount: 1,
      constraints: SUM,
    });
    // By hand: residual 6, H = 4 + 1 + 1, so adjustments 6 * 4/6, -6 * 1/6, -6 * 1/6.
    expect(Array.from(x)).toEqual([102, 61, 41]);
    expect(Array.from(adjustments)).toEqual([4, -1, -1]);
    expect(chiSquare).toBeCloseTo(6, 12);
    expect(degreesOfFreedom).toBe(1);
  });

  test('takes correlation into account: two errors that move together leave their sum uncertain', () => {
    const rho = 0.8;
    const { x, covariance } = reconcile({
      measured: Float64Array.of(106, 60, 40),
      covariance: Float64Array.of(4, 0, 0, 0, 1, rho, 0, rho, 1),
      constraintCount: 1,
      constraints: SUM,
    });
    // H = 4 + (1 + 1 + 2 rho); cov(r, y2) = -(1 + rho).
    const h = 4 + 2 + 2 * rho;
    expect(x[0]).toBeCloseTo(106 - (6 * 4) / h, 12);
    expect(x[1]).toBeCloseTo(60 + (6 * (1 + rho)) / h, 12);
    expect(covariance[4]).toBeCloseTo(1 - (1 + rho) ** 2 / h, 12);
  });

  test('gives covariances that repeated noisy measurements of a known truth confirm', () => {
    const truth = [100, 60, 40, 40];
    const sigmas = [2, 1, 1.5, 0.5];
    const runs = 4000;
    let [outside, square, chiSquares] = [0, 0, 0];
    for (let run = 0; run < runs; run += 1) {
      const measured = Float64Array.from(truth, (value, i) => value + (sigmas[i] ?? 0) * normal(100 + i, run));
      const covariance = diagonalCovariance(sigmas);
      const found = reconcile({ measured, covariance, constraintCount: 2, constraints: CHAIN });
      const error = (found.x[0] ?? 0) - 100;
      const sigma = Math.sqrt(found.covariance[0] ?? 0);
      if (Math.abs(error) > 1.645 * sigma) outside += 1;
      square += (error / sigma) ** 2;
      chiSquares += found.chiSquare;
    }
    // Standard errors of the three: 0.005, 0.022 and 0.032.
    expect(Math.abs(outside / runs - 0.1)).toBeLessThan(0.02);
    expect(Math.abs(square / runs - 1)).toBeLessThan(0.08);
    expect(Math.abs(chiSquares / runs - 2)).toBeLessThan(0.12);
  });

  test('is done in one step, whatever it starts from', () => {
    const problem = {
      measured: Float64Array.of(106, 60, 40),
      covariance: diagonalCovariance([2, 1, 1]),
      constraintCount: 1,
      constraints: SUM,
    };
    const { x, iterations, converged } = reconcile({ ...problem, start: Float64Array.of(0, 1e3, -50) });
    expect(converged).toBe(true);
    expect(iterations).toBe(2); // The second finds nothing left to do.
    expect(x[0]).toBeCloseTo(102, 9);
  });
});

describe('what is not measured', () => {
  test('is solved for, and takes the redundancy away from what stands alone with it', () => {
    const { x, z, chiSquare, degreesOfFreedom, covariance, mostAtOdds } = reconcile({
      measured: NaNs(null, 60, 41, 40),
      covariance: diagonalCovariance([1, 2, 1, 1]),
      constraintCount: 2,
      constraints: CHAIN,
    });
    expect(degreesOfFreedom).toBe(1);
    expect(chiSquare).toBeCloseTo(0.5, 12);
    expect(Array.from(x)).toEqual([100.5, 60, 40.5, 40.5]);
    expect(z[1]).toBeNaN();
    expect(z[2]).toBeCloseTo(Math.SQRT1_2, 12);
    expect(mostAtOdds).toEqual([2, 3]);
    // var = 4 + 1/2, and it shares the errors of both.
    expect(covariance[0]).toBeCloseTo(4.5, 12);
    expect(covariance[1]).toBeCloseTo(4, 12);
    expect(covariance[2]).toBeCloseTo(0.5, 12);
  });

  test('is NaN where the constraints do not tell it, without a word about the rest', () => {
    const { x, covariance, chiSquare, degreesOfFreedom, nodal } = reconcile({
      measured: NaNs(null, null, 41, 40),
      covariance: diagonalCovariance([1, 1, 1, 1]),
      constraintCount: 2,
      constraints: CHAIN,
    });
    expect(Array.from(x)).toEqual([Number.NaN, Number.NaN, 40.5, 40.5]);
    expect(covariance[0]).toBeNaN();
    expect(covariance[10]).toBeCloseTo(0.5, 12);
    expect(chiSquare).toBeCloseTo(0.5, 12);
    expect(degreesOfFreedom).toBe(1);
    expect(nodal[0]).toBeNaN();
    expect(nodal[1]).toBeCloseTo(Math.SQRT1_2, 12);
  });

  test('may be everything', () => {
    const { x, chiSquare, degreesOfFreedom, mostAtOdds } = reconcile({
      measured: NaNs(null, null, null),
      covariance: diagonalCovariance([1, 1, 1]),
      constraintCount: 1,
      constraints: SUM,
    });
    expect(x.every(Number.isNaN)).toBe(true);
    expect([chiSquare, degreesOfFreedom]).toEqual([0, 0]);
    expect(mostAtOdds).toEqual([]);
  });
});

test('a constraint that repeats others counts once', () => {
  const twice = linearConstraints(Float64Array.of(1, -1, -1, -2, 2, 2), 3);
  const { x, degreesOfFreedom, chiSquare } = reconcile({
    measured: Float64Array.of(106, 60, 40),
    covariance: diagonalCovariance([2, 1, 1]),
    constraintCount: 2,
    constraints: twice,
  });
  expect(degreesOfFreedom).toBe(1);
  expect(chiSquare).toBeCloseTo(6, 9);
  expect(x[0]).toBeCloseTo(102, 9);
});

test('the floor of the local test holds down a measurement that is hardly adjusted at all', () => {
  const problem = {
    measured: Float64Array.of(106, 60, 40),
    covariance: diagonalCovariance([2, 2, 0.1]),
    constraintCount: 1,
    constraints: SUM,
  };
  const plain = reconcile(problem);
  const floored = reconcile(problem, { floorShare: 0.1 });
  expect(plain.z[2]).toBeCloseTo(plain.z[0] ?? 0, 9);
  expect(floored.z[0]).toBe(plain.z[0]);
  // Variance of its adjustment is 0.00125 of its own; a tenth stands in.
  expect(floored.z[2]).toBeCloseTo(Math.abs(floored.adjustments[2] ?? 0) / (0.1 * Math.sqrt(0.1)), 9);
});

describe('constraints that are not linear', () => {
  /** x y = z. */
  const product: Constraints = ([a = 0, b = 0, c = 0], residual, jacobian) => {
    residual[0] = a * b - c;
    jacobian.set([b, a, -1]);
  };

  test('hold exactly at the end, and the result is the nearest point: the adjustments lie along the slopes', () => {
    const sigmas = [0.1, 0.2, 0.5];
    const { x, adjustments, chiSquare, converged } = reconcile({
      measured: Float64Array.of(2, 3, 7.5),
      covariance: diagonalCovariance(sigmas),
      constraintCount: 1,
      constraints: product,
    });
    const [a = 0, b = 0, c = 0] = x;
    expect(converged).toBe(true);
    expect(a * b - c).toBeCloseTo(0, 10);
    const multipliers = [b, a, -1].map((slope, i) => (adjustments[i] ?? 0) / ((sigmas[i] ?? 0) ** 2 * slope));
    expect(multipliers[1]).toBeCloseTo(multipliers[0] ?? 0, 8);
    expect(multipliers[2]).toBeCloseTo(multipliers[0] ?? 0, 8);
    const sum = Array.from(adjustments).reduce((total, move, i) => total + (move / (sigmas[i] ?? 1)) ** 2, 0);
    expect(chiSquare).toBeCloseTo(sum, 8);
  });

  test('that have no solution end without convergence, not with an exception', () => {
    const impossible: Constraints = ([a = 0], residual, jacobian) => {
      residual[0] = a * a + 1;
      jacobian[0] = 2 * a;
    };
    const measured = Float64Array.of(0.7);
    const { converged, iterations } = reconcile(
      { measured, covariance: Float64Array.of(1), constraintCount: 1, constraints: impossible },
      { maxIterations: 30 },
    );
    expect(converged).toBe(false);
    expect(iterations).toBe(30);
  });
});

test('bad calls are refused by name', () => {
  const measured = Float64Array.of(1, 2, 3);
  const problem = { measured, constraintCount: 1, constraints: SUM };
  expect(() => reconcile({ ...problem, covariance: new Float64Array(4) })).toThrow('needs 9');
  expect(() => reconcile({ ...problem, covariance: diagonalCovariance([1, 0, 1]) })).toThrow('measurement 1');
  expect(() => linearConstraints(new Float64Array(4), 3)).toThrow(RangeError);
});
