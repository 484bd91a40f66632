import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { tonsFromFlow } from '@/lib/hydronics/fluids';
import { decouplerBalance } from '@/lib/hydronics/tees';
import { DIRECTIONS } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { estimateOne, plantOf, recordOf, TWO_UNITS, WATER } from './support/plants';

const plant = plantOf();
const flowGpm = fc.double({ min: 200, max: 2200, noNaN: true });
const supplyF = fc.double({ min: 38, max: 50, noNaN: true });
const riseF = fc.double({ min: 4, max: 20, noNaN: true });

/** The seven sensors of a decoupler without error. */
function exact(primaryFlowGpm: number, secondaryFlowGpm: number, coldF: number, rise: number) {
  const tees = decouplerBalance(primaryFlowGpm, secondaryFlowGpm, coldF, coldF + rise, WATER);
  return {
    primarySupplyF: coldF,
    secondarySupplyF: tees.secondarySupplyF,
    secondaryReturnF: coldF + rise,
    primaryReturnF: tees.primaryReturnF,
    primaryFlowGpm,
    secondaryFlowGpm,
  };
}

const LOOP_CHANNELS = [
  'primarySupplyF',
  'primaryReturnF',
  'secondarySupplyF',
  'secondaryReturnF',
  'bypassF',
  'primaryFlowGpm',
  'secondaryFlowGpm',
  'bypassFlowGpm',
  'bypassFlowUnsignedGpm',
] as const satisfies readonly (keyof Measurements)[];

describe('estimateIntervals', () => {
  test('finds the truth within its interval when the sensors are exact', () => {
    fc.assert(
      fc.property(flowGpm, flowGpm, supplyF, riseF, (primary, secondary, coldF, rise) => {
        const row = estimateOne(exact(primary, secondary, coldF, rise), plant);
        const truth = primary - secondary;
        expect(row.reason).not.toBe('sensors contradict');
        expect(row.bypass_flow_lo_gpm).toBeLessThanOrEqual(truth);
        expect(row.bypass_flow_hi_gpm).toBeGreaterThanOrEqual(truth);
        if (row.direction === 'reverse') expect(truth).toBeLessThan(0);
        if (row.direction === 'forward') expect(truth).toBeGreaterThan(0);
        if (Math.abs(truth) > 0.25 * Math.max(primary, secondary)) expect(row.direction).not.toBe('unknown');
      }),
    );
  });

  test('keeps production = load + blend - dilution in degrees, and load = production in tons', () => {
    fc.assert(
      fc.property(flowGpm, flowGpm, supplyF, riseF, (primary, secondary, coldF, rise) => {
        const row = estimateOne(exact(primary, secondary, coldF, rise), plant);
        const blendF = row.blended_supply_f - row.primary_supply_f;
        const dilutionF = row.secondary_return_f - row.primary_return_f;
        expect(row.load_delta_t_f + blendF - dilutionF).toBeCloseTo(row.production_delta_t_f, 9);
        const production = tonsFromFlow(primary, coldF, row.primary_return_f, WATER);
        // The estimate weighs flows against temperatures: exact sensors agree but for the tees' density difference, and
        // near balance the blend is a mixture of both directions.
        const nearBalanceTons = (0.1 * secondary * rise) / 24;
        const tolerance = Math.abs(primary - secondary) > 0.15 * primary ? 0.01 * production : nearBalanceTons;
        expect(Math.abs(row.load_tons - production)).toBeLessThan(tolerance + 1);
      }),
    );
  });

  test('is not moved by an offset common to all temperature sensors', () => {
    fc.assert(
      fc.property(
        flowGpm,
        flowGpm,
        riseF,
        fc.double({ min: -2, max: 2, noNaN: true }),
        (primary, secondary, rise, offsetF) => {
          const loop = exact(primary, secondary, 44, rise);
          const moved = {
            ...loop,
            primarySupplyF: loop.primarySupplyF + offsetF,
            secondarySupplyF: loop.secondarySupplyF + offsetF,
            secondaryReturnF: loop.secondaryReturnF + offsetF,
            primaryReturnF: loop.primaryReturnF + offsetF,
          };
          const row = estimateOne(loop, plant);
          const again = estimateOne(moved, plant);
          // Specific heat varies by 0.3 % over the two degrees, and nothing else moves.
          expect(Math.abs(again.bypass_flow_gpm - row.bypass_flow_gpm)).toBeLessThan(1);
          expect(Math.abs(again.reverse_probability - row.reverse_probability)).toBeLessThan(0.01);
        },
      ),
    );
  });

  test('turns its answer round when the two flow meters change places', () => {
    const even = plantOf({
      ...TWO_UNITS,
      design: { ...TWO_UNITS.design, distributionPumps: { flowGpm: 1800 } },
    });
    fc.assert(
      fc.property(flowGpm, flowGpm, (one, other) => {
        const row = estimateOne({ primaryFlowGpm: one, secondaryFlowGpm: other }, even);
        const turned = estimateOne({ primaryFlowGpm: other, secondaryFlowGpm: one }, even);
        expect(turned.reverse_probability).toBeCloseTo(1 - row.reverse_probability, 9);
        expect(turned.bypass_flow_gpm).toBeCloseTo(-row.bypass_flow_gpm, 6);
      }),
    );
  });

  test('names a direction only when its probability is at least 0.75, and gives a reason when it names none', () => {
    const reading = fc.record({
      primarySupplyF: fc.double({ min: 40, max: 48, noNaN: true }),
      secondarySupplyF: fc.double({ min: 40, max: 52, noNaN: true }),
      secondaryReturnF: fc.double({ min: 48, max: 60, noNaN: true }),
      primaryReturnF: fc.double({ min: 46, max: 60, noNaN: true }),
      primaryFlowGpm: flowGpm,
      secondaryFlowGpm: flowGpm,
    });
    fc.assert(
      fc.property(reading, (channels) => {
        const row = estimateOne(channels, plant);
        if (row.direction === 'reverse') expect(row.reverse_probability).toBeGreaterThanOrEqual(0.75);
        if (row.direction === 'forward') expect(row.reverse_probability).toBeLessThanOrEqual(0.25);
        expect(row.reason === '').toBe(row.direction !== 'unknown');
      }),
      { numRuns: 500 },
    );
  });

  test('never forces a sign on a difference smaller than its own doubt', () => {
    fc.assert(
      fc.property(flowGpm, fc.double({ min: -0.5, max: 0.5, noNaN: true }), (flow, share) => {
        const other = flow * (1 + share * 0.03);
        const row = estimateOne({ primaryFlowGpm: flow, secondaryFlowGpm: other }, plant);
        expect(['unknown', 'still']).toContain(row.direction);
      }),
    );
  });

  test('takes any subset of sensors, in any state of disrepair, without failing or contradicting its own bounds', () => {
    const value = fc.oneof(
      { weight: 5, arbitrary: fc.double({ min: -50, max: 3000, noNaN: true }) },
      { weight: 1, arbitrary: fc.constant(Number.NaN) },
      { weight: 1, arbitrary: fc.constant(0) },
    );
    const arrangement = fc.constantFrom('primary-secondary' as const, 'variable-primary' as const);
    const channels = fc.dictionary(fc.constantFrom(...LOOP_CHANNELS), fc.array(value, { minLength: 4, maxLength: 4 }));
    const status = fc.array(fc.constantFrom(0, 1, Number.NaN), { minLength: 4, maxLength: 4 });
    fc.assert(
      fc.property(arrangement, channels, fc.array(status, { maxLength: 2 }), (kind, loop, unitStatus) => {
        const estimates = estimateIntervals(recordOf(4, 5, loop, { unitStatus }), plantOf(TWO_UNITS, kind));
        for (let slot = 0; slot < 4; slot += 1) {
          const probability = estimates.reverse_probability[slot] ?? Number.NaN;
          expect(Number.isNaN(probability) || (probability >= 0 && probability <= 1)).toBe(true);
          expect(DIRECTIONS[estimates.direction[slot] ?? -1]).toBeDefined();
          const bypass = estimates.bypass_flow_gpm[slot] ?? Number.NaN;
          if (!Number.isNaN(bypass)) {
            expect(estimates.bypass_flow_lo_gpm[slot]).toBeLessThanOrEqual(bypass);
            expect(estimates.bypass_flow_hi_gpm[slot]).toBeGreaterThanOrEqual(bypass);
          }
          const blended = estimates.blended_supply_f[slot] ?? Number.NaN;
          if (!Number.isNaN(blended)) expect(estimates.blended_supply_lo_f[slot]).toBeLessThanOrEqual(blended);
        }
      }),
      { numRuns: 500 },
    );
  });
});
