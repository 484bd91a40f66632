import { describe, expect, test } from 'vitest';
import type { SensorFinding } from '@/lib/hydronics/calibration-types';
import { DIRECTIONS, RESULT_CHANNELS } from '@/lib/hydronics/types';
import type { Direction, Estimates } from '@/lib/hydronics/types';
import { directionIsRight, poolScores, scorePlant, STILL_SHARE } from '../support/simulation/score';
import { simulatePlant } from '../support/simulation/simulate';
import { textbookOf } from '../support/simulation/textbook';
import type { SimulatedPlant } from '../support/simulation/types';

const sim = simulatePlant({ seed: 9, sensing: 'both-meters', balance: 'varied', days: 2, nightOff: true });

/** Estimates that are the truth, with intervals of a width. */
function trueEstimates({ truth, measurements }: SimulatedPlant, halfWidthGpm = 10, halfWidthF = 0.1): Estimates {
  const channels = RESULT_CHANNELS.map((channel) => [channel, new Float64Array(measurements.n).fill(Number.NaN)]);
  const estimates = Object.fromEntries(channels) as Estimates;
  for (let slot = 0; slot < measurements.n; slot += 1) {
    const bypassGpm = truth.bypassGpm[slot]!;
    const still = Math.abs(bypassGpm) < STILL_SHARE * truth.secondaryFlowGpm[slot]!;
    call(estimates, slot, still ? 'still' : bypassGpm < 0 ? 'reverse' : 'forward');
    estimates.reverse_probability[slot] = bypassGpm < 0 ? 1 : 0;
    estimates.bypass_flow_gpm[slot] = bypassGpm;
    estimates.bypass_flow_lo_gpm[slot] = bypassGpm - halfWidthGpm;
    estimates.bypass_flow_hi_gpm[slot] = bypassGpm + halfWidthGpm;
    estimates.blended_supply_f[slot] = truth.blendedSupplyF[slot]!;
    estimates.blended_supply_lo_f[slot] = truth.blendedSupplyF[slot]! - halfWidthF;
    estimates.blended_supply_hi_f[slot] = truth.blendedSupplyF[slot]! + halfWidthF;
    estimates.primary_supply_f[slot] = truth.primarySupplyF[slot]!;
    estimates.primary_return_f[slot] = truth.primaryReturnF[slot]!;
    estimates.secondary_return_f[slot] = truth.secondaryReturnF[slot]!;
  }
  return estimates;
}

function call(estimates: Estimates, slot: number, direction: Direction): void {
  estimates.direction[slot] = DIRECTIONS.indexOf(direction);
}

/** Slots that ran and where a condition on b / Fs holds. */
const slotsWhere = (holds: (share: number) => boolean) =>
  Array.from({ length: sim.measurements.n }, (_, slot) => slot).filter(
    (slot) => sim.truth.running[slot] === 1 && holds(sim.truth.bypassGpm[slot]! / sim.truth.secondaryFlowGpm[slot]!),
  );

describe('the score', () => {
  test('of the truth is perfect', () => {
    const { measures, unit } = scorePlant(sim, trueEstimates(sim));
    expect(unit).toBe('gpm');
    expect(measures).toMatchObject({
      answered: 1,
      directed: 1,
      directionRight: 1,
      directionRight5: 1,
      directionRight10: 1,
      falseReverse: 0,
      missedReverse: 0,
      brier: 0,
      calibrationError: 0,
      bypassRmseShare: 0,
      rmseRatio: 0,
      blendRmseF: 0,
      bypassCoverage: 1,
      blendCoverage: 1,
    });
  });

  test('of the textbook against itself is one', () => {
    const estimates = trueEstimates(sim);
    estimates.bypass_flow_gpm.set(textbookOf(sim).bypassGpm);
    expect(scorePlant(sim, estimates).measures.rmseRatio).toBeCloseTo(1, 12);
  });

  test('counts only what truly ran', () => {
    const estimates = trueEstimates(sim);
    let idle = 0;
    sim.truth.running.forEach((ran, slot) => {
      if (ran === 1) return;
      idle += 1;
      estimates.bypass_flow_gpm[slot] = 1e6;
      call(estimates, slot, 'unknown');
    });
    expect(idle).toBeGreaterThan(0);
    const { measures, tally } = scorePlant(sim, estimates);
    expect(tally.running).toBe(sim.measurements.n - idle);
    expect([measures.bypassRmseShare, measures.directed]).toEqual([0, 1]);
  });

  test('takes still for right only within 2 % of secondary flow, and the sign of the truth anywhere', () => {
    expect(directionIsRight('still', 19, 1000)).toBe(true);
    expect(directionIsRight('still', -21, 1000)).toBe(false);
    expect(directionIsRight('forward', 5, 1000)).toBe(true);
    expect(directionIsRight('reverse', 5, 1000)).toBe(false);
    expect(directionIsRight('reverse', -900, 1000)).toBe(true);
  });

  test('counts a true reverse called still as missed, and one left unknown only in the strict measure', () => {
    const reverse = slotsWhere((share) => share < -STILL_SHARE);
    const estimates = trueEstimates(sim);
    call(estimates, reverse[0]!, 'still');
    call(estimates, reverse[1]!, 'unknown');
    call(estimates, reverse[2]!, 'forward');
    const { measures } = scorePlant(sim, estimates);
    expect(measures.missedReverse).toBeCloseTo(2 / reverse.length, 12);
    expect(measures.missedReverseStrict).toBeCloseTo(3 / reverse.length, 12);
  });

  test('judges signs and still apart', () => {
    const estimates = trueEstimates(sim);
    const wide = slotsWhere((share) => share > 0.06);
    call(estimates, wide[0]!, 'still');
    call(estimates, wide[1]!, 'reverse');
    const { measures, tally } = scorePlant(sim, estimates);
    expect(tally.still + tally.signed).toBe(tally.directed);
    expect(measures.stillNear).toBeCloseTo(1 - 1 / tally.still, 12);
    expect(measures.signRight).toBeCloseTo(1 - 1 / tally.signed, 12);
  });

  test('counts a false reverse among what was not reverse', () => {
    const forward = slotsWhere((share) => share >= 0);
    const estimates = trueEstimates(sim);
    call(estimates, forward[0]!, 'reverse');
    expect(scorePlant(sim, estimates).measures.falseReverse).toBeCloseTo(1 / forward.length, 12);
  });

  test('of even odds everywhere is a Brier score of a quarter', () => {
    const estimates = trueEstimates(sim);
    estimates.reverse_probability.fill(0.5);
    const { measures } = scorePlant(sim, estimates);
    const reverse = slotsWhere((share) => share < 0).length / slotsWhere(() => true).length;
    expect(measures.brier).toBeCloseTo(0.25, 12);
    expect(measures.calibrationError).toBeCloseTo(Math.abs(0.5 - reverse), 12);
  });

  test('leaves out of the coverage what has no interval', () => {
    const estimates = trueEstimates(sim);
    const slots = slotsWhere(() => true);
    estimates.bypass_flow_lo_gpm[slots[0]!] = Number.NaN;
    estimates.bypass_flow_lo_gpm[slots[1]!] = sim.truth.bypassGpm[slots[1]!]! + 1;
    const { tally } = scorePlant(sim, estimates);
    expect([tally.bypassIntervals, tally.bypassCovered]).toEqual([slots.length - 1, slots.length - 2]);
  });

  test('is in shares where no gpm is given, with the textbook’s share beside it', () => {
    const bare = simulatePlant({
      seed: 9,
      sensing: 'temperatures',
      balance: 'varied',
      days: 1,
      primarySpeed: 'variable',
      nightOff: false,
      unitLeaving: false,
    });
    const estimates = trueEstimates(bare);
    estimates.bypass_flow_gpm.fill(Number.NaN);
    const { unit, measures } = scorePlant(bare, estimates);
    expect(unit).toBe('share');
    expect(measures.answered).toBe(1);
    // The mean of a product is not the product of means: within the interval flows and temperatures move together.
    expect(measures.bypassRmseShare).toBeLessThan(0.02);
    expect(measures.rmseRatio).toBeLessThan(0.5);
  });

  test('pools intervals, and names the worst plant', () => {
    const good = scorePlant(sim, trueEstimates(sim));
    const wrong = trueEstimates(sim);
    for (const slot of slotsWhere((share) => share > 0.05)) call(wrong, slot, 'reverse');
    const bad = scorePlant(sim, wrong);
    const pooled = poolScores([good, bad]);
    expect(pooled.tally.running).toBe(2 * good.tally.running);
    expect(pooled.worst5).toBe(bad.measures.directionRight5);
    expect(pooled.measures.directionRight5).toBeCloseTo((1 + bad.measures.directionRight5) / 2, 12);
  });
});

describe('the score of a calibration', () => {
  const finding = (role: SensorFinding['role'], kind: SensorFinding['kind'], value: number): SensorFinding => ({
    role,
    kind,
    value,
    lo: value - 0.1,
    hi: value + 0.1,
    prior: 0.25,
    told: 0.9,
    tie: 'energy-balance',
    evidenceHours: 40,
    noise: 0.1,
    increment: 0,
  });
  const scored = (shiftF: number, gainPercent: number) => {
    const findings = sim.errors.map(({ role, kind, value }) =>
      finding(role, kind, kind === 'offset' ? value + shiftF : (1 + value / 100) * (100 + gainPercent) - 100),
    );
    return scorePlant(sim, trueEstimates(sim), { findings }).measures;
  };

  test('does not ask for an offset that all temperatures share, nor for a gain that both meters share', () => {
    const measures = scored(0.7, 3);
    expect(measures.offsetRmsF).toBeCloseTo(0, 12);
    expect(measures.gainRatioPercent).toBeCloseTo(0, 10);
    expect(measures.findingCoverage).toBe(0);
  });

  test('finds every error covered where each is found', () => {
    expect(scored(0, 0).findingCoverage).toBe(1);
  });

  test('counts a sensor without a finding as one found errorless', () => {
    const misses = sim.errors
      .filter((error) => error.kind === 'offset' && error.role !== 'bypassTemp')
      .map((error) => error.value);
    const centre = misses.reduce((sum, value) => sum + value, 0) / misses.length;
    const expected = Math.sqrt(misses.reduce((sum, value) => sum + (value - centre) ** 2, 0) / misses.length);
    const { offsetRmsF } = scorePlant(sim, trueEstimates(sim), { findings: [] }).measures;
    expect(expected).toBeGreaterThan(0.05);
    expect(offsetRmsF).toBeCloseTo(expected, 12);
  });
});
