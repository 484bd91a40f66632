import { describe, expect, test } from 'vitest';
import { drawDesign } from '../support/simulation/design';
import { fleetOptions } from '../support/simulation/fleet';
import { runPlant } from '../support/simulation/physics';
import { simulatePlant } from '../support/simulation/simulate';
import type { Balance, Sensing, SimulatedPlant, SimulationOptions } from '../support/simulation/types';

const BASE: SimulationOptions = { seed: 5, sensing: 'both-meters', balance: 'varied', nightOff: false };
const NO_FAULTS = { missing: false, spikes: false, resolutionF: 0, lacking: 'none' } as const;

const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
const runningSlots = ({ truth, measurements }: SimulatedPlant) =>
  Array.from({ length: measurements.n }, (_, slot) => slot).filter((slot) => truth.running[slot] === 1);

describe('a simulated plant', () => {
  test('is the same each time it is made', () => {
    expect(simulatePlant({ ...BASE, days: 1 })).toEqual(simulatePlant({ ...BASE, days: 1 }));
  });

  test('runs alike whatever its sensors are', () => {
    const good = simulatePlant({ ...BASE, days: 1, noiseF: 0.05, offsetF: 0 });
    const poor = simulatePlant({ ...BASE, days: 1, noiseF: 0.3, offsetF: 1, spikes: true, lacking: 'primaryReturnF' });
    expect(poor.truth).toEqual(good.truth);
  });

  test('has a week at five minutes unless told otherwise', () => {
    const { measurements, truth } = simulatePlant(BASE);
    expect([measurements.n, measurements.stepMinutes, truth.bypassGpm.length]).toEqual([2016, 5, 2016]);
    expect(measurements.primarySupplyF).toHaveLength(2016);
    expect(simulatePlant({ ...BASE, days: 1, stepMinutes: 15 }).measurements.n).toBe(96);
  });

  test.each(['constant', 'variable'] as const)(
    'keeps mass and heat at both tees at every step, %s primary',
    (primarySpeed) => {
      const run = runPlant(drawDesign({ ...BASE, primarySpeed, nightOff: true }), BASE.seed, 2 * 1440, 0.25);
      for (let step = 0; step < run.steps; step += 1) {
        const primary = run.primaryGpm[step]!;
        const secondary = run.secondaryGpm[step]!;
        const bypass = run.bypassGpm[step]!;
        expect(bypass).toBeCloseTo(primary - secondary, 8);
        const backward = Math.max(0, -bypass);
        const forward = Math.max(0, bypass);
        const intoSupply = primary * run.primarySupplyF[step]! + backward * run.secondaryReturnF[step]!;
        const outOfSupply = secondary * run.secondarySupplyF[step]! + forward * run.primarySupplyF[step]!;
        expect(Math.abs(intoSupply - outOfSupply)).toBeLessThan(1e-6);
        const intoReturn = secondary * run.secondaryReturnF[step]! + forward * run.primarySupplyF[step]!;
        const outOfReturn = primary * run.primaryReturnF[step]! + backward * run.secondaryReturnF[step]!;
        expect(Math.abs(intoReturn - outOfReturn)).toBeLessThan(1e-6);
      }
    },
  );

  test('makes over the days what its coils take in', () => {
    const run = runPlant(drawDesign(BASE), BASE.seed, 3 * 1440, 0.25);
    let made = 0;
    let taken = 0;
    for (let step = 0; step < run.steps; step += 1) {
      made += (run.primaryGpm[step]! * (run.primaryReturnF[step]! - run.primarySupplyF[step]!)) / 24;
      taken += run.loadTons[step]!;
    }
    // What is left is the water in the pipes, a few minutes of load in three days.
    expect(made / taken).toBeGreaterThan(0.99);
    expect(made / taken).toBeLessThan(1.01);
  });

  test('has nobody running at night when it is shut down, and standing water then', () => {
    const { truth } = simulatePlant({ ...BASE, nightOff: true, days: 1 });
    const slotOf = (hour: number) => hour * 12;
    expect(truth.running[slotOf(3)]).toBe(0);
    expect(truth.primaryFlowGpm[slotOf(3)]).toBe(0);
    expect(truth.secondaryFlowGpm[slotOf(3)]).toBe(0);
    expect(truth.running[slotOf(12)]).toBe(1);
    // The first minutes without units: distribution goes on, all of it backwards through the common pipe.
    const coasting = slotOf(21) + 2;
    expect(truth.bypassGpm[coasting]).toBeLessThan(-100);
    expect(truth.running[coasting]).toBe(0);
  });

  test('runs both ways within an interval when it hunts', () => {
    const { truth } = simulatePlant({ ...BASE, balance: 'near-balance', primarySpeed: 'variable', hunting: true });
    const both = truth.reverseShare.filter((share) => share > 0.2 && share < 0.8).length;
    expect(both / truth.reverseShare.length).toBeGreaterThan(0.3);
  });
});

describe('its sensors', () => {
  test('err by what is written down, in noise and in the long run', () => {
    const sim = simulatePlant({ ...BASE, ...NO_FAULTS, noiseF: 0.2, sensorLag: false, flowZeroPercent: 0 });
    const slots = runningSlots(sim);
    const offset = sim.errors.find((error) => error.role === 'secondarySupplyTemp')!.value;
    const misses = slots.map((slot) => sim.measurements.secondarySupplyF![slot]! - sim.truth.blendedSupplyF[slot]!);
    expect(Math.abs(offset)).toBeGreaterThan(0.01);
    // 0.2 F over the square root of 2016 readings is 0.0045 F; four of these.
    expect(Math.abs(mean(misses) - offset)).toBeLessThan(0.018);
    expect(Math.sqrt(mean(misses.map((miss) => (miss - offset) ** 2)))).toBeCloseTo(0.2, 1);
    const gain = sim.errors.find((error) => error.role === 'primaryFlow')!.value;
    const ratios = slots.map((slot) => sim.measurements.primaryFlowGpm![slot]! / sim.truth.primaryFlowGpm[slot]!);
    expect(100 * (mean(ratios) - 1)).toBeCloseTo(gain, 0);
  });

  test('stay within the errors asked for', () => {
    for (let seed = 0; seed < 40; seed += 1) {
      const { errors } = simulatePlant({ ...BASE, seed, days: 0.25, offsetF: 0.6, gainPercent: 3 });
      for (const { kind, value } of errors) expect(Math.abs(value)).toBeLessThanOrEqual(kind === 'offset' ? 0.6 : 3);
    }
  });

  test('are known to the kernel by their class alone', () => {
    const sigmas = fleetOptions().map((options) =>
      JSON.stringify(simulatePlant({ ...options, days: 0.1 }).plant.sensors),
    );
    expect(new Set(sigmas).size).toBe(1);
    const design = drawDesign({ ...BASE, sensing: 'pump-status' });
    design.units.forEach((unit, index) => {
      expect(design.settings.units[index]!.flowGpm).toBe(unit.ratedGpm);
      expect(unit.trueGpm).not.toBe(unit.ratedGpm);
    });
  });

  test.each<[Sensing, string[]]>([
    ['both-meters', ['primaryFlowGpm', 'secondaryFlowGpm']],
    ['pump-status', ['secondaryFlowGpm']],
    ['one-meter', ['secondaryFlowGpm']],
    ['temperatures', []],
  ])('of a plant with %s give only these flows', (sensing, flows) => {
    const { measurements } = simulatePlant({ ...BASE, sensing, meter: 'secondary', days: 0.25 });
    expect(Object.keys(measurements).filter((key) => key.endsWith('FlowGpm') && !key.startsWith('unit'))).toEqual(
      flows,
    );
    expect(measurements.primaryPumpStatus.length > 0).toBe(sensing === 'pump-status');
  });
});

describe('the fleet', () => {
  const fleet = fleetOptions().map((options) => simulatePlant(options));
  const shareOf = (sim: SimulatedPlant, holds: (bypassShare: number) => boolean) => {
    const slots = runningSlots(sim);
    const { bypassGpm, secondaryFlowGpm } = sim.truth;
    return slots.filter((slot) => holds(bypassGpm[slot]! / secondaryFlowGpm[slot]!)).length / slots.length;
  };
  const ofBalance = (balance: Balance) => fleet.filter((sim) => sim.group.balance === balance);

  test('has ten plants or more of every sensing, and two or more near balance in each', () => {
    for (const sensing of ['both-meters', 'pump-status', 'one-meter', 'temperatures'] as const) {
      const group = fleet.filter((sim) => sim.group.sensing === sensing);
      expect(group.length).toBeGreaterThanOrEqual(10);
      expect(group.filter((sim) => sim.group.balance === 'near-balance').length).toBeGreaterThanOrEqual(2);
    }
  });

  test('stays within a tenth of secondary flow near balance, on both sides of it', () => {
    for (const sim of ofBalance('near-balance')) {
      expect(shareOf(sim, (share) => Math.abs(share) < 0.1)).toBeGreaterThan(0.85);
      const reverse = shareOf(sim, (share) => share < 0);
      expect(reverse).toBeGreaterThan(0.15);
      expect(reverse).toBeLessThan(0.85);
    }
  });

  test('goes both ways where it is varied', () => {
    const reverse = mean(ofBalance('varied').map((sim) => shareOf(sim, (share) => share < 0)));
    expect(reverse).toBeGreaterThan(0.25);
    expect(reverse).toBeLessThan(0.65);
  });

  test('leans forward and backward where it is meant to', () => {
    for (const sim of ofBalance('mostly-forward')) expect(shareOf(sim, (share) => share < 0)).toBeLessThan(0.05);
    expect(mean(ofBalance('mostly-reverse').map((sim) => shareOf(sim, (share) => share < 0)))).toBeGreaterThan(0.5);
  });

  test('holds unsteady intervals, but not many', () => {
    for (const sim of fleet) {
      const slots = runningSlots(sim);
      const steady = slots.filter((slot) => sim.truth.steady[slot] === 1).length / slots.length;
      expect(steady).toBeLessThan(1);
      if (!sim.name.endsWith('1007')) expect(steady).toBeGreaterThan(0.85);
    }
  });

  test('keeps water between freezing and the room', () => {
    for (const sim of fleet) {
      for (const channel of [sim.truth.blendedSupplyF, sim.truth.secondaryReturnF, sim.truth.primaryReturnF]) {
        expect(Math.min(...channel)).toBeGreaterThan(36);
        expect(Math.max(...channel)).toBeLessThan(75);
      }
    }
  });

  test('has no gap in what is true', () => {
    for (const sim of fleet) {
      for (const [name, channel] of Object.entries(sim.truth) as [string, Float64Array][]) {
        expect([name, channel.findIndex((value) => !Number.isFinite(value))]).toEqual([name, -1]);
      }
    }
  });
});
