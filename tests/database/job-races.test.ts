import { afterAll, beforeAll, expect, test } from 'vitest';
import { computeSlice } from '@/lib/commands/compute-slice';
import { readSlice } from '@/lib/commands/read-slice';
import { writeSlice } from '@/lib/commands/write-slice';
import { settleAnalyses } from '@/lib/commands/finish-analysis';
import { startAnalysis } from '@/lib/commands/start-analysis';
import { takeOutUpload } from '@/lib/commands/apply-upload';
import { PlantEntity, UploadEntity } from '@/entities';
import { withTenant } from '@/lib/db/tenant';
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
  type JobScene,
} from './job-scene';

let scene: JobScene;
let worker: WorkerProgram | null;
let uploadId: string;
const owner = () => ({ organizationId: scene.organizationId, plantId: scene.plantId });
const inTenant = <Result>(work: Parameters<typeof withTenant<Result>>[1]) =>
  withTenant({ organizationIds: [scene.organizationId] }, work);

beforeAll(async () => {
  scene = await setJobScene();
  worker = await startWorker(scene);
  uploadId = await receive(scene, 'days.csv', record('2026-06-01', 2));
  await untilStatus(scene, uploadId, 'needs-mapping');
  await confirmSuggestion(scene, uploadId);
  await untilStatus(scene, uploadId, 'done');
  await worker.stop();
  worker = null;
});
afterAll(async () => {
  await worker?.stop();
  await scene.close();
});

test('a slice read before a newer mark is not written, and the day stays to be done', async () => {
  await inTenant((em) => startAnalysis(em, owner()));
  const input = await readSlice(owner());
  if (!input) throw new Error('no stale day');
  const result = computeSlice(input);
  await inTenant((em) => startAnalysis(em, owner()));
  expect(await inTenant((em) => writeSlice(em, input, result))).toBe(false);
  const { rows } = await scene.owner.query(`select day from stale_day where plant_id = $1`, [scene.plantId]);
  expect(rows.length).toBe(2);

  const again = await readSlice(owner());
  if (!again) throw new Error('no stale day');
  expect(await inTenant((em) => writeSlice(em, again, computeSlice(again)))).toBe(true);
  expect(await inTenant((em) => settleAnalyses(em, owner()))).toBe('done');
});

test('what people said of an episode stays when its hours are worked out again, by two workers at once', async () => {
  const { rows } = await scene.owner.query<{ id: string }>(
    `update episode set acknowledged_at = now(), note = 'valve stuck' where plant_id = $1 returning id`,
    [scene.plantId],
  );
  expect(rows.length).toBeGreaterThan(0);
  await Promise.all([1, 2, 3].map(() => inTenant((em) => settleAnalyses(em, owner()))));
  const after = await scene.owner.query<{ id: string; note: string | null; acknowledged_at: Date | null }>(
    `select id, note, acknowledged_at from episode where plant_id = $1 order by id`,
    [scene.plantId],
  );
  expect(after.rows.map(({ id }) => id)).toEqual(rows.map(({ id }) => id).sort());
  for (const { note, acknowledged_at } of after.rows) {
    expect(note).toBe('valve stuck');
    expect(acknowledged_at).not.toBeNull();
  }
});

test('an upload that counts already is not read again by a retry, and removing it afterwards leaves nothing', async () => {
  // As a worker leaves it that was stopped between counting the upload and deriving its days.
  await scene.owner.query(`update upload set status = 'importing' where id = $1`, [uploadId]);
  const before = await blocksOf(scene);
  await enqueueImport(scene, uploadId);
  worker = await startWorker(scene);
  await untilStatus(scene, uploadId, 'done');
  await worker.stop();
  worker = null;
  expect(await blocksOf(scene)).toEqual(before);

  await scene.owner.query(`update upload set removed_at = now(), applied = false where id = $1`, [uploadId]);
  const [upload, plant] = await inTenant(async (em) => [
    await em.findOneOrFail(UploadEntity, { id: uploadId, organizationId: scene.organizationId }),
    await em.findOneOrFail(PlantEntity, { id: scene.plantId, organizationId: scene.organizationId }),
  ]);
  const hooks = {
    signal: new AbortController().signal,
    fence: () => Promise.resolve(),
    complete: () => Promise.resolve(),
  };
  await takeOutUpload(upload, plant, hooks);
  expect((await blocksOf(scene)).values).toBe(0);
  const { rowCount } = await scene.owner.query(`select 1 from sample_layer where plant_id = $1`, [scene.plantId]);
  expect(rowCount).toBe(0);
});

test('a plant removed while its days are stale ends its analyses, and no job goes round for it', async () => {
  const again = await receive(scene, 'more.csv', record('2026-06-05', 1));
  worker = await startWorker(scene);
  await untilStatus(scene, again, 'done');
  await worker.stop();
  await inTenant((em) => startAnalysis(em, owner()));
  await scene.owner.query(`update plant set deleted_at = now() where id = $1`, [scene.plantId]);
  worker = await startWorker(scene);
  const open = async () => {
    const { rows } = await scene.owner.query<{ jobs: number; stale: number; analyses: number }>(
      `select (select count(*)::integer from pgboss.job where name = 'analyse-plant' and state < 'completed') as jobs,
         (select count(*)::integer from stale_day) as stale,
         (select count(*)::integer from analysis where status in ('queued', 'running')) as analyses`,
    );
    return rows[0];
  };
  await until(open, (seen) => seen?.jobs === 0 && seen.stale === 0 && seen.analyses === 0);
});
