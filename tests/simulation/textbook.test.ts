import { describe, expect, test } from 'vitest';
import { simulatePlant } from '../support/simulation/simulate';
import { textbookOf, textbookShare } from '../support/simulation/textbook';
import type { SimulatedPlant, SimulationOptions } from '../support/simulation/types';

/** Sensors without any error, read at the simulation's own steps. */
const PERFECT = {
  seed: 21,
  balance: 'varied',
  days: 2,
  stepMinutes: 0.25,
  nightOff: false,
  noiseF: 0,
  offsetF: 0,
  gainPercent: 0,
  flowNoisePercent: 0,
  flowZeroPercent: 0,
  ratedFlowPercent: 0,
  resolutionF: 0,
  missing: false,
  spikes: false,
  sensorLag: false,
  averagedStatus: false,
  lacking: 'none',
} as const satisfies Partial<SimulationOptions>;

/** Largest departure of the textbook from the truth, gpm, over the intervals that ran. */
function worstGpm(sim: SimulatedPlant, onlySteady = false): number {
  const { bypassGpm } = textbookOf(sim);
  let worst = 0;
  for (let slot = 0; slot < sim.measurements.n; slot += 1) {
    if (sim.truth[onlySteady ? 'steady' : 'running'][slot] !== 1) continue;
    worst = Math.max(worst, Math.abs(bypassGpm[slot]! - sim.truth.bypassGpm[slot]!));
  }
  return worst;
}

describe('the textbook formula', () => {
  // Shared check values: deficit 44/56 F with a supply of 46 F, surplus 44/56 F with a return of 53 F.
  test('gives a sixth backward and a quarter forward where the fractions are known', () => {
    expect(textbookShare(44, 56, 46, 56)).toBeCloseTo(-1 / 6, 12);
    expect(textbookShare(44, 56, 44, 53)).toBeCloseTo(0.25, 12);
  });

  test('goes by the side that is measured, and by none without a span', () => {
    expect(textbookShare(44, 56, 46, Number.NaN)).toBeCloseTo(-1 / 6, 12);
    expect(textbookShare(44, 56, Number.NaN, 53)).toBeCloseTo(0.25, 12);
    expect(textbookShare(44, 44.2, 44, 44)).toBeNaN();
  });

  test('stays within what a pipe can carry', () => {
    expect(textbookShare(44, 46, 50, 46)).toBe(-1);
    expect(textbookShare(44, 46, 44, 40)).toBe(1);
  });

  // Meters scatter by 0.1 % of design at least.
  test('is the truth to the meters’ own scatter with both of them', () => {
    const sim = simulatePlant({ ...PERFECT, sensing: 'both-meters' });
    expect(worstGpm(sim)).toBeLessThan(0.01 * sim.plant.distributionPumps.flowGpm);
  });

  test.each(['secondary', 'primary'] as const)('is the truth from temperatures and the %s meter', (meter) => {
    const sim = simulatePlant({ ...PERFECT, sensing: 'one-meter', meter });
    const record = sim.measurements;
    // The meter’s scatter is not the formula’s.
    if (meter === 'primary') record.primaryFlowGpm = sim.truth.primaryFlowGpm;
    else record.secondaryFlowGpm = sim.truth.secondaryFlowGpm;
    expect(worstGpm(sim)).toBeLessThan(1e-6);
  });

  test('is off by little where readings are five-minute means of a steady plant', () => {
    const sim = simulatePlant({ ...PERFECT, sensing: 'one-meter', meter: 'secondary', stepMinutes: 5 });
    sim.measurements.secondaryFlowGpm = sim.truth.secondaryFlowGpm;
    expect(worstGpm(sim, true)).toBeLessThan(0.03 * sim.plant.distributionPumps.flowGpm);
  });

  test('has no gpm where no flow is known, but the share', () => {
    const sim = simulatePlant({ ...PERFECT, sensing: 'temperatures', primarySpeed: 'variable', unitLeaving: false });
    const { bypassGpm, share } = textbookOf(sim);
    expect(bypassGpm.every(Number.isNaN)).toBe(true);
    const slot = sim.truth.running.lastIndexOf(1);
    const larger = Math.max(sim.truth.primaryFlowGpm[slot]!, sim.truth.secondaryFlowGpm[slot]!);
    expect(share[slot]! * larger).toBeCloseTo(sim.truth.bypassGpm[slot]!, 6);
  });
});
