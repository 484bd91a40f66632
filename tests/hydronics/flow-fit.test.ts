import { describe, expect, test } from 'vitest';
import table from '@/fixtures/reference/tee-uncertainty.json';
import { emptyFlowEvidence, emptyFlowFit, fitFlows } from '@/lib/hydronics/flow-fit';
import type { FlowEvidence } from '@/lib/hydronics/flow-fit';
import { fractionUncertainty } from '@/lib/hydronics/tees';

function fit(evidence: Partial<FlowEvidence>) {
  const out = emptyFlowFit();
  fitFlows({ ...emptyFlowEvidence(), ...evidence }, out);
  return out;
}

describe('fitFlows', () => {
  test.each(table.flowDifference)('two meters at $percent % differ with u = $uncertaintyGpm gpm', (row) => {
    const sigma = (flowGpm: number) => (flowGpm * row.percent) / 100;
    const result = fit({
      mainGpm: row.secondaryFlowGpm,
      mainSigma: sigma(row.secondaryFlowGpm),
      otherGpm: row.primaryFlowGpm,
      otherSigma: sigma(row.primaryFlowGpm),
    });
    expect(result.bypassGpm).toBeCloseTo(row.secondaryFlowGpm - row.primaryFlowGpm, 9);
    expect(Math.sqrt(result.bypassVariance)).toBeCloseTo(row.uncertaintyGpm, 1);
    expect(result.redundancy).toBe(0);
    expect(result.chiSquare).toBeCloseTo(0, 12);
  });

  test('finds secondary from primary flow and beta: 1200 +/- 46.11 gpm', () => {
    const row = table.secondaryFromPrimary[0];
    const fraction = 2 / 12;
    const fractionSigma = fractionUncertainty(fraction, 12, 0.25, 0.25, 0.25);
    const result = fit({ otherGpm: row?.primaryFlowGpm, otherSigma: row?.flowSigmaGpm, fraction, fractionSigma });
    expect(result.mainGpm).toBeCloseTo(row?.secondaryGpm ?? Number.NaN, 6);
    expect(Math.sqrt(result.mainVariance)).toBeCloseTo(row?.uncertaintyGpm ?? Number.NaN, 2);
  });

  test('finds secondary from primary flow and alpha: 1500 +/- 61 gpm', () => {
    const row = table.secondaryFromPrimary[1];
    const fractionSigma = fractionUncertainty(0.25, 12, 0.25, 0.25, 0.25);
    const result = fit({ mainGpm: row?.primaryFlowGpm, mainSigma: row?.flowSigmaGpm, fraction: 0.25, fractionSigma });
    const variance = result.mainVariance + result.bypassVariance - 2 * result.covariance;
    expect(result.mainGpm - result.bypassGpm).toBeCloseTo(row?.secondaryGpm ?? Number.NaN, 6);
    expect(Math.sqrt(variance)).toBeCloseTo(row?.uncertaintyGpm ?? Number.NaN, 2);
  });

  test('weighs three flows that must add up as textbook reconciliation does', () => {
    // J. Rao & S. Narasimhan 1996, 3 streams, 1 node: 9.22 = 4.83 + 3.22 at 3 % each.
    // Reconciled 8.382131, 5.059937, 3.322194; chi2 12.8132.
    const result = fit({
      mainGpm: 9.22,
      mainSigma: 0.2766,
      otherGpm: 4.83,
      otherSigma: 0.1449,
      bypassGpm: 3.22,
      bypassSigma: 0.0966,
    });
    expect(result.mainGpm).toBeCloseTo(8.382131, 6);
    expect(result.mainGpm - result.bypassGpm).toBeCloseTo(5.059937, 6);
    expect(result.bypassGpm).toBeCloseTo(3.322194, 6);
    expect(result.chiSquare).toBeCloseTo(12.8132, 4);
    expect(result.redundancy).toBe(1);
  });

  test('narrows the bypass when a second witness agrees', () => {
    const flows = { mainGpm: 1200, mainSigma: 36, otherGpm: 1000, otherSigma: 30 };
    const alone = fit(flows);
    const both = fit({ ...flows, fraction: 1 / 6, fractionSigma: 0.027 });
    expect(both.bypassVariance).toBeLessThan(alone.bypassVariance);
  });

  test('stays in shares of the main flow when no flow is known', () => {
    const result = fit({ fraction: 0.2, fractionSigma: 0.03 });
    expect(result.relative).toBe(true);
    expect(result.bypassGpm).toBe(0.2);
  });

  test('says what one meter says, and nothing more', () => {
    expect(fit({ bypassGpm: 150, bypassSigma: 5 })).toMatchObject({ bypassGpm: 150, bypassVariance: 25, mainGpm: NaN });
    expect(fit({ mainGpm: 900, mainSigma: 9 })).toMatchObject({ mainGpm: 900, bypassGpm: NaN });
    expect(fit({ otherGpm: 900, otherSigma: 9 })).toMatchObject({ mainGpm: NaN, bypassGpm: NaN });
    expect(fit({})).toMatchObject({ mainGpm: NaN, bypassGpm: NaN, chiSquare: 0, redundancy: 0 });
  });
});
