import { describe, expect, test } from 'vitest';
import { minimise } from '@/lib/hydronics/least-squares';
import type { AccumulateNormalEquations } from '@/lib/hydronics/least-squares';

/** Normal equations of residuals and their derivatives given row by row. */
function accumulator(
  rows: number,
  at: (row: number, parameters: Float64Array) => { residual: number; slopes: readonly number[] },
): AccumulateNormalEquations {
  return (parameters, normal, gradient) => {
    const p = parameters.length;
    let cost = 0;
    for (let row = 0; row < rows; row += 1) {
      const { residual, slopes } = at(row, parameters);
      cost += 0.5 * residual * residual;
      for (let i = 0; i < p; i += 1) {
        gradient[i] = (gradient[i] ?? 0) + (slopes[i] ?? 0) * residual;
        for (let j = 0; j < p; j += 1)
          normal[i * p + j] = (normal[i * p + j] ?? 0) + (slopes[i] ?? 0) * (slopes[j] ?? 0);
      }
    }
    return cost;
  };
}

const X = [0, 1, 2, 3, 4];
/** A straight line through points that scatter; `unit` counts the slope in other units. */
const line = (unit = 1) =>
  accumulator(X.length, (row, [intercept = 0, slope = 0]) => {
    const x = X[row] ?? 0;
    const observed = [1.1, 2.9, 5.2, 6.8, 9.1][row] ?? 0;
    return { residual: intercept + slope * unit * x - observed, slopes: [1, unit * x] };
  });

/** The valley of Rosenbrock: residuals 10 (b - a^2) and 1 - a, lowest at (1, 1). */
const valley = accumulator(2, (row, [a = 0, b = 0]) =>
  row === 0 ? { residual: 10 * (b - a * a), slopes: [-20 * a, 10] } : { residual: 1 - a, slopes: [-1, 0] },
);

describe('minimise', () => {
  test('finds the line of linear regression with its covariance, and half its sum of squares', () => {
    const { parameters, covariance, cost, converged } = minimise(Float64Array.of(0, 0), line());
    // By hand: mean x 2, mean y 5.02, Sxx 10, Sxy 19.9.
    expect(converged).toBe(true);
    expect(parameters[1]).toBeCloseTo(1.99, 10);
    expect(parameters[0]).toBeCloseTo(5.02 - 2 * 1.99, 10);
    expect(covariance[3]).toBeCloseTo(1 / 10, 10);
    expect(covariance[0]).toBeCloseTo(1 / 5 + 4 / 10, 10);
    expect(covariance[1]).toBeCloseTo(-2 / 10, 10);
    expect(covariance[1]).toBe(covariance[2]);
    const residuals = [1.1, 2.9, 5.2, 6.8, 9.1].map((y, x) => 1.04 + 1.99 * x - y);
    expect(cost).toBeCloseTo(0.5 * residuals.reduce((sum, r) => sum + r * r, 0), 10);
  });

  test('takes the same way whatever units the parameters are counted in', () => {
    const usual = minimise(Float64Array.of(0, 0), line());
    const other = minimise(Float64Array.of(0, 0), line(1e6));
    expect((other.parameters[1] ?? 0) * 1e6).toBeCloseTo(usual.parameters[1] ?? 0, 9);
    expect(other.iterations).toBe(usual.iterations);
  });

  test('follows the curved valley of Rosenbrock from the usual start to its end', () => {
    const { parameters, cost, converged, iterations } = minimise(Float64Array.of(-1.2, 1), valley);
    expect(converged).toBe(true);
    expect(parameters[0]).toBeCloseTo(1, 9);
    expect(parameters[1]).toBeCloseTo(1, 9);
    expect(cost).toBeLessThan(1e-20);
    expect(iterations).toBeLessThan(60);
  });

  test('takes a step back that leaves the region where the model exists', () => {
    // ln p = -3 from p = 20: the undamped step is to a negative p.
    const { parameters, converged } = minimise(
      Float64Array.of(20),
      accumulator(1, (_, [p = 0]) => ({ residual: Math.log(p) + 3, slopes: [1 / p] })),
    );
    expect(converged).toBe(true);
    expect(parameters[0]).toBeCloseTo(Math.exp(-3), 9);
  });

  test('also moves from a start without any damping', () => {
    const { parameters, converged } = minimise(Float64Array.of(-1.2, 1), valley, { damping: 0 });
    expect(converged).toBe(true);
    expect(parameters[0]).toBeCloseTo(1, 9);
  });

  test('leaves a parameter that nothing bears on where it was, and says that its covariance is unknown', () => {
    const { parameters, covariance, converged } = minimise(
      Float64Array.of(0, 0, 7),
      accumulator(X.length, (row, [a = 0, b = 0]) => ({ residual: a + b * row - 2 * row, slopes: [1, row, 0] })),
    );
    expect(converged).toBe(true);
    expect(parameters[2]).toBe(7);
    expect(parameters[1]).toBeCloseTo(2, 9);
    expect(covariance.every(Number.isNaN)).toBe(true);
  });

  test('minimises a robust loss when the caller adds one up: one wild value hardly moves the mean', () => {
    const values = [9.8, 10.1, 10, 9.9, 10.2, 90];
    // Loss ln(1 + r^2 / 2) * 2 / 2, its slope r / (1 + r^2 / 2).
    const cauchy: AccumulateNormalEquations = ([mean = 0], normal, gradient) => {
      let cost = 0;
      for (const value of values) {
        const residual = mean - value;
        const weight = 1 / (1 + (residual * residual) / 2);
        cost += Math.log1p((residual * residual) / 2);
        gradient[0] = (gradient[0] ?? 0) + weight * residual;
        normal[0] = (normal[0] ?? 0) + weight;
      }
      return cost;
    };
    const { parameters, converged } = minimise(Float64Array.of(12), cauchy, { gradientTolerance: 1e-9 });
    expect(converged).toBe(true);
    expect(Math.abs((parameters[0] ?? 0) - 10)).toBeLessThan(0.05);
  });

  test('says when it did not arrive', () => {
    const { converged, iterations } = minimise(Float64Array.of(-1.2, 1), valley, { maxIterations: 5 });
    expect(converged).toBe(false);
    expect(iterations).toBe(5);
  });

  test('hands back a start where the model does not exist, not converged', () => {
    const { parameters, converged, iterations } = minimise(Float64Array.of(1), () => Number.NaN);
    expect([parameters[0], converged, iterations]).toEqual([1, false, 1]);
  });

  test('keeps nothing: the start is left as it is and a second call gives the same bits', () => {
    const start = Float64Array.of(-1.2, 1);
    const first = minimise(start, valley);
    const second = minimise(start, valley);
    expect(Array.from(start)).toEqual([-1.2, 1]);
    expect(second).toEqual(first);
    expect(second.parameters).not.toBe(first.parameters);
  });

  test.each([[[]], [[1, Number.NaN]], [[Infinity]]])('refuses the start %j', (start) => {
    expect(() => minimise(Float64Array.from(start), valley)).toThrow(RangeError);
  });
});
