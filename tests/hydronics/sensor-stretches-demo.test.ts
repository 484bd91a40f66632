import { describe, expect, test } from 'vitest';
import { days, demoScenario } from '@/fixtures/demo';
import { plantModelFromSettings } from '@/lib/hydronics/plant-model';
import { inspectSensors } from '@/lib/hydronics/sensor-stretches';
import type { Measurements } from '@/lib/hydronics/types';
import { PlantSettings } from '@/lib/schemas/plant';
import { DAY, STEP } from './support/sensed-loop';

// What the demo's sensors did is written in fixtures/demo/plants/*-site.ts.
describe.each([
  ['hospital', 'bypassF', 15],
  ['college', 'secondaryReturnF', 16],
  ['laboratory', 'primaryReturnF', 10],
] as const)('four weeks of the demo plant %s', (key, channel, hours) => {
  test(`hold one stuck stretch, ${channel} for ${hours} hours, and no other trouble`, () => {
    const scenario = demoScenario({ today: '2026-07-20', weeks: 4 }).plants.find((each) => each.key === key);
    if (!scenario) throw new Error(`the demo has no plant ${key}`);
    const { model } = plantModelFromSettings(PlantSettings.parse(scenario.create), scenario.create.arrangement);
    const all = [...days(scenario)].map((day) => day.values);
    const column = (name: string) =>
      all[0]?.[name] && Float64Array.from(all.flatMap((values) => Array.from(values[name] ?? [])));
    const perUnit = (role: string) => model.units.map((_, index) => column(`${role}.${index + 1}`));
    const record: Measurements = {
      n: all.length * DAY,
      stepMinutes: STEP,
      primarySupplyF: column('primarySupplyTemp'),
      primaryReturnF: column('primaryReturnTemp'),
      secondarySupplyF: column('secondarySupplyTemp'),
      secondaryReturnF: column('secondaryReturnTemp'),
      bypassF: column('bypassTemp'),
      primaryFlowGpm: column('primaryFlow'),
      secondaryFlowGpm: column('secondaryFlow'),
      unitStatus: perUnit('unitStatus'),
      unitFlowGpm: perUnit('unitFlow'),
      unitLeavingF: perUnit('unitLeavingTemp'),
      unitEnteringF: [],
      unitPowerKw: [],
      primaryPumpStatus: [],
    };
    const { stretches, suspicions } = inspectSensors(record, model);
    const unusable = stretches.filter((stretch) => stretch.kind !== 'missing');
    expect(unusable).toMatchObject([{ channel, kind: 'stuck' }]);
    expect((((unusable[0]?.toSlot ?? 0) - (unusable[0]?.fromSlot ?? 0)) * STEP) / 60).toBeCloseTo(hours, 9);
    expect(suspicions).toEqual([]);
  });
});
