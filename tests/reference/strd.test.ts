// NIST Statistical Reference Datasets (StRD), linear and non-linear regression, from both published starts;
// fixtures/reference/strd.json says where certified values, data and starts were read.
import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/strd.json';
import { minimise } from '@/lib/hydronics/least-squares';

/** Value of each model at x and its slopes by the parameters. */
const MODELS: Record<string, (x: number, parameters: Float64Array) => { value: number; slopes: number[] }> = {
  line: (x, [b0 = 0, b1 = 0]) => ({ value: b0 + b1 * x, slopes: [1, x] }),
  saturation(x, [b1 = 0, b2 = 0]) {
    const gone = Math.exp(-b2 * x);
    return { value: -b1 * Math.expm1(-b2 * x), slopes: [-Math.expm1(-b2 * x), b1 * x * gone] };
  },
  power(x, [b1 = 0, b2 = 0]) {
    const power = x ** b2;
    return { value: b1 * power, slopes: [power, b1 * power * Math.log(x)] };
  },
  logistic(x, [b1 = 0, b2 = 0, b3 = 0]) {
    const growth = Math.exp(b2 - b3 * x);
    const slope = (b1 * growth) / (1 + growth) ** 2;
    return { value: b1 / (1 + growth), slopes: [1 / (1 + growth), -slope, x * slope] };
  },
};

function fit(problem: (typeof table.problems)[number], start: readonly number[]) {
  const model = MODELS[problem.model];
  if (!model) throw new Error(`no model ${problem.model}`);
  return minimise(Float64Array.from(start), (parameters, normal, gradient) => {
    const p = parameters.length;
    let cost = 0;
    problem.x.forEach((x, row) => {
      const { value, slopes } = model(x, parameters);
      const residual = value - (problem.y[row] ?? Number.NaN);
      cost += 0.5 * residual * residual;
      slopes.forEach((slope, i) => {
        gradient[i] = (gradient[i] ?? 0) + slope * residual;
        slopes.forEach((other, j) => (normal[i * p + j] = (normal[i * p + j] ?? 0) + slope * other));
      });
    });
    return cost;
  });
}

/** Agreeing significant digits, as StRD counts them. */
const digits = (found: number, certified: number) => -Math.log10(Math.abs(found / certified - 1) || 1e-16);

describe.each(table.problems)('$name ($difficulty difficulty)', (problem) => {
  test.each(problem.starts.map((start) => [start]))('from %j reaches the certified values', (start) => {
    const { parameters, covariance, cost, converged } = fit(problem, start);
    const p = parameters.length;
    const variance = (2 * cost) / (problem.x.length - p);
    expect(converged).toBe(true);
    // Eleven digits are certified; normal equations in double precision keep nine of them in these problems.
    problem.parameters.forEach((value, i) => expect(digits(parameters[i] ?? 0, value)).toBeGreaterThan(9));
    problem.sigmas.forEach((sigma, i) => {
      expect(digits(Math.sqrt(variance * (covariance[i * p + i] ?? 0)), sigma)).toBeGreaterThan(8);
    });
    expect(digits(2 * cost, problem.sumOfSquares)).toBeGreaterThan(9);
  });
});

test('Norris has the certified residual standard deviation and R squared', () => {
  const norris = table.problems[0];
  if (!norris) throw new Error('the table is empty');
  const { cost } = fit(norris, [0, 0]);
  const mean = norris.y.reduce((sum, y) => sum + y, 0) / norris.y.length;
  const total = norris.y.reduce((sum, y) => sum + (y - mean) ** 2, 0);
  expect(digits(Math.sqrt((2 * cost) / 34), 0.884796396144373)).toBeGreaterThan(9);
  expect(digits(1 - (2 * cost) / total, 0.999993745883712)).toBeGreaterThan(12);
});
