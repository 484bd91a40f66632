import { describe, expect, test } from 'vitest';
import { inspectSensors } from '@/lib/hydronics/sensor-stretches';
import type { Measurements } from '@/lib/hydronics/types';
import { celsiusFromFahrenheit, litresPerSecondFromGpm } from '@/lib/units';
import { plantOf, recordOf } from './support/plants';
import { DAY, loopOf, STEP } from './support/sensed-loop';

const plant = plantOf();

describe('suspicions', () => {
  const suspicions = (record: Measurements, model = plant) => inspectSensors(record, model).suspicions;

  test('name a supply and a return that were exchanged', () => {
    const { loop, record } = loopOf(3);
    [loop.secondarySupplyF, loop.secondaryReturnF] = [loop.secondaryReturnF, loop.secondarySupplyF];
    const [only, ...others] = suspicions(record());
    expect(only).toMatchObject({ kind: 'swapped', channels: ['secondarySupplyF', 'secondaryReturnF'] });
    expect(only?.share).toBeGreaterThan(0.95);
    expect(others).toEqual([]);
  });

  test('name supply sensors on each other’s side of the tee', () => {
    const { loop, record } = loopOf(3);
    // Blended supply well above primary by day, where the record has it warmer by 4 F.
    loop.secondarySupplyF = loop.secondarySupplyF.map((value, slot) => value + (slot % DAY > 144 ? 4 : 0));
    [loop.primarySupplyF, loop.secondarySupplyF] = [loop.secondarySupplyF, loop.primarySupplyF];
    expect(suspicions(record())).toMatchObject([
      {
        kind: 'swapped',
        channels: ['primarySupplyF', 'secondarySupplyF'],
        looksLike: 'sides of the supply tee exchanged',
      },
    ]);
  });

  test('do not take a supply sensor with an offset of 3 F for one on the wrong side', () => {
    const { loop, record } = loopOf(3);
    loop.primarySupplyF = loop.primarySupplyF.map((value) => value + 6);
    expect(suspicions(record())).toEqual([]);
  });

  test('name a temperature that came in degC', () => {
    const { loop, record } = loopOf(3);
    loop.secondaryReturnF = loop.secondaryReturnF.map(celsiusFromFahrenheit);
    expect(suspicions(record())).toContainEqual({
      kind: 'wrong-unit',
      channels: ['secondaryReturnF'],
      looksLike: 'degC read as degF',
      share: 1,
    });
  });

  test('take 25 F for what it is where the plant makes brine of 24 F', () => {
    const { loop, record } = loopOf(3);
    for (const key of ['primarySupplyF', 'primaryReturnF', 'secondarySupplyF', 'secondaryReturnF'] as const) {
      loop[key] = loop[key].map((value) => value - 20);
    }
    const brine = { ...plant, productionSupplyF: 24, fluid: { kind: 'ethylene-glycol', massPercent: 30 } } as const;
    expect(suspicions(record(), brine)).toEqual([]);
  });

  test.each(['primaryFlowGpm', 'secondaryFlowGpm'] as const)('name %s that came in L/s', (channel) => {
    const { loop, record } = loopOf(3);
    loop[channel] = loop[channel].map(litresPerSecondFromGpm);
    expect(suspicions(record())).toMatchObject([
      { kind: 'wrong-unit', channels: [channel], looksLike: 'L/s read as gpm' },
    ]);
  });

  test('name a constant-speed primary flow that came in m3/h', () => {
    const { loop, record } = loopOf(3);
    loop.primaryFlowGpm = loop.primaryFlowGpm.map((value) => litresPerSecondFromGpm(value) * 3.6);
    expect(suspicions(record())).toMatchObject([{ channels: ['primaryFlowGpm'], looksLike: 'm3/h read as gpm' }]);
  });

  test('say nothing of a distribution flow at a quarter of design: that may be a mild season', () => {
    const { loop, record } = loopOf(3);
    loop.secondaryFlowGpm = loop.secondaryFlowGpm.map((value) => value / 4);
    expect(suspicions(record())).toEqual([]);
  });

  test('need four running hours', () => {
    const { loop } = loopOf(1);
    const short = recordOf(40, STEP, {
      primarySupplyF: loop.primaryReturnF.slice(0, 40),
      primaryReturnF: loop.primarySupplyF.slice(0, 40),
    });
    expect(suspicions(short)).toEqual([]);
  });
});
