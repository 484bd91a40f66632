import { describe, expect, test } from 'vitest';
import { normal } from '@/fixtures/demo/noise';
import type { SensorStretch } from '@/lib/hydronics/calibration-types';
import { inspectSensors, withoutStretches } from '@/lib/hydronics/sensor-stretches';
import type { Measurements } from '@/lib/hydronics/types';
import { plantOf, recordOf } from './support/plants';
import { DAY, loopOf, STEP } from './support/sensed-loop';
import type { Loop } from './support/sensed-loop';

const plant = plantOf();
const found = (record: Measurements, kind: SensorStretch['kind'], model = plant) =>
  inspectSensors(record, model).stretches.filter((stretch) => stretch.kind === kind);
const hold = (values: number[], from: number, to: number) => values.fill(values[from] ?? Number.NaN, from, to);
const slots = (stretches: readonly SensorStretch[]) => stretches.map(({ fromSlot, toSlot }) => [fromSlot, toSlot]);

test('a sound record has nothing to report', () => {
  expect(inspectSensors(loopOf(3).record(), plant)).toEqual({ stretches: [], suspicions: [] });
});

describe('a stuck sensor', () => {
  test.each(['primarySupplyF', 'primaryReturnF', 'secondarySupplyF', 'secondaryReturnF', 'secondaryFlowGpm'] as const)(
    '%s is found from three hours on one value while the plant runs',
    (channel) => {
      const { loop, record } = loopOf(3);
      hold(loop[channel], 400, 436);
      const stuck = found(record(), 'stuck');
      expect(stuck).toEqual([{ channel, unitIndex: 0, kind: 'stuck', fromSlot: 400, toSlot: 436 }]);
    },
  );

  test('is not one that held a value for an hour and a half', () => {
    const { loop, record } = loopOf(3);
    hold(loop.secondaryReturnF, 400, 418);
    expect(found(record(), 'stuck')).toEqual([]);
  });

  test('is found through all of four days, also where half a day around shows nothing but its one value', () => {
    const { loop, record } = loopOf(6);
    hold(loop.secondaryReturnF, 300, 300 + 4 * DAY);
    expect(slots(found(record(), 'stuck'))).toEqual([[300, 300 + 4 * DAY]]);
  });

  test('is one stretch although single values are missing in it', () => {
    const { loop, record } = loopOf(3);
    hold(loop.primaryReturnF, 400, 450);
    for (const slot of [410, 411, 433]) loop.primaryReturnF[slot] = Number.NaN;
    expect(slots(found(record(), 'stuck'))).toEqual([[400, 450]]);
  });

  test('is none while the plant is off', () => {
    const { loop, record } = loopOf(3, { dutyHours: [7, 19] });
    hold(loop.primarySupplyF, DAY + 19 * 12 + 3, 2 * DAY + 6 * 12);
    expect(found(record(), 'stuck')).toEqual([]);
  });

  test('is none when the whole record repeats its values: then the logger stood still', () => {
    const { loop, record } = loopOf(3);
    for (const values of Object.values(loop)) hold(values, 400, 436);
    expect(found(record(), 'stuck')).toEqual([]);
  });

  test.each([0.5, 1])('is none in a log of whole steps of %f F that often stands for hours', (resolutionF) => {
    const { record } = loopOf(7, { resolutionF });
    expect(found(record(), 'stuck')).toEqual([]);
  });

  test('is none in a log by change of value with an increment of 0.6 F and many decimals', () => {
    const { loop, record } = loopOf(7);
    for (const channel of ['primarySupplyF', 'secondarySupplyF'] as const) {
      const values = loop[channel];
      for (let slot = 1; slot < values.length; slot += 1) {
        const before = values[slot - 1] ?? 0;
        if (Math.abs((values[slot] ?? 0) - before) < 0.6) values[slot] = before;
      }
    }
    expect(found(record(), 'stuck')).toEqual([]);
  });

  test('is a coarse one, too, when the plant went off and on again meanwhile', () => {
    const { loop, record } = loopOf(4, { resolutionF: 1, dutyHours: [6, 20] });
    hold(loop.secondarySupplyF, DAY + 100, 2 * DAY + 200);
    const stuck = found(record(), 'stuck');
    expect(stuck.map((stretch) => stretch.channel)).toEqual(['secondarySupplyF']);
    expect((stuck[0]?.toSlot ?? 0) - (stuck[0]?.fromSlot ?? 0)).toBeGreaterThan(200);
  });

  test('is no bypass meter at zero: below its cut-off it shows nothing else', () => {
    const { n, loop, record } = loopOf(3);
    const bypass = loop.primaryFlowGpm.map((primary, slot) =>
      Math.max(0, primary - (loop.secondaryFlowGpm[slot] ?? 0)),
    );
    bypass.fill(0, 400, 500);
    const measured = { ...record(), bypassFlowGpm: Float64Array.from(bypass) };
    expect(measured.bypassFlowGpm).toHaveLength(n);
    expect(found(measured, 'stuck')).toEqual([]);
  });

  test('is a main that shows no flow while the units run and heat is carried', () => {
    const { loop, record } = loopOf(3);
    loop.secondaryFlowGpm.fill(0, 400, 440);
    expect(found(record(), 'stuck')).toMatchObject([{ channel: 'secondaryFlowGpm', fromSlot: 400, toSlot: 440 }]);
  });

  test('is judged by its unit where it belongs to one', () => {
    const { n, record } = loopOf(3);
    const leaving = Float64Array.from({ length: n }, (_, slot) => 44 + 0.1 * normal(9, slot));
    leaving.fill(44.31, DAY + 120, DAY + 180);
    const measured: Measurements = { ...record(), unitLeavingF: [undefined, leaving] };
    expect(found(measured, 'stuck')).toMatchObject([
      { channel: 'unitLeavingF', unitIndex: 2, fromSlot: DAY + 120, toSlot: DAY + 180 },
    ]);
    // The same at night, when the second unit rests and its pipe stands.
    leaving.fill(44.2, 2 * DAY + 12, 2 * DAY + 72).fill(44.25, DAY + 120, DAY + 121);
    expect(found(measured, 'stuck')).toHaveLength(1);
  });
});

test('the answer for a day is the same from the day with its neighbours as from the whole record', () => {
  const { n, loop, record } = loopOf(9);
  hold(loop.secondaryReturnF, DAY + 100, 5 * DAY + 20);
  hold(loop.primarySupplyF, 3 * DAY - 20, 3 * DAY + 30);
  hold(loop.primaryReturnF, 6 * DAY + 70, 6 * DAY + 110);
  loop.secondarySupplyF[4 * DAY] = 80;
  loop.secondarySupplyF[5 * DAY + 7] = 20;
  const whole = record();
  const usable = (cleaned: Measurements, channel: keyof Loop, from: number) =>
    Array.from(cleaned[channel]?.subarray(from, from + DAY) ?? [], (value) => !Number.isNaN(value));
  const all = withoutStretches(whole, inspectSensors(whole, plant).stretches);
  for (let day = 1; day * DAY < n - DAY; day += 1) {
    const from = (day - 1) * DAY;
    const slice = (values: Float64Array | undefined) => values?.subarray(from, from + 3 * DAY);
    const near: Measurements = { ...whole, n: 3 * DAY, unitStatus: whole.unitStatus.map(slice) };
    for (const channel of Object.keys(loop) as (keyof Loop)[])
      Object.assign(near, { [channel]: slice(whole[channel]) });
    const cleaned = withoutStretches(near, inspectSensors(near, plant).stretches);
    for (const channel of Object.keys(loop) as (keyof Loop)[]) {
      expect([day, channel, usable(cleaned, channel, DAY)]).toEqual([day, channel, usable(all, channel, day * DAY)]);
    }
  }
});

describe('readings that cannot be', () => {
  test.each([
    ['colder than the fluid freezes by 2 F', 'primarySupplyF', 29.9],
    ['above 110 F', 'secondaryReturnF', 110.1],
    ['a flow below zero by more than a zero error', 'primaryFlowGpm', -100],
    ['a flow of three times design', 'secondaryFlowGpm', 5400],
    ['not finite', 'primaryReturnF', Infinity],
  ] as const)('%s are out of range', (_, channel, value) => {
    const { loop, record } = loopOf(1);
    loop[channel].fill(value, 100, 103);
    expect(found(record(), 'out-of-range')).toEqual([
      { channel, unitIndex: 0, kind: 'out-of-range', fromSlot: 100, toSlot: 103 },
    ]);
  });

  test('are told by the fluid: 27 F is a reading of 30 % propylene glycol', () => {
    const { loop, record } = loopOf(1);
    loop.primarySupplyF.fill(27, 100, 103);
    const brine = { ...plant, fluid: { kind: 'propylene-glycol', massPercent: 30 } } as const;
    expect(found(record(), 'out-of-range', brine)).toEqual([]);
    expect(found(record(), 'out-of-range')).toHaveLength(1);
  });

  test('are none where a meter reads a little below zero at rest', () => {
    const { loop, record } = loopOf(1, { dutyHours: [6, 20] });
    loop.primaryFlowGpm.fill(-20, 0, 60);
    expect(found(record(), 'out-of-range')).toEqual([]);
  });
});

describe('missing values', () => {
  test('are shown from an hour on', () => {
    const { loop, record } = loopOf(1);
    loop.primarySupplyF.fill(Number.NaN, 50, 62);
    loop.primarySupplyF.fill(Number.NaN, 100, 111);
    expect(slots(found(record(), 'missing'))).toEqual([[50, 62]]);
  });

  test('of a point that says nothing at all are one stretch', () => {
    const { n, loop, record } = loopOf(1);
    loop.primarySupplyF.fill(Number.NaN);
    expect(slots(found(record(), 'missing'))).toEqual([[0, n]]);
  });
});

describe('a spike', () => {
  test.each([
    ['a single slot', [100]],
    ['a double slot', [100, 101]],
  ])('is %s far from both sides', (_, at) => {
    const { loop, record } = loopOf(1);
    for (const slot of at) loop.secondarySupplyF[slot] = 60;
    expect(found(record(), 'spike')).toEqual([
      { channel: 'secondarySupplyF', unitIndex: 0, kind: 'spike', fromSlot: 100, toSlot: 100 + at.length },
    ]);
  });

  test('is found in a flow', () => {
    const { loop, record } = loopOf(1);
    loop.primaryFlowGpm[100] = 2900;
    expect(slots(found(record(), 'spike'))).toEqual([[100, 101]]);
  });

  test('is none when it does not come back', () => {
    const { loop, record } = loopOf(1);
    for (let slot = 100; slot < 288; slot += 1) loop.secondarySupplyF[slot] = (loop.secondarySupplyF[slot] ?? 0) + 8;
    expect(found(record(), 'spike')).toEqual([]);
  });

  test('is none when another sensor moves as well: then the plant did it', () => {
    const { loop, record } = loopOf(1);
    loop.secondarySupplyF[60] = 52;
    loop.primarySupplyF[60] = 50;
    expect(found(record(), 'spike')).toEqual([]);
  });

  test('is none when a unit comes or goes beside it', () => {
    const { loop, record } = loopOf(1);
    loop.primarySupplyF[8 * 12 + 1] = 52;
    expect(found(record(), 'spike')).toEqual([]);
  });

  test('is none beside a missing value', () => {
    const { loop, record } = loopOf(1);
    loop.secondarySupplyF[100] = 60;
    loop.secondarySupplyF[101] = Number.NaN;
    expect(found(record(), 'spike')).toEqual([]);
  });

  test('is none in the common pipe as long as it stays among the streams that it may carry', () => {
    const { n, record } = loopOf(1);
    const bypass = Float64Array.from({ length: n }, (_, slot) => 44 + 0.1 * normal(8, slot));
    bypass[60] = 54;
    expect(found({ ...record(), bypassF: bypass }, 'spike')).toEqual([]);
    bypass[60] = 80;
    expect(found({ ...record(), bypassF: bypass }, 'spike')).toHaveLength(1);
  });
});

describe('withoutStretches', () => {
  test('takes out what must not be used, keeps what is only missing, and leaves the record as it was', () => {
    const { n, loop, record } = loopOf(1);
    loop.primarySupplyF.fill(200, 100, 103);
    loop.primaryReturnF.fill(Number.NaN, 10, 40);
    const flow = Float64Array.from({ length: n }, (_, slot) => 900 + 9 * normal(7, slot));
    const high = flow.slice().fill(9000, 5, 6);
    const before: Measurements = { ...record(), unitFlowGpm: [flow, high] };
    const after = withoutStretches(before, inspectSensors(before, plant).stretches);
    expect(Array.from(after.primarySupplyF?.subarray(99, 104) ?? []).map(Number.isNaN)).toEqual([
      false,
      true,
      true,
      true,
      false,
    ]);
    expect(before.primarySupplyF?.[100]).toBe(200);
    expect(after.primaryReturnF).toBe(before.primaryReturnF);
    expect(after.unitFlowGpm[0]).toBe(flow);
    expect(after.unitFlowGpm[1]?.[5]).toBeNaN();
    expect(after.unitFlowGpm[1]?.[6]).toBe(flow[6]);
  });

  test('is the record itself when nothing is to be taken out', () => {
    const record = loopOf(1).record();
    expect(withoutStretches(record, [])).toBe(record);
  });
});

test('a record without any loop sensor, or without any interval, has nothing to report', () => {
  expect(inspectSensors(recordOf(0, STEP, {}), plant)).toEqual({ stretches: [], suspicions: [] });
  expect(inspectSensors(recordOf(500, STEP, { outdoorF: 70 }), plant)).toEqual({ stretches: [], suspicions: [] });
});

test('a channel of another length than the record is refused', () => {
  const record = { ...recordOf(10, STEP, {}), primarySupplyF: new Float64Array(9) };
  expect(() => inspectSensors(record, plant)).toThrow('primarySupplyF has length 9, the record 10');
});
