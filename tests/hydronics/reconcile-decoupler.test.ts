import { describe, expect, test } from 'vitest';
import {
  DECOUPLER_CONSTRAINT_COUNT,
  DECOUPLER_VARIABLES,
  decouplerConstraints,
  reconcileDecoupler,
} from '@/lib/hydronics/reconcile-decoupler';
import type { DecouplerVariable, DecouplerWay } from '@/lib/hydronics/reconcile-decoupler';
import { decouplerBalance } from '@/lib/hydronics/tees';
import { WATER } from './support/plants';

type Values = Partial<Record<DecouplerVariable, number>>;
const SIGMAS: Required<Values> = {
  primaryFlow: 20,
  secondaryFlow: 25,
  bypassFlow: 10,
  primarySupply: 0.25,
  secondarySupply: 0.25,
  primaryReturn: 0.25,
  secondaryReturn: 0.25,
  bypassTemp: 0.5,
};
const row = (values: Values) => Float64Array.from(DECOUPLER_VARIABLES, (name) => values[name] ?? Number.NaN);
const solve = (values: Values, sigmas: Values = {}) => reconcileDecoupler(row(values), row({ ...SIGMAS, ...sigmas }));
const at = (x: Float64Array, name: DecouplerVariable) => x[DECOUPLER_VARIABLES.indexOf(name)] ?? Number.NaN;

/** A loop that balances in both tees, to a hundredth of a degree of what real water does. */
function balanced(primaryFlow: number, secondaryFlow: number): Required<Values> {
  const tees = decouplerBalance(primaryFlow, secondaryFlow, 44, 56, WATER);
  return {
    primaryFlow,
    secondaryFlow,
    bypassFlow: primaryFlow - secondaryFlow,
    primarySupply: 44,
    secondarySupply: tees.secondarySupplyF,
    primaryReturn: tees.primaryReturnF,
    secondaryReturn: 56,
    bypassTemp: primaryFlow >= secondaryFlow ? 44 : 56,
  };
}

describe.each(['forward', 'reverse'] as const)('the constraints of the tees, %s', (way: DecouplerWay) => {
  const evaluate = (x: Float64Array) => {
    const residual = new Float64Array(DECOUPLER_CONSTRAINT_COUNT);
    const jacobian = new Float64Array(DECOUPLER_CONSTRAINT_COUNT * 8);
    decouplerConstraints(way)(x, residual, jacobian);
    return { residual, jacobian };
  };

  test.each([
    ['in surplus', [2010, 1480, 545, 44.2, 44.6, 52.6, 55.8, 44.9]],
    ['in deficit', [1000, 1230, -180, 44.1, 46.3, 56.1, 56.2, 55]],
    ['without flow', [0, 0, 0, 44, 45, 56, 57, 50]],
    ['at one temperature', [900, 700, 150, 50, 50, 50, 50, 50]],
  ])('have the slopes that central differences give %s', (_, values) => {
    const x = Float64Array.from(values);
    const { jacobian } = evaluate(x);
    x.forEach((value, i) => {
      // Bilinear: a central difference is exact but for rounding.
      const step = 1e-3 * Math.max(1, Math.abs(value));
      const up = evaluate(x.map((each, j) => (j === i ? each + step : each))).residual;
      const down = evaluate(x.map((each, j) => (j === i ? each - step : each))).residual;
      for (let constraint = 0; constraint < DECOUPLER_CONSTRAINT_COUNT; constraint += 1) {
        const slope = ((up[constraint] ?? 0) - (down[constraint] ?? 0)) / (2 * step);
        expect(slope).toBeCloseTo(jacobian[constraint * 8 + i] ?? 0, 6);
      }
    });
  });

  test('hold where the tees balance', () => {
    const loop = way === 'forward' ? balanced(2000, 1500) : balanced(1000, 1200);
    const { residual } = evaluate(row(loop));
    // Heat in gpm F: constant specific heat is worth 0.01 F of some thousand gpm.
    expect(Math.max(...residual.map(Math.abs))).toBeLessThan(20);
    expect(Math.abs(residual[0] ?? 1)).toBe(0);
  });
});

describe('a decoupler reconciled both ways', () => {
  test.each([
    ['forward', 2000, 1500],
    ['reverse', 1000, 1200],
  ] as const)('runs %s where everything measured says so', (way, primary, secondary) => {
    const found = solve(balanced(primary, secondary));
    expect(found.way).toBe(way);
    expect(found.best.chiSquare).toBeLessThan(0.01);
    expect(found.best.degreesOfFreedom).toBe(4);
    expect(at(found.best.x, 'bypassFlow')).toBeCloseTo(primary - secondary, -1);
    const other = way === 'forward' ? found.reverse : found.forward;
    expect(other.atZeroFlow).toBe(true);
    expect(at(other.x, 'bypassFlow')).toBeCloseTo(0, 9);
    expect(other.chiSquare).toBeGreaterThan(100);
  });

  test('meets at no flow: at balance both ways fit alike', () => {
    const { forward, reverse } = solve({ ...balanced(1000, 1000), bypassTemp: Number.NaN });
    expect(Math.abs(forward.chiSquare - reverse.chiSquare)).toBeLessThan(1e-6);
    expect(at(forward.x, 'bypassFlow')).toBeGreaterThanOrEqual(-1e-9);
    expect(at(reverse.x, 'bypassFlow')).toBeLessThanOrEqual(1e-9);
  });

  test('finds flows that nobody measures from one meter and the temperatures', () => {
    const { primaryFlow, primarySupply, secondarySupply, secondaryReturn } = balanced(1000, 1200);
    const found = solve({ primaryFlow, primarySupply, secondarySupply, secondaryReturn });
    expect(found.way).toBe('reverse');
    expect(at(found.best.x, 'secondaryFlow')).toBeCloseTo(1200, -1);
    expect(at(found.best.x, 'primaryReturn')).toBe(56);
    // u(Qs) from Qp 1000 +/- 20 and three temperatures of 0.25 F: 46.11 gpm (part of the published check values of the tees).
    expect(Math.sqrt(found.best.covariance[9] ?? 0)).toBeCloseTo(46.1, 0);
  });

  test('counts in shares of the primary flow without any meter', () => {
    const { primarySupply, secondarySupply, primaryReturn, secondaryReturn } = balanced(1000, 1200);
    const found = solve({ primarySupply, secondarySupply, primaryReturn, secondaryReturn });
    expect(found.relativeFlows).toBe(true);
    expect(found.way).toBe('reverse');
    expect(at(found.best.x, 'bypassFlow')).toBeCloseTo(-0.2, 2);
  });

  test('names the measurements at odds as a group where nothing tells them apart', () => {
    const { best } = solve({
      primaryFlow: 1000,
      secondaryFlow: 1000,
      primarySupply: 44,
      secondarySupply: 46,
      primaryReturn: 53,
      secondaryReturn: 56,
    });
    const names = best.mostAtOdds.map((index) => DECOUPLER_VARIABLES[index]);
    expect(best.chiSquare).toBeGreaterThan(50);
    expect(names).toEqual(['primaryFlow', 'secondaryFlow', 'primaryReturn', 'secondaryReturn']);
  });

  test('carries an error that two sensors share: a common offset of both supplies moves nothing between them', () => {
    const loop = balanced(1000, 1200);
    const covariance = new Float64Array(64);
    DECOUPLER_VARIABLES.forEach((name, i) => (covariance[i * 9] = SIGMAS[name] ** 2));
    // All four temperatures share an error of 1 F beside their own.
    for (const i of [3, 4, 5, 6])
      for (const j of [3, 4, 5, 6]) covariance[i * 8 + j] = (covariance[i * 8 + j] ?? 0) + 1;
    const own = reconcileDecoupler(row({ ...loop, bypassTemp: Number.NaN }), row(SIGMAS));
    const shared = reconcileDecoupler(row({ ...loop, bypassTemp: Number.NaN }), row(SIGMAS), { covariance });
    const sigmaB = (found: typeof own) => Math.sqrt(found.best.covariance[2 * 9] ?? 0);
    expect(sigmaB(shared)).toBeCloseTo(sigmaB(own), 6);
    expect(Math.sqrt(shared.best.covariance[3 * 9] ?? 0)).toBeGreaterThan(1);
  });

  test.each<[string, Values, Values]>([
    ['nothing at all', {}, {}],
    ['one temperature', { primarySupply: 44 }, {}],
    ['flows of zero', { ...balanced(1000, 1200), primaryFlow: 0, secondaryFlow: 0, bypassFlow: 0 }, {}],
    [
      'sigmas of zero with flows of zero',
      { primaryFlow: 0, secondaryFlow: 0, primarySupply: 44, secondaryReturn: 56 },
      { primaryFlow: 0, secondaryFlow: 0 },
    ],
    [
      'one temperature everywhere',
      { primaryFlow: 1000, primarySupply: 50, secondarySupply: 50, primaryReturn: 50, secondaryReturn: 50 },
      {},
    ],
    [
      'supply warmer than return',
      {
        primaryFlow: 1000,
        secondaryFlow: 1200,
        primarySupply: 56,
        secondarySupply: 50,
        primaryReturn: 44,
        secondaryReturn: 44,
      },
      {},
    ],
    [
      'a negative main',
      { primaryFlow: -50, secondaryFlow: 1200, primarySupply: 44, secondarySupply: 46, secondaryReturn: 56 },
      {},
    ],
    ['an infinite reading', { ...balanced(1000, 1200), primaryFlow: Infinity }, {}],
    ['flows only', { primaryFlow: 1000, secondaryFlow: 1200, bypassFlow: -150 }, {}],
    ['the common pipe only', { bypassFlow: -150, bypassTemp: 56 }, {}],
  ])('has a defined answer for %s', (_, values, sigmas) => {
    const found = solve(values, sigmas);
    for (const each of [found.forward, found.reverse]) {
      for (const array of [each.x, each.covariance, each.z, each.adjustments, each.nodal]) {
        expect(Array.from(array).some((value) => Math.abs(value) === Infinity)).toBe(false);
      }
      expect(each.chiSquare).toBeGreaterThanOrEqual(0);
      expect(each.converged).toBe(true);
    }
  });

  test('refuses another number of values', () => {
    expect(() => reconcileDecoupler(new Float64Array(7), new Float64Array(8))).toThrow(RangeError);
  });
});
