// Check values of the decoupler fractions and their uncertainty (fixtures/reference/tee-uncertainty.json) and worked
// mixing examples of public literature (fixtures/reference/mixing-examples.json, each with its own source).
import { describe, expect, test } from 'vitest';
import examples from '@/fixtures/reference/mixing-examples.json';
import table from '@/fixtures/reference/tee-uncertainty.json';
import { tonsFromFlow } from '@/lib/hydronics/fluids';
import {
  decouplerBalance,
  forwardFraction,
  forwardSensitivity,
  fractionUncertainty,
  ratioUncertainty,
  reverseFraction,
  reverseSensitivity,
  secondaryToPrimaryRatio,
} from '@/lib/hydronics/tees';
import { WATER } from '../hydronics/support/plants';

describe('reverse fraction beta', () => {
  test.each(table.reverse)('is $fraction +/- $uncertainty for supply $secondarySupplyF F, sensors $sigmaF F', (row) => {
    const beta = reverseFraction(row.primarySupplyF, row.secondaryReturnF, row.secondarySupplyF);
    const span = row.secondaryReturnF - row.primarySupplyF;
    expect(beta).toBeCloseTo(row.fraction, 5);
    expect(fractionUncertainty(beta, span, row.sigmaF, row.sigmaF, row.sigmaF)).toBeCloseTo(row.uncertainty, 5);
  });

  test('has the published sensitivities', () => {
    const row = table.reverseSensitivity;
    const slope = reverseSensitivity(row.primarySupplyF, row.secondaryReturnF, row.secondarySupplyF);
    expect(slope.byPrimarySupply).toBeCloseTo(row.byPrimarySupply, 5);
    expect(slope.bySecondaryReturn).toBeCloseTo(row.bySecondaryReturn, 5);
    expect(slope.byMixed).toBeCloseTo(row.byMixed, 5);
  });

  test.each(table.bypassFromFraction)(
    'times $secondaryFlowGpm +/- $flowSigmaGpm gpm is $bypassGpm +/- $uncertaintyGpm gpm',
    (row) => {
      const beta = reverseFraction(44, 56, 46);
      const u = fractionUncertainty(beta, 12, 0.25, 0.25, 0.25);
      expect(beta * row.secondaryFlowGpm).toBeCloseTo(row.bypassGpm, 6);
      expect(Math.hypot(row.secondaryFlowGpm * u, beta * row.flowSigmaGpm)).toBeCloseTo(row.uncertaintyGpm, 2);
    },
  );
});

describe('forward fraction alpha', () => {
  test.each(table.forward)('is $fraction +/- $uncertainty for return $primaryReturnF F', (row) => {
    const alpha = forwardFraction(row.primarySupplyF, row.secondaryReturnF, row.primaryReturnF);
    const span = row.secondaryReturnF - row.primarySupplyF;
    expect(alpha).toBeCloseTo(row.fraction, 5);
    expect(fractionUncertainty(alpha, span, row.sigmaF, row.sigmaF, row.sigmaF)).toBeCloseTo(row.uncertainty, 5);
  });

  test('has the published sensitivities', () => {
    const row = table.forwardSensitivity;
    const slope = forwardSensitivity(row.primarySupplyF, row.secondaryReturnF, row.primaryReturnF);
    expect(slope.byPrimarySupply).toBeCloseTo(row.byPrimarySupply, 5);
    expect(slope.bySecondaryReturn).toBeCloseTo(row.bySecondaryReturn, 5);
    expect(slope.byMixed).toBeCloseTo(row.byMixed, 5);
  });
});

describe('secondary over primary flow from four temperatures', () => {
  test.each(table.ratio)('is $ratio +/- $uncertainty', (row) => {
    const { primarySupplyF, primaryReturnF, secondarySupplyF, secondaryReturnF, sigmaF } = row;
    const temperatures = [primarySupplyF, primaryReturnF, secondarySupplyF, secondaryReturnF] as const;
    expect(secondaryToPrimaryRatio(...temperatures)).toBeCloseTo(row.ratio, 9);
    expect(ratioUncertainty(...temperatures, sigmaF)).toBeCloseTo(row.uncertainty, 4);
  });
});

describe('worked examples', () => {
  test.each(examples.examples)('$source: both tees within 0.05 F and 1 gpm', (row) => {
    const { primaryFlowGpm, secondaryFlowGpm, primarySupplyF, secondaryReturnF } = row;
    const tees = decouplerBalance(primaryFlowGpm, secondaryFlowGpm, primarySupplyF, secondaryReturnF, WATER);
    expect(Math.abs(tees.secondarySupplyF - row.secondarySupplyF)).toBeLessThan(0.05);
    expect(Math.abs(tees.primaryReturnF - row.primaryReturnF)).toBeLessThan(0.05);
    // Volume is not conserved exactly: the returning gallons are lighter by 0.07 %.
    expect(Math.abs(tees.bypassFlowGpm - row.bypassFlowGpm)).toBeLessThan(1);
    const tons = tonsFromFlow(secondaryFlowGpm, tees.secondarySupplyF, secondaryReturnF, WATER);
    // The literature counts with 500; real water carries 0.2 to 0.6 % more.
    expect(Math.abs(tons / row.loadTons - 1)).toBeLessThan(0.01);
  });
});
