import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getAnalysis } from '@/app/api/v1/plants/[plantId]/analyses/[analysisId]/route';
import { POST as postAnalysis } from '@/app/api/v1/plants/[plantId]/analyses/route';
import { ask } from '../support/api';
import { DAYS, insertPoint, problemOf, setScene, writeSamples, type Scene } from './data-scene';

let scene: Scene;
beforeAll(async () => {
  scene = await setScene();
  const pointId = await insertPoint(scene, 'primarySupplyTemp');
  await writeSamples(
    scene,
    DAYS.map((day) => ({ pointId, day, value: () => 44 })),
  );
});
afterAll(() => scene.api.close());

const start = (json: object, cookie = scene.engineer.cookie, headers: Record<string, string> = {}) =>
  ask(postAnalysis, 'POST', { params: { plantId: scene.plantId }, json, cookie, headers });
async function staleDays(): Promise<string[]> {
  const { rows } = await scene.api.owner.query<{ day: string }>(`select day::text from stale_day order by day`);
  await scene.api.owner.query(`delete from stale_day`);
  return rows.map((row) => row.day);
}

describe('an analysis', () => {
  it('of everything marks every day with samples and can be watched', async () => {
    const response = await start({});
    expect(response.status).toBe(202);
    const { id } = (await response.json()) as { id: string };
    expect(await staleDays()).toEqual([...DAYS]);
    const seen = await ask(getAnalysis, 'GET', {
      params: { plantId: scene.plantId, analysisId: id },
      cookie: scene.operator.cookie,
    });
    expect(await seen.json()).toMatchObject({
      id,
      status: 'queued',
      progress: 0,
      from: '2026-10-31',
      to: '2026-11-02',
      settingsRevision: 1,
      failure: null,
      finishedAt: null,
    });
  });

  it('of a local day marks the UTC days that hold it, and no others', async () => {
    // Sunday of the clock change, in Denver: from 06:00Z on the 1st to 07:00Z on the 2nd.
    await start({ from: '2026-11-01', to: '2026-11-02' });
    expect(await staleDays()).toEqual(['2026-11-01', '2026-11-02']);
    await start({ from: '2026-10-31T00:00:00Z', to: '2026-11-01T00:00:00Z' });
    expect(await staleDays()).toEqual(['2026-10-31']);
  });

  it('of a period that ends before it begins is a 400', async () => {
    expect(await problemOf(await start({ from: '2026-11-02', to: '2026-11-01' }))).toMatchObject({
      status: 400,
      paths: ['from'],
    });
    expect(await staleDays()).toEqual([]);
  });

  it('is started once for one Idempotency-Key', async () => {
    const answers = [
      await start({}, undefined, { 'idempotency-key': 'k' }),
      await start({}, undefined, { 'idempotency-key': 'k' }),
    ];
    const [first, second] = await Promise.all(answers.map((each) => each.json() as Promise<{ id: string }>));
    expect(second).toEqual(first);
  });

  it('is not the operator’s to start', async () => {
    expect((await start({}, scene.operator.cookie)).status).toBe(403);
  });

  it('of another plant is not found under this one', async () => {
    const analysisId = '00000000-0000-4000-8000-000000000000';
    const response = await ask(getAnalysis, 'GET', {
      params: { plantId: scene.plantId, analysisId },
      cookie: scene.engineer.cookie,
    });
    expect(response.status).toBe(404);
  });
});
