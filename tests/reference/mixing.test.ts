// Worked mixing examples in other units and uses (fixtures/reference/mixing-examples.json; those of chilled-water decouplers
// stand in tees.test.ts), and the propagated check values of fixtures/reference/tee-uncertainty.json.
import { describe, expect, test } from 'vitest';
import examples from '@/fixtures/reference/mixing-examples.json';
import table from '@/fixtures/reference/tee-uncertainty.json';
import { tonsFromFlow } from '@/lib/hydronics/fluids';
import { mixedTemperature } from '@/lib/hydronics/mixing';
import { propagate } from '@/lib/hydronics/propagate';
import { diagonalCovariance } from '@/lib/hydronics/reconcile';
import { fractionUncertainty } from '@/lib/hydronics/tees';
import { fahrenheitFromCelsius, gpmFromLitresPerSecond, kilowattsFromTons } from '@/lib/units';
import { WATER } from '../hydronics/support/plants';

const [study, heating] = examples.other;

test(`${study?.source}: 95 L/s over 3.8 K carry 1,511 kW, and would be 45 L/s at design`, () => {
  const gpm = gpmFromLitresPerSecond(study?.litresPerSecond ?? Number.NaN);
  const supplyF = fahrenheitFromCelsius(study?.supplyC ?? Number.NaN);
  const tons = tonsFromFlow(gpm, supplyF, fahrenheitFromCelsius(study?.returnC ?? Number.NaN), WATER);
  // The study's round 4.186 and 1000 are 0.4 % below water at 8 C.
  expect(Math.abs(kilowattsFromTons(tons) / (study?.loadKw ?? 1) - 1)).toBeLessThan(5e-3);
  expect(Math.abs(tons / (study?.loadTons ?? 1) - 1)).toBeLessThan(5e-3);
  const designTonsPerGpm = tonsFromFlow(1, supplyF, fahrenheitFromCelsius(6 + (study?.designRiseK ?? 0)), WATER);
  expect(gpm / (tons / designTonsPerGpm)).toBeCloseTo(study?.flowRatio ?? Number.NaN, 2);
  expect(tons / designTonsPerGpm / gpmFromLitresPerSecond(1)).toBeCloseTo(
    study?.designLitresPerSecond ?? Number.NaN,
    0,
  );
});

test(`${heating?.source}: the cooled secondary return mixes with what passed by`, () => {
  const { primaryFlowGpm = 0, primarySupplyF = 0, secondaryFlowGpm = 0, heatBtuPerHour = 0 } = heating ?? {};
  const dropF = heatBtuPerHour / (500 * secondaryFlowGpm);
  expect(dropF).toBe(heating?.secondaryDropF);
  const bypassGpm = primaryFlowGpm - secondaryFlowGpm;
  const after = mixedTemperature(bypassGpm, primarySupplyF, secondaryFlowGpm, primarySupplyF - dropF);
  expect(after).toBeCloseTo(heating?.primaryAfterTeeF ?? Number.NaN, 9);
});

describe('secondary flow from primary flow and four temperatures', () => {
  test.each(table.secondaryFromPrimary)(
    '$primaryFlowGpm +/- $flowSigmaGpm gpm is $secondaryGpm +/- $uncertaintyGpm',
    (row) => {
      const [ps = 0, ss = 0, sr = 0, pr = 0] = row.temperatures;
      const reverse = row.secondaryGpm > row.primaryFlowGpm;
      // Reverse: Qs = Qp (Tsr - Tps) / (Tsr - Tss); forward: Qs = Qp (Tpr - Tps) / (Tsr - Tps).
      const found = propagate(
        {
          values: reverse
            ? Float64Array.of(row.primaryFlowGpm, ps, ss, sr)
            : Float64Array.of(row.primaryFlowGpm, ps, pr, sr),
          covariance: diagonalCovariance([row.flowSigmaGpm, 0.25, 0.25, 0.25]),
        },
        1,
        ([q = 0, cold = 0, mixed = 0, warm = 0], values, slopes) => {
          const [top, bottom] = reverse ? [warm - cold, warm - mixed] : [mixed - cold, warm - cold];
          const ratio = top / bottom;
          values[0] = q * ratio;
          const byWarm = reverse ? (1 - ratio) / bottom : -ratio / bottom;
          const byCold = reverse ? -1 / bottom : (ratio - 1) / bottom;
          const byMixed = reverse ? ratio / bottom : 1 / bottom;
          slopes.set([ratio, q * byCold, q * byMixed, q * byWarm]);
        },
      );
      expect(found.values[0]).toBeCloseTo(row.secondaryGpm, 9);
      expect(found.sigmas[0]).toBeCloseTo(row.uncertaintyGpm, 2);
    },
  );
});

describe('bypass as the difference of two meters', () => {
  test.each(table.flowDifference)(
    'of $primaryFlowGpm and $secondaryFlowGpm gpm at $percent % stands $z sigmas from zero',
    (row) => {
      const found = propagate(
        {
          values: Float64Array.of(row.primaryFlowGpm, row.secondaryFlowGpm),
          covariance: diagonalCovariance(
            [row.primaryFlowGpm, row.secondaryFlowGpm].map((flow) => (flow * row.percent) / 100),
          ),
        },
        1,
        ([primary = 0, secondary = 0], values, slopes) => {
          values[0] = primary - secondary;
          slopes.set([1, -1]);
        },
      );
      const sigma = found.sigmas[0] ?? Number.NaN;
      if (row.uncertaintyGpm) expect(sigma).toBeCloseTo(row.uncertaintyGpm, 1);
      // Printed to three figures.
      expect(Math.abs((found.values[0] ?? Number.NaN) / sigma)).toBeCloseTo(row.z, 1);
    },
  );
});

describe('the smallest share that two sensors tell from zero (k = 2)', () => {
  const { spansF, rows } = table.smallestShare;
  test.each(rows.flatMap(({ sigmaF, percent }) => spansF.map((spanF, i) => ({ sigmaF, spanF, percent: percent[i] }))))(
    'is $percent % for sensors of $sigmaF F over $spanF F',
    ({ sigmaF, spanF, percent }) => {
      expect(200 * fractionUncertainty(0, spanF, sigmaF, sigmaF, sigmaF)).toBeCloseTo(percent ?? Number.NaN, 1);
    },
  );
});
