import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { WorkerProgram } from '@/jobs/worker-program';
import {
  blocksOf,
  confirmSuggestion,
  enqueueImport,
  receive,
  record,
  setJobScene,
  startWorker,
  until,
  untilStatus,
  uploadState,
  type JobScene,
} from './job-scene';

let scene: JobScene;
let worker: WorkerProgram;

beforeAll(async () => {
  scene = await setJobScene();
  worker = await startWorker(scene);
});
afterAll(async () => {
  await worker.stop();
  await scene.close();
});

const hours = async () =>
  (
    await scene.owner.query<{
      hour_start: Date;
      reverse_minutes: number;
      forward_minutes: number;
      blended_supply_f: number;
    }>(
      `select hour_start, reverse_minutes, forward_minutes, blended_supply_f from hour where plant_id = $1 order by hour_start`,
      [scene.plantId],
    )
  ).rows;

describe('a file on its way to an answer', () => {
  test('waits for a person when its heading is new, and goes straight through the next time', async () => {
    const first = await receive(scene, 'first.csv', record('2026-06-01', 2));
    await untilStatus(scene, first, 'needs-mapping');
    await confirmSuggestion(scene, first);
    const done = await untilStatus(scene, first, 'done', 'failed');
    expect(done).toMatchObject({ status: 'done', rows_read: 2880, samples_stored: 6 * 2880, applied: true });

    const second = await receive(scene, 'second.csv', record('2026-06-03', 1));
    expect((await untilStatus(scene, second, 'done', 'needs-mapping', 'failed')).status).toBe('done');
    expect(await blocksOf(scene)).toMatchObject({ days: 3, values: 6 * 3 * 1440 });
  });

  test('finds the reverse hours where they are, with the blend the balance says', async () => {
    const found = await hours();
    expect(found).toHaveLength(72);
    const [noon, night] = [
      found.find(({ hour_start }) => hour_start.getUTCHours() === 13),
      found.find(({ hour_start }) => hour_start.getUTCHours() === 3),
    ];
    expect(noon).toMatchObject({ reverse_minutes: 60, forward_minutes: 0 });
    // Mixing at the supply tee: (900 * 44 + 300 * 56) / 1200 = 47.0; exact enthalpy differs by less than 0.01 F.
    expect(noon?.blended_supply_f).toBeCloseTo(47, 1);
    expect(night).toMatchObject({ reverse_minutes: 0, forward_minutes: 60 });
    const { rows } = await scene.owner.query<{ day: string; reverse_minutes: number }>(
      `select day::text, reverse_minutes from plant_day where plant_id = $1 and day = '2026-06-02'`,
      [scene.plantId],
    );
    expect(rows).toEqual([{ day: '2026-06-02', reverse_minutes: 360 }]);
  });

  test('a later file wins where both have values, and undo brings the earlier one back', async () => {
    const before = await blocksOf(scene);
    const later = await receive(scene, 'later.csv', record('2026-06-02', 1, 3));
    await untilStatus(scene, later, 'done');
    expect((await blocksOf(scene)).hash).not.toBe(before.hash);

    await scene.owner.query(`update upload set removed_at = now(), applied = false where id = $1`, [later]);
    await enqueueImport(scene, later);
    await until(
      () => blocksOf(scene),
      ({ hash }) => hash === before.hash,
    );
    const { rows } = await scene.owner.query(`select 1 from upload_chunk where upload_id = $1`, [later]);
    expect(rows).toEqual([]);
  });

  test('the same job delivered twice changes nothing', async () => {
    const before = await blocksOf(scene);
    const { rows } = await scene.owner.query<{ id: string }>(`select id from upload where filename = 'first.csv'`);
    await enqueueImport(scene, rows[0]?.id ?? '');
    await enqueueImport(scene, rows[0]?.id ?? '');
    await until(
      async () =>
        (await scene.owner.query(`select 1 from pgboss.job where name = 'import-upload' and state < 'completed'`))
          .rowCount,
      (open) => open === 0,
    );
    expect(await blocksOf(scene)).toEqual(before);
  });
});

describe('a file that cannot be read', () => {
  test('fails with a sentence, and leaves no value behind', async () => {
    const before = await blocksOf(scene);
    const id = await receive(scene, 'no-time.csv', 'CH-1 Supply,CH-1 Return\n' + '44.1,56.2\n'.repeat(50));
    const failed = await untilStatus(scene, id, 'failed');
    expect(failed.applied).toBe(false);
    expect(failed.problems[0]).toMatchObject({ severity: 'error' });
    expect(failed.problems[0]?.message).toMatch(/time/i);
    expect(await blocksOf(scene)).toEqual(before);
  });

  test('goes back to the person when its mapping gives no value at all', async () => {
    const rows = Array.from(
      { length: 40 },
      (_, minute) => `2026-07-01T00:${String(minute).padStart(2, '0')}:00Z,fault,fault`,
    );
    const id = await receive(scene, 'words.csv', ['Timestamp,P Sup T (F),S Ret T (F)', ...rows].join('\n'));
    await untilStatus(scene, id, 'needs-mapping');
    await scene.owner.query(
      `update upload set status = 'received', confirmed = jsonb_build_object('timestamp', preview->'timestamp', 'timeZone', 'UTC', 'remember', false, 'columns',
         '[{"column":"P Sup T (F)","role":"primarySupplyTemp","unit":"degF"},{"column":"S Ret T (F)","role":"secondaryReturnTemp","unit":"degF"}]'::jsonb) where id = $1`,
      [id],
    );
    await enqueueImport(scene, id);
    const state = await until(
      () => uploadState(scene, id),
      ({ status, rows_read }) => status === 'needs-mapping' && rows_read > 0,
    );
    expect(state.problems[0]?.message).toContain('40 rows were read');
  });
});
