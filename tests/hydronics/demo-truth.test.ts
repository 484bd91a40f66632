// The demo's generator makes loops that balance exactly and then reads them with faulty sensors; it shares only the
// properties of water with the kernel. Its truth is what the kernel must find.
import { describe, expect, test } from 'vitest';
import { days, demoScenario, truth } from '@/fixtures/demo';
import { estimateIntervals } from '@/lib/hydronics/estimate';
import { plantModelFromSettings } from '@/lib/hydronics/plant-model';
import { DIRECTIONS } from '@/lib/hydronics/types';
import type { Measurements } from '@/lib/hydronics/types';
import { PlantSettings } from '@/lib/schemas/plant';

const CHANNELS = {
  primarySupplyTemp: 'primarySupplyF',
  primaryReturnTemp: 'primaryReturnF',
  secondarySupplyTemp: 'secondarySupplyF',
  secondaryReturnTemp: 'secondaryReturnF',
  bypassTemp: 'bypassF',
  primaryFlow: 'primaryFlowGpm',
  secondaryFlow: 'secondaryFlowGpm',
  supplySetpoint: 'supplySetpointF',
} as const;

/** A day of a demo plant beside its truth, counted over the intervals in which the units run. */
function judgeWeek(key: 'hospital' | 'college') {
  const plant = demoScenario({ today: '2026-07-20', weeks: 1 }).plants.find((each) => each.key === key);
  if (!plant) throw new Error(`the demo has no plant ${key}`);
  const { model } = plantModelFromSettings(PlantSettings.parse(plant.create), plant.create.arrangement);
  const count = {
    judged: 0,
    wrongWay: 0,
    clear: 0,
    clearRight: 0,
    bypass: 0,
    bypassInside: 0,
    supply: 0,
    supplyInside: 0,
  };
  for (const { day, values } of days(plant)) {
    const real = truth(key, day);
    const channel = (name: string) => (values[name] ? Float64Array.from(values[name]) : undefined);
    const perUnit = (role: string) => model.units.map((_, index) => channel(`${role}.${index + 1}`));
    const loop: Partial<Measurements> = {};
    for (const [role, name] of Object.entries(CHANNELS)) loop[name] = channel(role);
    const record: Measurements = {
      ...loop,
      n: real.bypassFlowGpm.length,
      stepMinutes: real.stepMinutes,
      unitStatus: perUnit('unitStatus'),
      unitFlowGpm: perUnit('unitFlow'),
      unitLeavingF: [],
      unitEnteringF: [],
      unitPowerKw: [],
      primaryPumpStatus: [],
    };
    const found = estimateIntervals(record, model);
    for (let slot = 0; slot < record.n; slot += 1) {
      if (real.state[slot] !== 'running' || !((found.quality[slot] ?? 0) > 0)) continue;
      const direction = DIRECTIONS[found.direction[slot] ?? 0];
      const bypass = real.bypassFlowGpm[slot] ?? Number.NaN;
      const share = bypass / (real.secondaryFlowGpm[slot] ?? Number.NaN);
      count.judged += 1;
      if ((direction === 'reverse' && share > 0.02) || (direction === 'forward' && share < -0.02)) count.wrongWay += 1;
      if (Math.abs(share) > 0.1) {
        count.clear += 1;
        if (direction === (share > 0 ? 'forward' : 'reverse')) count.clearRight += 1;
      }
      if (!Number.isNaN(found.bypass_flow_gpm[slot])) {
        count.bypass += 1;
        if (bypass >= (found.bypass_flow_lo_gpm[slot] ?? 0) && bypass <= (found.bypass_flow_hi_gpm[slot] ?? 0)) {
          count.bypassInside += 1;
        }
      }
      const supplyF = real.blendedSupplyF[slot] ?? Number.NaN;
      if (!Number.isNaN(found.blended_supply_f[slot])) {
        count.supply += 1;
        if (supplyF >= (found.blended_supply_lo_f[slot] ?? 0) && supplyF <= (found.blended_supply_hi_f[slot] ?? 0)) {
          count.supplyInside += 1;
        }
      }
    }
  }
  return count;
}

describe.each(['hospital', 'college'] as const)('a week of the demo’s %s', (key) => {
  const count = judgeWeek(key);

  test('has intervals to judge', () => expect(count.judged).toBeGreaterThan(1500));

  test('is never judged to run the wrong way on more than 1 interval in 200', () => {
    expect(count.wrongWay / count.judged).toBeLessThan(0.005);
  });

  test('has its direction named on 99 % of the intervals in which a tenth of the flow crosses over', () => {
    expect(count.clearRight / count.clear).toBeGreaterThan(0.99);
  });

  test('has the true bypass and blended supply within nine in ten of the 90 % intervals', () => {
    expect(count.bypassInside / count.bypass).toBeGreaterThan(0.9);
    expect(count.supplyInside / count.supply).toBeGreaterThan(0.9);
  });
});
