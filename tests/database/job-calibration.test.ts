import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readSlice } from '@/lib/commands/read-slice';
import { startAnalysis } from '@/lib/commands/start-analysis';
import { CalibrationScene, differences, type ScenePlant } from './calibration-scene';

let scene: CalibrationScene;
beforeAll(async () => {
  scene = await CalibrationScene.set();
});
afterAll(() => scene.close());

const only = <Value>(values: readonly Value[]): Value => {
  const [value] = values;
  if (value === undefined || values.length !== 1) throw new Error(`expected one, got ${values.length}`);
  return value;
};
const addCheck = (plant: ScenePlant, check: { at: string; shown: number | null; reading?: number }) =>
  scene.inTenant(async (em) => {
    await scene.owner.query(
      `insert into spot_check (organization_id, plant_id, at, role, reading, shown, sigma)
       values ($1, $2, $3, 'secondarySupplyTemp', $4, $5, 0.05)`,
      [scene.organizationId, plant.plantId, check.at, check.reading ?? 44, check.shown],
    );
    await startAnalysis(em, plant.ids);
  });

describe('the calibration of a month', () => {
  it('and every result after it are the same whatever the order in which the files came', async () => {
    const nightly = await scene.plant();
    for (const day of [28, 29, 30]) {
      await nightly.store(`2026-06-${day}`);
      await nightly.analyse();
    }
    for (let day = 1; day <= 12; day += 1) {
      await nightly.store(`2026-07-${String(day).padStart(2, '0')}`);
      await nightly.analyse();
    }
    const atOnce = await scene.plant();
    await atOnce.store('2026-06-28', '2026-07-12');
    await atOnce.analyse();
    const backwards = await scene.plant();
    await backwards.store('2026-07-08', '2026-07-12');
    await backwards.analyse();
    await backwards.store('2026-07-02', '2026-07-07', 3);
    await backwards.store('2026-06-29', '2026-07-01');
    await backwards.analyse();
    await backwards.store('2026-07-02', '2026-07-07');
    await backwards.store('2026-06-28');
    await backwards.analyse();
    const expected = await atOnce.answer();
    expect(expected.numbers.size).toBeGreaterThan(10_000);
    expect(differences(await nightly.answer(), expected)).toEqual([]);
    expect(differences(await backwards.answer(), expected)).toEqual([]);
  });

  it('is left alone, with every other day, by a nightly file that does not reach the next step', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-10');
    expect(only(await plant.analyse()).kind).toBe('to-fit');
    const before = await plant.calibrations();
    await plant.store('2026-07-11');
    expect(await plant.analyse()).toEqual([{ days: ['2026-07-10', '2026-07-11'], kind: 'in-force' }]);
    expect(await plant.calibrations()).toEqual(before);
    expect(new Set(Object.values(await plant.named()))).toEqual(new Set([only(before).id]));
  });

  it('is fitted again at the next step, and the whole month rests on it', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-13');
    await plant.analyse();
    const before = only(await plant.calibrations());
    await plant.store('2026-07-14');
    const slice = only(await plant.analyse());
    expect([slice.kind, slice.days.length]).toEqual(['to-fit', 14]);
    const after = only(await plant.calibrations());
    expect(after.hash).not.toBe(before.hash);
    expect(new Set(Object.values(await plant.named()))).toEqual(new Set([after.id]));
  });

  it('is fitted again when one of its days is edited, and is its own self again when that is taken back', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-12');
    await plant.analyse();
    const before = only(await plant.calibrations());
    await plant.store('2026-07-04', '2026-07-04', 2);
    expect(only(await plant.analyse()).days).toHaveLength(12);
    const edited = only(await plant.calibrations());
    expect(edited.hash).not.toBe(before.hash);
    expect(new Set(Object.values(await plant.named()))).toEqual(new Set([edited.id]));
    await plant.store('2026-07-04');
    await plant.analyse();
    expect(only(await plant.calibrations())).toEqual({ ...before, id: expect.any(Number) as number });
  });

  it('is not touched by an edit of a day it was not fitted on', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-12');
    await plant.analyse();
    const before = await plant.calibrations();
    await plant.store('2026-07-12', '2026-07-12', 2);
    expect(only(await plant.analyse())).toEqual({ days: ['2026-07-11', '2026-07-12'], kind: 'in-force' });
    expect(await plant.calibrations()).toEqual(before);
  });

  it('filled up from the month before is fitted again when that changes, once, and no farther', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-20', '2026-08-02');
    await plant.analyse();
    const [july, august] = await plant.calibrations();
    await plant.store('2026-07-30', '2026-07-30', 2);
    const slices = await plant.analyse();
    expect(slices.map((slice) => [slice.kind, slice.days[0], slice.days.length])).toEqual([
      ['in-force', '2026-07-29', 3],
      ['to-fit', '2026-08-01', 2],
    ]);
    const after = await plant.calibrations();
    expect(after.map(({ month }) => month)).toEqual(['2026-07', '2026-08']);
    // July rests on its first ten days; the 30th is not among them, and still August's fit reaches it.
    expect(after[1]?.hash).not.toBe(august?.hash);
    expect(after[0]?.hash).toBe(july?.hash);
  });

  it('goes with the last of its samples', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-02');
    await plant.analyse();
    await scene.owner.query(`delete from sample_block where plant_id = $1`, [plant.plantId]);
    await scene.owner.query(
      `insert into stale_day (organization_id, plant_id, day) select $1, $2, d from unnest('{2026-07-01,2026-07-02}'::date[]) d`,
      [scene.organizationId, plant.plantId],
    );
    expect(only(await plant.analyse()).kind).toBe('none');
    expect(await plant.calibrations()).toEqual([]);
    expect(await plant.named()).toEqual({});
  });
});

describe('a slice', () => {
  it('never reaches over the end of a month', async () => {
    const plant = await scene.plant();
    await plant.store('2026-06-25', '2026-09-03');
    const slices = await plant.analyse();
    expect(slices.map(({ days }) => [days[0], days.at(-1)])).toEqual([
      ['2026-06-25', '2026-06-30'],
      ['2026-07-01', '2026-07-31'],
      ['2026-08-01', '2026-08-31'],
      ['2026-09-01', '2026-09-03'],
    ]);
  });

  it('that fits a month again is not written when a day without a mark of its own got one meanwhile', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-12');
    await plant.analyse();
    await plant.store('2026-07-02', '2026-07-02', 1);
    const early = await readSlice(plant.ids);
    if (!early) throw new Error('nothing is stale');
    expect(early.days).toHaveLength(12);
    expect(early.marks.has('2026-07-09')).toBe(false);
    await plant.store('2026-07-09', '2026-07-09', 1);
    expect(await plant.write(early)).toBe(false);
    await plant.analyse();
    const expected = await scene.plant();
    await expected.store('2026-07-01', '2026-07-12');
    await expected.store('2026-07-02', '2026-07-02', 1);
    await expected.store('2026-07-09', '2026-07-09', 1);
    await expected.analyse();
    expect(differences(await plant.answer(), await expected.answer())).toEqual([]);
  });

  it('read by two workers is written by one of them, with one calibration', async () => {
    const plant = await scene.plant();
    await plant.store('2026-07-01', '2026-07-08');
    const [one, other] = [await readSlice(plant.ids), await readSlice(plant.ids)];
    if (!one || !other) throw new Error('nothing is stale');
    const written = await Promise.all([plant.write(one), plant.write(other)]);
    expect(written.filter(Boolean)).toHaveLength(1);
    expect(await plant.calibrations()).toHaveLength(1);
    await plant.analyse();
  });
});

describe('a spot check', () => {
  it('has every month fitted again, and again when it is gone', async () => {
    const plant = await scene.plant();
    await plant.store('2026-06-20', '2026-07-10');
    await plant.analyse();
    const before = await plant.calibrations();
    await addCheck(plant, { at: '2026-07-03T10:07:00Z', shown: 44.6 });
    await plant.analyse();
    const checked = await plant.calibrations();
    expect(checked.map(({ hash }) => hash)).not.toEqual(before.map(({ hash }) => hash));
    expect(checked[1]?.detail).not.toEqual(before[1]?.detail);
    await scene.owner.query(`delete from spot_check where plant_id = $1`, [plant.plantId]);
    await scene.inTenant((em) => startAnalysis(em, plant.ids));
    await plant.analyse();
    const after = await plant.calibrations();
    expect(after.map(({ hash, detail }) => [hash, detail])).toEqual(before.map(({ hash, detail }) => [hash, detail]));
  });

  it('whose record comes a night later reaches the months before it too', async () => {
    const late = await scene.plant();
    await late.store('2026-06-20', '2026-07-04');
    await late.analyse();
    await addCheck(late, { at: '2026-07-05T03:00:00Z', shown: null });
    await late.analyse();
    const [june] = await late.calibrations();
    await late.store('2026-07-05');
    const slices = await late.analyse();
    expect(slices.map((slice) => slice.days[0])).toContain('2026-06-20');
    const [again] = await late.calibrations();
    expect(again?.hash).not.toBe(june?.hash);

    const atOnce = await scene.plant();
    await atOnce.store('2026-06-20', '2026-07-05');
    await addCheck(atOnce, { at: '2026-07-05T03:00:00Z', shown: null });
    await atOnce.analyse();
    expect(differences(await late.answer(), await atOnce.answer())).toEqual([]);
    const { rows } = await scene.owner.query<{ recorded: number }>(
      `select recorded from spot_check where plant_id = any ($1::uuid[])`,
      [[late.plantId, atOnce.plantId]],
    );
    expect(rows[0]?.recorded).toBeCloseTo(44.6, 0);
    expect(rows[1]?.recorded).toBe(rows[0]?.recorded);
  });
});
