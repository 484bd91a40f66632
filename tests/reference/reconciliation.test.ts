// Worked problems of data reconciliation; fixtures/reference/reconciliation.json names the source of each and how far it was
// verified (read in the source, read in a secondary source, computed).
import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/reconciliation.json';
import { chiSquareQuantile } from '@/lib/hydronics/distributions';
import { diagonalCovariance, linearConstraints, reconcile } from '@/lib/hydronics/reconcile';
import type { Constraints, Reconciliation } from '@/lib/hydronics/reconcile';
import { DECOUPLER_VARIABLES, reconcileDecoupler } from '@/lib/hydronics/reconcile-decoupler';

const rowsOf = (rows: number[][]) => linearConstraints(Float64Array.from(rows.flat()), rows[0]?.length ?? 0);
const sigmaOf = ({ covariance, x }: Reconciliation, i: number) => Math.sqrt(covariance[i * x.length + i] ?? Number.NaN);
const closeTo = (found: ArrayLike<number>, printed: readonly number[], digits: number) =>
  printed.forEach((value, i) => expect(found[i]).toBeCloseTo(value, digits));

test.each(table.chiSquareLimits.limits.map((limit, i) => ({ limit, freedom: i + 1 })))(
  'the 0.95 point of chi-square with $freedom degrees of freedom is $limit',
  ({ limit, freedom }) => {
    expect(chiSquareQuantile(0.95, freedom)).toBeCloseTo(limit, 4);
  },
);

describe.each(table.linear)('$name', (row) => {
  const variances = row.variances ?? row.measured.map((value) => (row.sigmaShare * value) ** 2);
  const found = reconcile({
    measured: Float64Array.from(row.measured),
    covariance: diagonalCovariance(variances.map(Math.sqrt)),
    constraintCount: row.constraints.length,
    constraints: rowsOf(row.constraints),
  });

  test('has the published reconciled values', () => {
    // Half the last printed digit of the finest.
    closeTo(found.x, row.reconciled, 6);
  });

  test('has the global test of the source', () => {
    expect(found.chiSquare).toBeCloseTo(row.chiSquare, 4);
    expect(found.degreesOfFreedom).toBe(row.degreesOfFreedom);
    expect(found.chiSquare < chiSquareQuantile(0.95, row.degreesOfFreedom)).toBe(row.passes);
  });

  test('has the tests of the measurements and nodes, as far as they are given', () => {
    if (row.z) closeTo(found.z, row.z, 4);
    if (row.nodal) closeTo(found.nodal, row.nodal, 4);
    if (row.sigmas) row.sigmas.forEach((sigma, i) => expect(sigmaOf(found, i)).toBeCloseTo(sigma, 5));
    if (row.largestZ) expect(Math.max(...found.z)).toBeCloseTo(row.largestZ, 4);
    if (row.mostAtOdds) expect(found.mostAtOdds).toEqual(row.mostAtOdds);
  });
});

describe('VDI 2048 Blatt 1, Annex A', () => {
  const annex = table.vdi2048;
  /** Half-widths are 95 %: sigma = half-width / 1.96. */
  function solve(halfWidths: readonly number[]) {
    const covariance = diagonalCovariance(halfWidths.map((halfWidth) => halfWidth / 1.96));
    const n = halfWidths.length;
    for (const { first, second, value } of annex.correlations) {
      const shared = (value * (halfWidths[first] ?? 0) * (halfWidths[second] ?? 0)) / 1.96 ** 2;
      covariance[first * n + second] = shared;
      covariance[second * n + first] = shared;
    }
    const measured = Float64Array.from(annex.measured);
    const constraints = rowsOf(annex.constraints);
    return reconcile({ measured, covariance, constraintCount: 3, constraints }, { floorShare: 0.1 });
  }
  const found = solve(annex.halfWidths);
  const halfWidths = Array.from(found.x, (_, i) => 1.96 * sigmaOf(found, i));

  test('gives the published reconciled flows, to the last printed digit', () => {
    annex.published.reconciled.forEach((value, i) => expect(Math.abs((found.x[i] ?? 0) - value)).toBeLessThan(6e-4));
    closeTo(found.x, annex.computed.reconciled, 4);
  });

  test('gives the published 95 % half-widths', () => {
    annex.published.halfWidths.forEach((value, i) => {
      expect(Math.abs((halfWidths[i] ?? 0) - value)).toBeLessThan(6e-4);
    });
    closeTo(halfWidths, annex.computed.halfWidths, 4);
  });

  test('gives the published local tests, with the floor of a tenth of the measurement’s variance', () => {
    annex.published.localTests.forEach((value, i) => {
      expect(Math.abs((found.z[i] ?? 0) / value - 1)).toBeLessThan(1e-5);
    });
  });

  test('passes the global test', () => {
    expect(found.chiSquare).toBeCloseTo(annex.computed.chiSquare, 5);
    expect(found.degreesOfFreedom).toBe(3);
    expect(found.chiSquare).toBeLessThan(chiSquareQuantile(0.95, 3));
  });

  test('with the first pass’s narrower half-widths fails it, and the two feed-water flows are named', () => {
    const first = solve([...annex.firstPass.halfWidths, ...annex.halfWidths.slice(2)]);
    expect(first.chiSquare).toBeCloseTo(annex.firstPass.chiSquare, 4);
    expect(first.chiSquare).toBeGreaterThan(chiSquareQuantile(0.95, 3));
    closeTo(first.z, annex.firstPass.z, 4);
    expect(first.mostAtOdds.map((index) => annex.names[index])).toEqual(['mFDKEL', 'mFDKELL']);
  });
});

describe('bilinear: a distillation column', () => {
  /** Flow and two mass fractions of feed, top and bottom: two component balances and three sums to one. */
  const balances: Constraints = (x, residual, jacobian) => {
    const at = (index: number) => x[index] as number;
    for (const component of [1, 2]) {
      const row = component - 1;
      for (const [flow, sign] of [
        [0, 1],
        [3, -1],
        [6, -1],
      ] as const) {
        residual[row] = (residual[row] as number) + sign * at(flow) * at(flow + component);
        jacobian[row * 9 + flow] = sign * at(flow + component);
        jacobian[row * 9 + flow + component] = sign * at(flow);
      }
    }
    for (const stream of [0, 1, 2]) {
      residual[2 + stream] = at(3 * stream + 1) + at(3 * stream + 2) - 1;
      jacobian.set([1, 1], (2 + stream) * 9 + 3 * stream + 1);
    }
  };

  test('has the computed reconciliation, and its gross error shows', () => {
    const { measured, sigmas, reconciled, chiSquare, degreesOfFreedom } = table.column;
    const found = reconcile({
      measured: Float64Array.from(measured),
      covariance: diagonalCovariance(sigmas),
      constraintCount: 5,
      constraints: balances,
    });
    expect(found.converged).toBe(true);
    closeTo(found.x, reconciled, 6);
    expect(found.chiSquare).toBeCloseTo(chiSquare, 4);
    expect(found.degreesOfFreedom).toBe(degreesOfFreedom);
    expect(found.chiSquare).toBeGreaterThan(chiSquareQuantile(0.95, 5));
  });
});

describe.each(table.decoupler.cases)('bilinear: a decoupler in $way flow, mixed temperature $measured.5 F', (row) => {
  const order = [
    'primaryFlow',
    'secondaryFlow',
    'bypassFlow',
    'primarySupply',
    'secondaryReturn',
    row.way === 'reverse' ? 'secondarySupply' : 'primaryReturn',
  ].map((name) => DECOUPLER_VARIABLES.findIndex((variable) => variable === name));
  const place = (values: readonly number[]) => {
    const all = new Float64Array(DECOUPLER_VARIABLES.length).fill(Number.NaN);
    order.forEach((index, i) => (all[index] = values[i] ?? Number.NaN));
    return all;
  };
  const found = reconcileDecoupler(place(row.measured), place(row.sigmas));

  test('runs that way, with the computed values', () => {
    expect(found.way).toBe(row.way);
    order.forEach((index, i) => expect(found.best.x[index]).toBeCloseTo(row.reconciled[i] ?? Number.NaN, 5));
    expect(found.best.chiSquare).toBeCloseTo(row.chiSquare, 5);
    expect(found.best.degreesOfFreedom).toBe(2);
  });

  test('has the computed uncertainties and tests, as far as they are given', () => {
    row.reconciledSigmas?.forEach((sigma, i) => expect(sigmaOf(found.best, order[i] ?? 0)).toBeCloseTo(sigma, 4));
    row.z?.forEach((z, i) => expect(found.best.z[order[i] ?? 0]).toBeCloseTo(z, 3));
    if (!row.z) return;
    // Three temperatures tie: the test cannot tell them apart, so none is blamed alone.
    expect([...found.best.mostAtOdds].sort()).toEqual([order[3], order[4], order[5]].sort());
  });
});
