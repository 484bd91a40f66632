import { afterAll, beforeAll, expect, test } from 'vitest';
import { withTenant } from '@/lib/db/tenant';
import { isDayUnderWay } from '@/lib/queries/day-under-way';
import { setJobScene, type JobScene } from './job-scene';

const DAY = '2026-06-02';
let scene: JobScene;
let runId: string;
const underWay = () =>
  withTenant({ organizationIds: [scene.organizationId] }, (em) =>
    isDayUnderWay(em, { organizationId: scene.organizationId, runId }),
  );

beforeAll(async () => {
  scene = await setJobScene();
  const { rows } = await scene.owner.query<{ id: string }>(
    `insert into alert_run (organization_id, plant_id, day) values ($1, $2, $3) returning id`,
    [scene.organizationId, scene.plantId, DAY],
  );
  runId = rows[0]?.id ?? '';
});
afterAll(() => scene.close());

test('a run waits while its day is being worked out or a file of the plant is being read, and not for ever', async () => {
  const owner = [scene.organizationId, scene.plantId];
  expect(await underWay()).toBe(false);
  await scene.owner.query(
    `insert into stale_day (organization_id, plant_id, day) values ($1, $2, '2026-05-01')`,
    owner,
  );
  expect(await underWay()).toBe(false);
  // A local day is spread over two UTC days.
  await scene.owner.query(
    `insert into stale_day (organization_id, plant_id, day) values ($1, $2, '2026-06-03')`,
    owner,
  );
  expect(await underWay()).toBe(true);
  await scene.owner.query(`delete from stale_day`);
  await scene.owner.query(
    `insert into upload (organization_id, plant_id, filename, status) values ($1, $2, 'a.csv', 'importing')`,
    owner,
  );
  expect(await underWay()).toBe(true);
  await scene.owner.query(`update alert_run set created_at = now() - interval '7 hours'`);
  expect(await underWay()).toBe(false);
});
