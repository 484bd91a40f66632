import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as live } from '@/app/api/v1/health/live/route';
import { GET as ready } from '@/app/api/v1/health/ready/route';
import { GET as readMe } from '@/app/api/v1/me/route';
import { GET as openApi } from '@/app/api/v1/openapi.json/route';
import { closeOrm, configureOrm } from '@/lib/db/orm';
import { ask, startTestApi, type TestApi } from '../support/api';

let api: TestApi;
beforeAll(async () => {
  api = await startTestApi();
});
afterAll(() => api.close());

const state = async () => {
  const response = await ask(ready, 'GET');
  return { code: response.status, ...((await response.json()) as object) };
};

describe('readiness', () => {
  it('is 503 without a worker, and says that it is the worker that is missing', async () => {
    expect(await state()).toEqual({
      code: 503,
      status: 'not-ready',
      database: 'ok',
      migrations: 'current',
      worker: 'absent',
    });
  });
  it('is 200 with a worker seen in the last minute, and not with one seen before', async () => {
    await api.owner.query(`insert into worker_heartbeat (worker_id) values ('w')`);
    expect(await state()).toMatchObject({ code: 200, status: 'ready', worker: 'ok' });
    await api.owner.query(`update worker_heartbeat set seen_at = now() - interval '61 seconds'`);
    expect(await state()).toMatchObject({ code: 503, worker: 'absent' });
  });
  it('is 503 when a migration is missing', async () => {
    await api.owner.query(`update worker_heartbeat set seen_at = now()`);
    const gone = await api.owner.query<{ name: string }>(
      `delete from mikro_orm_migrations where id = (select max(id) from mikro_orm_migrations) returning name`,
    );
    expect(await state()).toMatchObject({ code: 503, migrations: 'pending', worker: 'ok' });
    await api.owner.query(`insert into mikro_orm_migrations (name, executed_at) values ($1, now())`, [
      gone.rows[0]?.name,
    ]);
  });
});

describe('a database that does not answer', () => {
  it('is 503 for readiness and for requests, in words that tell nothing of the inside', async () => {
    await closeOrm();
    configureOrm('postgresql://slackwater_app@127.0.0.1:1/nowhere');
    try {
      expect(await state()).toMatchObject({ code: 503, database: 'absent' });
      expect((await ask(live, 'GET')).status).toBe(200);
      const response = await ask(readMe, 'GET', { token: 'any' });
      expect(response.status).toBe(503);
      expect(response.headers.get('retry-after')).toBe('5');
      expect(await response.text()).not.toMatch(/ECONNREFUSED|127\.0\.0\.1|postgres/i);
    } finally {
      await closeOrm();
      configureOrm(api.appUrl);
    }
  });
});

describe('the OpenAPI document', () => {
  it('is served to anyone', async () => {
    const response = await ask(openApi, 'GET');
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({ openapi: '3.1.0', info: { version: '1' } });
  });
});
