import { once } from 'node:events';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import {
  blocksOf,
  confirmSuggestion,
  receive,
  record,
  setJobScene,
  spawnWorker,
  startWorker,
  until,
  untilStatus,
  uploadState,
  type JobScene,
} from './job-scene';

const DAYS = 150;
let scene: JobScene;
let calm: JobScene;

beforeAll(async () => {
  scene = await setJobScene();
});
afterAll(async () => {
  await scene.close();
  await calm.close();
});

test(
  'a worker killed in the middle of an import is replaced, and the record is that of an undisturbed one',
  { timeout: 240_000 },
  async () => {
    const text = record('2025-09-01', DAYS);
    const id = await receive(scene, 'long.csv', text);
    const doomed = spawnWorker(scene);
    try {
      await untilStatus(scene, id, 'needs-mapping');
      await confirmSuggestion(scene, id);
      // Killed once some rows are stored and more are to come: no handler of the process runs.
      await until(
        () => uploadState(scene, id),
        ({ rows_read }) => rows_read > 10_000,
      );
    } finally {
      const gone = once(doomed, 'exit');
      doomed.kill('SIGKILL');
      await gone;
    }
    const cut = await uploadState(scene, id);
    expect(cut).toMatchObject({ status: 'importing', applied: false });
    expect(cut.rows_read).toBeLessThan(DAYS * 1440);
    expect((await blocksOf(scene)).values).toBe(0);

    // The half minute until the dead worker's job expires, spent here at once.
    await scene.owner.query(
      `update pgboss.job set started_on = started_on - interval '1 minute' where name = 'import-upload' and state = 'active'`,
    );
    const successor = await startWorker(scene);
    try {
      expect(
        await until(
          () => uploadState(scene, id),
          ({ status }) => status === 'done' || status === 'failed',
          150_000,
        ),
      ).toMatchObject({
        status: 'done',
        rows_read: DAYS * 1440,
        samples_stored: 6 * DAYS * 1440,
      });
      const { rows } = await scene.owner.query<{ retry_count: number }>(
        `select retry_count from pgboss.job where name = 'import-upload' and data->>'uploadId' = $1 order by created_on desc limit 1`,
        [id],
      );
      expect(rows[0]?.retry_count).toBe(1);
    } finally {
      await successor.stop();
    }
    const disturbed = await blocksOf(scene);

    await closeOrm();
    calm = await setJobScene();
    configureOrm(calm.workerUrl);
    const worker = await startWorker(calm);
    try {
      const again = await receive(calm, 'long.csv', text);
      await untilStatus(calm, again, 'needs-mapping');
      await confirmSuggestion(calm, again);
      await until(
        () => uploadState(calm, again),
        ({ status }) => status === 'done',
        150_000,
      );
      expect(await blocksOf(calm)).toEqual(disturbed);
    } finally {
      await worker.stop();
    }
  },
);
